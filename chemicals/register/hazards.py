"""Hazards as a user enters them from a sheet: what can be checked without knowing the substance."""

import re
from collections.abc import Iterator, Sequence

from chemicals.science.reactivity import NOTHING, REACTS_AS
from chemicals.workshop.errors import FieldError
from chemicals.workshop.texts import find_bad_lines

SIGNAL_WORDS = ("", "Warning", "Danger")
PICTOGRAMS = tuple(f"GHS0{number}" for number in range(1, 10))
STATEMENT = re.compile(r"(EUH|H|P)\d{3}[A-Za-z]{0,2}(\s*\+\s*[HP]\d{3}[A-Za-z]{0,2})*")


def check_hazards(
    *, signal_word: str, pictograms: Sequence[str], statements: Sequence[str], reactivity: Sequence[str]
) -> Iterator[FieldError]:
    """Yield what is wrong with signal word, pictograms, statements, and what a thing reacts as."""
    for field, values, allowed in (
        ("signal_word", (signal_word,), SIGNAL_WORDS),
        ("pictograms", pictograms, PICTOGRAMS),
        ("reactivity", reactivity, tuple(REACTS_AS)),
    ):
        unknown = sorted(set(values) - set(allowed))
        if unknown:
            yield FieldError(field, f"Unknown: {', '.join(unknown)}. Choose from the list.")
    if NOTHING in reactivity and len(set(reactivity)) > 1:
        yield FieldError("reactivity", "It reacts as nothing on the list, or as what you chose: not both.")
    for text in statements:
        yield from find_bad_lines(statements=text)
        if not STATEMENT.match(text.strip()):
            yield FieldError("statements", f'"{text}" does not begin with a code such as H302 or EUH071.')
