"""The hazards of several things that were poured together, as they were entered, and what of them acts with what."""

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from typing import Any

from chemicals.register.models import ProductRevision
from chemicals.science.ghs import SIGNAL_WORDS, find_class, list_classes, split_statement, standard_text
from chemicals.science.reactivity import ACID, DANGERS, UNKNOWN, Danger, find_dangers
from compliance.waste.models import WasteStream

WITH_WATER = frozenset({"EUH014", "EUH029", "H260", "H261"})
"""Codes of statements that speak of water (UN GHS annex 3; Regulation (EC) 1272/2008 annexes II and III)."""
WITH_ACID = frozenset({"EUH031", "EUH032"})
"""Codes of statements that speak of acid (the same)."""


@dataclass(frozen=True)
class Part:
    """What was entered of one thing: signal word, pictograms, statements with H, EUH and P, classes."""

    name: str
    signal_word: str = ""
    pictograms: tuple[str, ...] = ()
    statements: tuple[str, ...] = ()
    classes: tuple[str, ...] = ()
    gloves: str = ""

    @property
    def entered(self) -> bool:
        """Whether anything of its hazards was entered at all."""
        return bool(self.signal_word or self.pictograms or self.statements or self.classes)


def part_of(thing: ProductRevision | WasteStream) -> Part:
    """Return what was entered of a product revision or of a waste stream."""
    return Part(
        name=thing.product.name if isinstance(thing, ProductRevision) else thing.name,
        signal_word=thing.signal_word,
        pictograms=tuple(thing.pictograms),
        statements=tuple(thing.statements),
        classes=tuple(thing.hazard_classes) if isinstance(thing, ProductRevision) else (),
        gloves=thing.gloves if isinstance(thing, ProductRevision) else "",
    )


@dataclass(frozen=True)
class Hazards:
    """Hazards merged from parts: the strongest signal word, every pictogram, each statement and class once."""

    signal_word: str = ""
    pictograms: tuple[str, ...] = ()
    statements: tuple[str, ...] = ()
    precautions: tuple[str, ...] = ()
    gloves: tuple[str, ...] = ()
    not_entered: tuple[str, ...] = ()

    @property
    def data(self) -> dict[str, Any]:
        """The hazards as papers freeze them."""
        return {
            "signal_word": self.signal_word,
            "pictograms": list(self.pictograms),
            "statements": [in_words(text) for text in self.statements],
        }

    @property
    def protection(self) -> list[str]:
        """The P statements, and what sheets say of gloves, in one line each."""
        gloves = ("Gloves: " + ", ".join(text.split("\n")) for text in self.gloves)
        return [*(in_words(text) for text in self.precautions), *gloves]


def in_words(statement: str) -> str:
    """Return a statement as typed; one that was typed as a code alone with the standard's words for it, if known."""
    words = standard_text(statement)
    return f"{statement} {words}" if words else statement


def merge(parts: Iterable[Part]) -> Hazards:
    """Return the hazards of everything together. Nothing is taken away: what was entered stays entered."""
    found = list(parts)
    statements = list(_once(text for part in found for text in part.statements))
    return Hazards(
        signal_word=max((part.signal_word for part in found), key=SIGNAL_WORDS.index, default=""),
        pictograms=tuple(sorted({code for part in found for code in part.pictograms})),
        statements=tuple(text for text in statements if not text.startswith("P")),
        precautions=tuple(text for text in statements if text.startswith("P")),
        gloves=tuple(dict.fromkeys(part.gloves for part in found if part.gloves)),
        not_entered=tuple(dict.fromkeys(part.name for part in found if not part.entered)),
    )


def _once(statements: Iterable[str]) -> Iterator[str]:
    """Yield statements by their code, each wording once: one code may speak of another organ or way in each sheet.

    A code alone gives way to the same code with its text.
    """
    worded: dict[tuple[str, ...], dict[str, str]] = {}
    for statement in statements:
        codes, text = split_statement(statement)
        worded.setdefault(codes, {}).setdefault(_bare(text), statement)
    for _codes, texts in sorted(worded.items(), key=lambda pair: _order(pair[0])):
        yield from (statement for bare, statement in texts.items() if bare or len(texts) == 1)


def _bare(text: str) -> str:
    return " ".join(text.casefold().split()).rstrip(".!")


def _order(codes: tuple[str, ...]) -> tuple[int, tuple[str, ...]]:
    first = codes[0] if codes else ""
    return ("H" in first[:1], "EUH" in first, "P" in first[:1], True).index(True), codes


def list_hazards(parts: Iterable[Part]) -> list[str]:
    """Return what is counted in totals: the classes as entered; of a part without classes its H and EUH statements.

    A class is told by its short name with what it means, a statement by its code and text.
    """
    found: dict[str, None] = {}
    for part in parts:
        for kind in part.classes:
            known = find_class(kind)
            found[f"{kind}: {known.hazard_class}" if known else kind] = None
        if not part.classes:
            found |= dict.fromkeys(in_words(text) for text in _once(part.statements) if not text.startswith("P"))
    return list(found)


def order_of_hazard(hazard: str) -> tuple[int, str]:
    """Return where a line of the totals stands: classes as in the standard's tables, statements after them."""
    kinds = [each.kind for each in list_classes()]
    kind = hazard.partition(":")[0]
    return (kinds.index(kind) if kind in kinds else len(kinds)), hazard


def list_avoided(kinds: frozenset[str]) -> list[dict[str, str]]:
    """Return what must never meet something that reacts as these kinds, and what that would give."""
    found = {
        other: danger.gives
        for danger in DANGERS
        for one, other in ((danger.first, danger.second), (danger.second, danger.first))
        if one in kinds
    }
    avoided = [{"what": what, "gives": gives} for what, gives in found.items()]
    if UNKNOWN in kinds:
        rest = "anything else" if avoided else "anything"
        avoided.append({"what": rest, "gives": "nobody declared what all of it reacts as"})
    return avoided


def list_with_water(statements: Sequence[str]) -> list[str]:
    """Return the statements that say what water does."""
    return [text for text in statements if WITH_WATER & set(split_statement(text)[0])]


def list_with_acid(statements: Sequence[str], kinds: frozenset[str]) -> list[str]:
    """Return what acid does: as it was declared, and as statements say it."""
    declared = dict.fromkeys(danger.danger for danger in find_dangers(kinds - {UNKNOWN}, {ACID}))
    return [*declared, *(text for text in statements if WITH_ACID & set(split_statement(text)[0]))]


@dataclass(frozen=True)
class Meeting:
    """Vessels that stand together and must never meet: the names on both sides, and the danger."""

    first: tuple[str, ...]
    second: tuple[str, ...]
    danger: Danger

    def __str__(self) -> str:
        one, other = _names(self.first), _names(self.second)
        return f"{self.danger.first} ({one}) and {self.danger.second} ({other}): {self.danger.danger}"


MOST_NAMES = 4


def _names(names: Sequence[str]) -> str:
    shown = ", ".join(names[:MOST_NAMES])
    return shown if len(names) <= MOST_NAMES else f"{shown} and {len(names) - MOST_NAMES} more"


def find_together(things: Iterable[tuple[str, frozenset[str]]]) -> list[str]:
    """Return a sentence for each danger among named things that stand together, by what each reacts as."""
    listed = list(things)
    found = []
    for danger in DANGERS:
        first = tuple(name for name, kinds in listed if danger.first in kinds)
        second = tuple(name for name, kinds in listed if danger.second in kinds)
        if first and second and len({*first, *second}) > 1:
            found.append(str(Meeting(first, second, danger)))
    unknown = tuple(name for name, kinds in listed if UNKNOWN in kinds)
    if unknown and len(listed) > 1:
        found.append(f"{_names(unknown)}: nobody declared what all of it reacts as; keep acid and cyanide away")
    return found
