"""Hazards as the UN's Globally Harmonized System says them: classes with categories, statements, words, pictograms.

What a sheet says is never corrected here. `find_contradictions` compares its parts with the tables: a class calls for
statements, a signal word and pictograms (data/ghs_classes.csv). Of classes that nobody entered nothing follows; then
the statements stand in their place. Where one pictogram gives way to another: UN GHS 1.4.10.5.3.1; Regulation (EC)
1272/2008 article 26 (both from memory).
"""

import re
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, field
from functools import cache
from typing import Final

from chemicals.science.tables import read_table

SIGNAL_WORDS: Final = ("", "Warning", "Danger")
"""From nothing to the strongest."""
PICTOGRAMS: Final = tuple(f"GHS0{number}" for number in range(1, 10))

_CODE: Final = r"(?:EUH|H|P)[0-9]{3}[A-Za-z]{0,2}(?![0-9A-Za-z])"
_STATEMENT: Final = re.compile(rf"(?P<codes>{_CODE}(?:\s*\+\s*{_CODE})*)[\s:;,.–—-]*(?P<text>.*)", re.DOTALL)
_ONLY_CODES: Final = re.compile(rf"{_CODE}(?:\s*[+,;/]?\s*{_CODE})*")
_BESIDE: Final = "H229"  # stands beside another statement of its class, never in place of it
_INCLUDED: Final = {"H318": "H314", "H400": "H410"}  # left out where the other one stands: it says it as well
_IRRITANTS: Final = ("Skin Irrit.", "Eye Irrit.")
_MANY_CATEGORIES: Final = ("Specific target organ toxicity", "Explosives")  # by organ; by packing
_VERY_TOXIC_CODES: Final = frozenset({"H300", "H310", "H330"})
_VERY_TOXIC_CLASSES: Final = ("Acute Tox. 1", "Acute Tox. 2")

MESSAGES: Final = {
    "statement-missing": "%(kind)s calls for %(codes)s, which is not among the statements.",
    "class-missing": "%(code)s belongs to %(kinds)s, but no such class is entered.",
    "two-categories": "%(kinds)s are two categories of one class.",
    "statement-unknown": "%(code)s is not in the list of statements known here: read it again.",
    "signal-word": "%(cause)s calls for the signal word %(needed)s; entered is %(entered)s.",
    "signal-word-extra": "The signal word %(entered)s is entered; nothing else that is entered calls for it.",
    "pictogram-missing": "%(cause)s calls for %(pictogram)s, which is not among the pictograms.",
    "pictogram-extra": "%(pictogram)s is entered; nothing else that is entered calls for it.",
    "pictogram-gives-way": "%(pictogram)s is entered for %(cause)s, where it gives way to %(other)s.",
}
"""Codes of contradictions with their sentence."""


@dataclass(frozen=True)
class Contradiction:
    """Two parts of what was entered that do not go together: a code with figures, and the sentence in English."""

    code: str
    params: dict[str, str] = field(default_factory=dict)

    @property
    def message(self) -> str:
        """The sentence."""
        return MESSAGES[self.code] % self.params


@dataclass(frozen=True)
class HazardClass:
    """A class with its category, by the short name that sheets print (``kind``), and what it calls for.

    Any one of ``codes`` will do, save that H229 stands beside the others.
    """

    kind: str
    hazard_class: str
    category: str
    codes: tuple[str, ...]
    pictograms: frozenset[str]
    signal_word: str


@cache
def _classes() -> dict[str, HazardClass]:
    found: dict[str, HazardClass] = {}
    for row in read_table("ghs_classes"):
        before = found.get(row["kind"])
        codes = (*(before.codes if before else ()), row["code"])
        pictograms = frozenset(row["pictograms"].split())
        found[row["kind"]] = HazardClass(
            row["kind"], row["hazard_class"], row["category"], codes, pictograms, row["signal_word"]
        )
    return found


def list_classes() -> tuple[HazardClass, ...]:
    """Every class with its categories, physical hazards first."""
    return tuple(_classes().values())


def find_class(kind: str) -> HazardClass | None:
    """The class of a short name such as "Skin Corr. 1B"; None if there is none."""
    return _classes().get(kind)


@cache
def _owners() -> dict[str, tuple[HazardClass, ...]]:
    """The classes to which each statement belongs."""
    found: dict[str, tuple[HazardClass, ...]] = {}
    for each in list_classes():
        for code in each.codes:
            found[code] = (*found.get(code, ()), each)
    return found


@cache
def _texts() -> dict[str, str]:
    return {row["code"]: row["statement"] for row in read_table("ghs_statements")}


def standard_text(statement: str) -> str:
    """The standard's words for a statement that was entered by its code alone; empty where none are known here."""
    codes, text = split_statement(statement)
    if text or not codes:
        return ""
    texts = [_texts().get(code, "") for code in codes]
    return _texts().get("+".join(codes), "") or (". ".join(texts) if all(texts) else "")


def split_statement(statement: str) -> tuple[tuple[str, ...], str]:
    """The codes with which a statement begins, and its text: "H302+H312 Harmful" is (H302, H312) and Harmful."""
    found = _STATEMENT.fullmatch(statement.strip())
    if found is None:
        return (), statement.strip()
    return tuple(code.strip() for code in found["codes"].split("+")), found["text"]


def split_codes(line: str) -> list[str]:
    """A line that holds nothing but codes, "H302, H315", as one statement each; every other line as it is."""
    line = line.strip()
    if not _ONLY_CODES.fullmatch(line):
        return [line]
    joined = re.sub(r"\s*\+\s*", "+", line)
    return [statement for statement in re.split(r"[\s,;/]+", joined) if statement]


def find_very_toxic(statements: Iterable[str], classes: Iterable[str]) -> tuple[str, ...]:
    """What of these says very toxic: acutely toxic of category 1 or 2 by any route, each class and code once.

    UN GHS chapter 3.1, table 3.1.3: both categories carry H300 (swallowed), H310 (skin), H330 (inhaled); Regulation
    (EC) 1272/2008 annex I 3.1 says the same. What the law asks of what held it differs, for example 40 CFR
    261.7(b)(3) on containers of acute hazardous waste, or code 15 01 10* of the European list of wastes (all from
    memory): local rules decide.
    """
    kinds = [kind for kind in classes if kind.startswith(_VERY_TOXIC_CLASSES)]
    codes = [code for text in statements for code in split_statement(text)[0] if code in _VERY_TOXIC_CODES]
    return tuple(dict.fromkeys([*kinds, *codes]))


@cache
def list_families() -> tuple[str, ...]:
    """Every hazard class without its categories, such as "Flammable liquids", physical hazards first."""
    return tuple(dict.fromkeys(each.hazard_class for each in list_classes()))


def families_of(classes: Iterable[str], statements: Iterable[str]) -> frozenset[str]:
    """The hazard classes without their categories of what was entered.

    Where no class is known, those to which the statements may belong: of H272 that is oxidising liquids and solids.
    """
    known = [found for kind in classes if (found := find_class(kind))]
    codes = (code for text in statements for code in split_statement(text)[0])
    said = known or [each for code in codes for each in _owners().get(code, ())]
    return frozenset(each.hazard_class for each in said)


@dataclass(frozen=True)
class _Call:
    """What something entered calls for: a class; or a statement, which may belong to several classes."""

    name: str
    classes: tuple[HazardClass, ...]

    @property
    def needed(self) -> frozenset[str]:
        return frozenset.intersection(*(each.pictograms for each in self.classes))

    @property
    def allowed(self) -> frozenset[str]:
        return frozenset.union(*(each.pictograms for each in self.classes))

    @property
    def words(self) -> tuple[int, int]:
        """The weakest and the strongest signal word that it may call for."""
        ranks = [SIGNAL_WORDS.index(each.signal_word) for each in self.classes]
        return min(ranks), max(ranks)

    def is_any_of(self, *begins: str) -> bool:
        return all(each.kind.startswith(begins) for each in self.classes)


def find_contradictions(
    *, classes: Sequence[str], statements: Sequence[str], signal_word: str, pictograms: Sequence[str]
) -> tuple[Contradiction, ...]:
    """Everything in which classes (by short name), statements, signal word and pictograms do not go together."""
    known = [found for kind in dict.fromkeys(classes) if (found := find_class(kind))]
    codes = list(dict.fromkeys(code for text in statements for code in split_statement(text)[0]))
    calls = [_Call(each.kind, (each,)) for each in known] or list(_calls_of_codes(codes))
    return (
        *_compare_statements(known, codes),
        *_find_two_categories(known),
        *_compare_word(calls, signal_word),
        *_compare_pictograms(calls, list(dict.fromkeys(pictograms))),
    )


def _calls_of_codes(codes: Iterable[str]) -> Iterator[_Call]:
    for code in codes:
        if owners := _owners().get(code):
            yield _Call(code, owners)


def _compare_statements(known: Sequence[HazardClass], codes: Sequence[str]) -> Iterator[Contradiction]:
    for each in known:
        beside = tuple(code for code in each.codes if code == _BESIDE and len(each.codes) > 1)
        for group in (tuple(code for code in each.codes if code not in beside), beside):
            if group and not any(code in codes or _INCLUDED.get(code) in codes for code in group):
                yield Contradiction("statement-missing", {"kind": each.kind, "codes": " / ".join(group)})
    entered = {code for each in known for code in each.codes}
    for code in codes:
        owners = _owners().get(code)
        if known and owners and code not in entered:
            kinds = " / ".join(each.kind for each in owners)
            yield Contradiction("class-missing", {"code": code, "kinds": kinds})
        elif code not in _texts() and not code.startswith("P"):
            yield Contradiction("statement-unknown", {"code": code})


def _find_two_categories(known: Sequence[HazardClass]) -> Iterator[Contradiction]:
    by_class: dict[str, list[str]] = {}
    for each in known:
        if not each.hazard_class.startswith(_MANY_CATEGORIES):
            by_class.setdefault(each.hazard_class, []).append(each.kind)
    for kinds in by_class.values():
        if len(kinds) > 1:
            yield Contradiction("two-categories", {"kinds": ", ".join(kinds)})


def _compare_word(calls: Sequence[_Call], signal_word: str) -> Iterator[Contradiction]:
    entered = SIGNAL_WORDS.index(signal_word)
    strongest = max(calls, key=lambda call: call.words, default=None)
    least = strongest.words[0] if strongest else 0
    most = max((call.words[1] for call in calls), default=0)
    if strongest and entered < least:
        needed = SIGNAL_WORDS[least]
        said = {"cause": strongest.name, "needed": needed, "entered": signal_word or "none"}
        yield Contradiction("signal-word", said)
    elif entered > most:
        yield Contradiction("signal-word-extra", {"entered": signal_word})


def _compare_pictograms(calls: Sequence[_Call], entered: Sequence[str]) -> Iterator[Contradiction]:
    gave_way: dict[str, tuple[str, str]] = {}
    wanted: set[str] = set()
    for call in calls:
        for pictogram in sorted(call.allowed):
            other = _gives_way_to(pictogram, call, calls)
            if other:
                gave_way.setdefault(pictogram, (call.name, other))
                continue
            is_optional = pictogram not in call.needed or _may_be_left_out(pictogram, call, calls)
            if pictogram not in entered and pictogram not in wanted and not is_optional:
                yield Contradiction("pictogram-missing", {"cause": call.name, "pictogram": pictogram})
            wanted.add(pictogram)
    for pictogram in entered:
        if pictogram in gave_way and pictogram not in wanted:
            cause, other = gave_way[pictogram]
            yield Contradiction("pictogram-gives-way", {"pictogram": pictogram, "cause": cause, "other": other})
        elif pictogram not in wanted:
            yield Contradiction("pictogram-extra", {"pictogram": pictogram})


def _gives_way_to(pictogram: str, call: _Call, calls: Sequence[_Call]) -> str:
    """The pictogram to which this one gives way, where a call for it counts no longer; empty if it stays."""
    if pictogram != "GHS07":
        return ""
    irritates = call.is_any_of(*_IRRITANTS)
    if any("GHS06" in other.needed for other in calls):
        return "GHS06"
    if irritates and any(other.is_any_of("Skin Corr.", "Eye Dam.") for other in calls):
        return "GHS05"
    if (irritates or call.is_any_of("Skin Sens.")) and any(other.is_any_of("Resp. Sens.") for other in calls):
        return "GHS08"
    return ""


def _may_be_left_out(pictogram: str, call: _Call, calls: Sequence[_Call]) -> bool:
    """Whether another pictogram makes this one a matter of choice."""
    others = frozenset[str]().union(*(other.needed for other in calls))
    if pictogram in ("GHS02", "GHS03") and "GHS01" in others:
        return not call.is_any_of("Self-react. B", "Org. Perox. B")
    if pictogram == "GHS07" and call.is_any_of(*_IRRITANTS):
        return "GHS05" in others  # of metals only: the texts can be read either way
    return pictogram == "GHS04" and bool(others & {"GHS02", "GHS06"})
