"""Substances by what people call them: those of the register, then the usual ones of plating, then new ones."""

import re
from collections import defaultdict

from chemicals.process.importing.values import CellError
from chemicals.register.checks import check_substance
from chemicals.register.models import Substance
from chemicals.register.selectors import list_substances_for, solute_code
from chemicals.science.formula import FormulaError, parse_formula
from chemicals.science.substances import list_starters
from chemicals.workshop.models import Membership
from chemicals.workshop.texts import searchable, tidy

_CAS = re.compile(r"\d{2,7}-\d\d-\d")


class Substances:
    """Finds what a name, a CAS or EC number or a formula means; ``fresh`` are those that a file brings. One query."""

    def __init__(self, member: Membership) -> None:
        self.member = member
        self.fresh: dict[str, Substance] = {}
        """By their name, folded; not written yet."""
        self.remarks: dict[str, str] = {}
        """What is to be said of a fresh one, by its name."""
        self._known = _Index()
        for row in list_substances_for(member):
            self._known.add(row)
        self._usual = _Index()
        for each in list_starters():
            row = Substance(workshop=member.workshop, name=each.name, cas_number=each.cas_number, formula=each.formula)
            row.synonyms = list(each.synonyms)
            self._usual.add(row)

    def is_known(self, text: str) -> bool:
        """Say whether this names something, here or among the usual ones."""
        return bool(self._known.find(text) or self._usual.find(text))

    def find(self, text: str) -> Substance:
        """Return what a text of a composition means, a new substance if need be. Raises CellError."""
        found = self.seek(text)
        if found is not None:
            return found
        if _CAS.fullmatch(text):
            raise CellError(f"No substance here has the CAS number {text}. Write its name, or add the substance first.")
        return self.make(text, formula=_formula_of(text))

    def seek(self, text: str) -> Substance | None:
        """Return what is known by a text; a usual substance is taken over. Raises CellError if it is two things."""
        found = _one(text, self._known.find(text))
        usual = None if found else _one(text, self._usual.find(text))
        if usual is None:
            return found
        same = self._known.find(usual.cas_number) if usual.cas_number else []
        return same[0] if len(same) == 1 else self._take(usual)

    def make(self, name: str, *, cas_number: str = "", ec_number: str = "", formula: str = "") -> Substance:
        """Return a new substance. Raises CellError with everything that is wrong with it."""
        row = Substance(workshop=self.member.workshop, name=tidy(name), formula=formula)
        errors = check_substance(row, cas_number, ec_number, ())
        if errors:
            raise CellError(" ".join(dict.fromkeys(error.message for error in errors)))
        without = "" if formula else " It has no formula, so its metal is not known."
        near = self._known.find_alike(row.name)
        like = f' "{near.name}" is here already: is it the same?' if near else ""
        self.remarks[row.name] = f'"{row.name}" is a new substance.{without}{like}'
        return self._take(row)

    def _take(self, row: Substance) -> Substance:
        self.fresh[row.name.casefold()] = row
        self._known.add(row)
        return row


class _Index:
    """Rows by every name that they have."""

    def __init__(self) -> None:
        self._alike: dict[str, Substance] = {}
        self._names: dict[str, list[Substance]] = defaultdict(list)
        self._others: dict[str, list[Substance]] = defaultdict(list)

    def add(self, row: Substance) -> None:
        self._alike.setdefault(_sound(row.name), row)
        self._names[_fold(row.name)].append(row)
        formula = {solute_code(row.formula)} if row.formula else set()
        for other in {*map(_fold, row.synonyms), row.cas_number, row.ec_number, *formula} - {"", _fold(row.name)}:
            self._others[other].append(row)

    def find(self, text: str) -> list[Substance]:
        """Return what a name means; a name of its own goes before synonyms, numbers and formulas."""
        found = self._names.get(_fold(text)) or self._others.get(_fold(text)) or self._others.get(solute_code(text))
        return found or []

    def find_alike(self, name: str) -> Substance | None:
        """Return one whose name differs in spelling only."""
        return self._alike.get(_sound(name))


def _fold(text: str) -> str:
    return tidy(text).casefold()


def _sound(text: str) -> str:
    """Return a name without what people write in different ways: sulphate and sulfate, hyphens, accents."""
    return re.sub(r"\W", "", searchable(text)).replace("ph", "f")


def _one(text: str, found: list[Substance]) -> Substance | None:
    if len(found) > 1:
        names = ", ".join(f'"{row.name}"' for row in found)
        raise CellError(f'"{text}" means more than one substance: {names}. Write the name of one of them.')
    return found[0] if found else None


def _formula_of(text: str) -> str:
    """Return the text if it is a formula, else nothing."""
    try:
        parse_formula(text)
    except FormulaError:
        return ""
    return text
