"""Which column of a file says what: the targets that there are, a first guess by the headings, what cannot be."""

import re
from collections import Counter
from collections.abc import Callable, Collection, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _

from chemicals.books.events import Acceptance, Cancellation, Correction
from chemicals.process.fields import FieldKind, RowsField, Text, describe
from chemicals.process.inputs import INPUTS, Input
from chemicals.workshop.errors import FieldError, InvalidInputError

VERBS: Mapping[str, type[Input]] = {
    verb: data for verb, data in INPUTS.items() if verb not in (Cancellation.KIND, Correction.KIND)
}
"""What can be imported: of the past that was wrong only what is right need be recorded."""

WHEN, CLOCK, WHICH, VERB, KEY = "when", "clock", "which", "verb", "key"
GENERAL: Mapping[str, Text] = {
    WHEN: _("When: date, or date and time"),
    CLOCK: _("Time of day"),
    WHICH: _("First or second time, where clocks were put back"),
    VERB: _("What happened"),
    KEY: _("Key of the row"),
}
"""Targets that every file may have."""

OTHER_NAMES: Mapping[str, str] = {
    **dict.fromkeys(("date", "day", "happened", "occurred at", "date and time"), WHEN),
    **dict.fromkeys(("time of day", "clock time"), CLOCK),
    **dict.fromkeys(("kind", "what", "what happened"), VERB),
    **dict.fromkeys(("id", "row key"), KEY),
}
"""Headings by which they are known, besides their own names."""

UNDATED = (Acceptance.KIND,)
"""Verbs whose time is that of the entry they speak of."""

ISO, DAY_FIRST, MONTH_FIRST = "iso", "day first", "month first"
DATES: Mapping[str, Text] = {
    ISO: _("2026-03-02"),
    DAY_FIRST: _("2.3.2026: the day first"),
    MONTH_FIRST: _("3/2/2026: the month first"),
}
POINT, COMMA = "point", "comma"
DECIMALS: Mapping[str, Text] = {POINT: _("1.5: a point"), COMMA: _("1,5: a comma")}
TEXT_OPTIONS, FLAG_OPTIONS = ("verb", "dates", "decimal"), ("revise", "add_places")
"""What a column map says besides what columns mean."""
MOST_NUMBERED = 30
"""How many groups of fields a row may have: held 1 metal, held 2 metal and so on."""

UNIT = re.compile(r"\s*[\[(]([^\[\]()]*)[\])]$")
NUMBERED = re.compile(r"(\w+) (\d{1,2}) (\w+)")


@dataclass(frozen=True)
class ColumnMap:
    """What each column says, by heading; "" and columns that are not named are left out.

    ``verb`` is what happened in every row; if it is empty a column says so. ``dates`` is one of DATES, ``decimal`` one
    of DECIMALS. Of a file of the register: ``revise`` lets rows that say something else revise products that are here,
    ``add_places`` lets them name places that are not.
    """

    columns: Mapping[str, str]
    verb: str = ""
    dates: str = ISO
    decimal: str = POINT
    revise: bool = False
    add_places: bool = False

    @property
    def used(self) -> dict[str, str]:
        """Return the headings that say something, with their targets."""
        return {heading: target for heading, target in self.columns.items() if target}

    @property
    def verbs(self) -> list[str]:
        """Return what may have happened."""
        return [self.verb] if self.verb else list(VERBS)


def as_json(chosen: ColumnMap) -> dict[str, Any]:
    """Return what is kept, and written by hand, of a column map."""
    flags = {name: True for name in FLAG_OPTIONS if getattr(chosen, name)}
    return {**{name: getattr(chosen, name) for name in TEXT_OPTIONS}, **flags, "columns": dict(chosen.used)}


def from_json(said: object) -> ColumnMap:
    """Return the column map that was kept or written by hand. Raises InvalidInputError by the field ``mapping``."""
    options = {"columns", *TEXT_OPTIONS, *FLAG_OPTIONS}
    if not isinstance(said, dict) or not set(said) <= options:
        raise InvalidInputError.of("mapping", f"Write a JSON object with {', '.join(sorted(options))}.")
    columns = said.get("columns", {})
    texts = [said.get(name, "") for name in TEXT_OPTIONS]
    flags = {name: said.get(name, False) for name in FLAG_OPTIONS}
    if not all(isinstance(flag, bool) for flag in flags.values()):
        raise InvalidInputError.of("mapping", f"Write true or false for {' and '.join(FLAG_OPTIONS)}.")
    if isinstance(columns, dict):
        texts += [*columns, *columns.values()]
    if not isinstance(columns, dict) or not all(isinstance(text, str) for text in texts):
        raise InvalidInputError.of("mapping", "Write headings and targets as texts: {columns: {Date: when, ...}}.")
    return ColumnMap(columns, said.get("verb", ""), said.get("dates", ISO), said.get("decimal", POINT), **flags)


def split_unit(heading: str) -> tuple[str, str]:
    """Return a heading without the unit that stands in brackets at its end, and the unit: "Amount [g]"."""
    found = UNIT.search(heading)
    return (heading, "") if found is None else (heading[: found.start()], found[1].strip())


def list_targets(verbs: Iterable[str], most: int = 3) -> dict[str, Text]:
    """Return what a column may say where these verbs may have happened, with its label; ``most`` groups of fields."""
    found: dict[str, list[Text]] = {}
    for verb in verbs:
        for name, kind in describe(VERBS[verb]):
            for target, label in _spread(name, kind, most):
                labels = found.setdefault(target, [])
                if str(label) not in map(str, labels):
                    labels.append(label)
    fields = {target: format_lazy(" / ".join(["{}"] * len(labels)), *labels) for target, labels in found.items()}
    return {**GENERAL, **fields}


def _spread(name: str, kind: FieldKind, most: int) -> Iterator[tuple[str, Text]]:
    if not isinstance(kind, RowsField):
        yield name, kind.label
        return
    for number in range(1, most + 1):
        for part, inner in describe(kind.of):
            yield f"{name} {number} {part}", format_lazy("{} {}: {}", kind.label, number, inner.label)


def find_field(verb: str, target: str) -> FieldKind | None:
    """Return the field of a verb that a target means, if there is one."""
    fields = dict(describe(VERBS[verb]))
    numbered = NUMBERED.fullmatch(target)
    if numbered is None:
        kind = fields.get(target)
        return None if isinstance(kind, RowsField) else kind
    name, number, part = numbered.groups()
    kind = fields.get(name)
    known = isinstance(kind, RowsField) and 1 <= int(number) <= MOST_NUMBERED
    return dict(describe(kind.of)).get(part) if known and isinstance(kind, RowsField) else None


def guess(headings: Sequence[str], kept: ColumnMap | None = None, verbs: Collection[str] = tuple(VERBS)) -> ColumnMap:
    """Return what the headings say where these verbs happened; those of an earlier import mean what they meant then."""
    kept = kept or ColumnMap({})
    columns: dict[str, str] = {}
    labels = {target: set(map(fold, str(label).split(" / "))) for target, label in list_targets(verbs).items()}
    for heading in headings:
        target = kept.used.get(heading) or _guess_target(heading, verbs, labels)
        columns[heading] = "" if target in columns.values() else target
    verb = "" if VERB in columns.values() else kept.verb
    return ColumnMap(columns, verb, kept.dates, kept.decimal)


def fold(text: str) -> str:
    """Return words without what does not matter: case, and how they are joined."""
    return " ".join(re.sub(r"[_\-./:]", " ", text).casefold().split())


def verb_words() -> dict[str, str]:
    """Return every word by which a verb is known, folded: its name, and what its button says."""
    return {fold(word): verb for verb, data in VERBS.items() for word in (verb, str(data.title))}


def _guess_target(heading: str, verbs: Collection[str], labels: Mapping[str, Collection[str]]) -> str:
    heading, unit = split_unit(heading)
    words = fold(heading)
    if words in GENERAL or words in OTHER_NAMES:
        return OTHER_NAMES.get(words, words)
    if words == "time" and not unit:  # a time that takes a while has a unit
        return CLOCK
    underlined = words.replace(" ", "_")
    numbered = re.fullmatch(r"(\w+)_(\d{1,2})_(\w+)", underlined)
    for target in filter(None, (underlined, numbered and " ".join(numbered.groups()))):
        if any(find_field(verb, target) for verb in verbs):
            return target
    meant = [target for target, known in labels.items() if words in known]
    return meant[0] if len(meant) == 1 else ""


def check_map(chosen: ColumnMap, headings: Sequence[str]) -> list[FieldError]:
    """Return everything that is wrong with a column map, by heading (or ``mapping``, where no single one is meant)."""
    if chosen.verb and chosen.verb not in VERBS:
        return [FieldError("mapping", f'"{chosen.verb}" cannot be imported. Choose one of: {", ".join(VERBS)}.')]

    def is_target(target: str) -> bool:
        return target in GENERAL or any(find_field(verb, target) for verb in chosen.verbs)

    errors = [*check_columns(chosen, headings, is_target)]
    errors += [FieldError(heading, message) for heading, message in _check_verb(chosen)]
    return errors + [FieldError("mapping", message) for message in _find_missing(chosen)]


def check_columns(chosen: ColumnMap, headings: Sequence[str], is_target: Callable[[str], bool]) -> Iterator[FieldError]:
    """Yield what is wrong with a column map of any file: unknown choices, headings and targets, two columns alike."""
    for word, known in ((chosen.dates, DATES), (chosen.decimal, DECIMALS)):
        if word not in known:
            yield FieldError("mapping", f'"{word}" is no choice. Choose one of: {", ".join(known)}.')
    yield from (FieldError(h, "There is no such column in the file.") for h in chosen.used if h not in headings)
    counts = Counter(chosen.used.values())
    for heading, target in chosen.used.items():
        if not is_target(target):
            yield FieldError(heading, f'"{target}" is nothing that can be said here. Choose from the list.')
        if counts[target] > 1:
            yield FieldError(heading, f'Two columns say "{target}". Leave one of them out.')


def _check_verb(chosen: ColumnMap) -> Iterator[tuple[str, str]]:
    if chosen.verb and VERB in chosen.used.values():
        yield _heading_of(chosen, VERB), "Either this column says what happened, or it is the same in every row."


def _heading_of(chosen: ColumnMap, target: str) -> str:
    return next(heading for heading, said in chosen.used.items() if said == target)


def _find_missing(chosen: ColumnMap) -> Iterator[str]:
    """Yield what no column says, though every row needs it."""
    said = set(chosen.used.values())
    if WHEN not in said and chosen.verb not in UNDATED:
        yield "No column says when it happened. Choose one."
    if not chosen.verb and VERB not in said:
        yield "No column says what happened. Choose one, or say what happened in every row."
    for name, kind in describe(VERBS[chosen.verb]) if chosen.verb else ():
        if kind.required and not isinstance(kind, RowsField) and name not in said:
            yield f'No column says "{kind.label}", which is needed. Choose one.'
