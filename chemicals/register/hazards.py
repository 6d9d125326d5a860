"""Hazards as a user enters them from a sheet: what can be checked without knowing the substance."""

from collections.abc import Iterator, Sequence

from chemicals.science.ghs import PICTOGRAMS, SIGNAL_WORDS, find_class, split_statement
from chemicals.science.reactivity import NOTHING, REACTS_AS
from chemicals.workshop.errors import FieldError
from chemicals.workshop.texts import find_bad_lines

LONGEST_STATEMENT = 300
"""Characters."""
MOST_STATEMENTS = 60


def check_hazards(
    *,
    signal_word: str,
    pictograms: Sequence[str],
    statements: Sequence[str],
    reactivity: Sequence[str],
    hazard_classes: Sequence[str] = (),
) -> Iterator[FieldError]:
    """Yield what is wrong with classes, signal word, pictograms, statements, and what a thing reacts as."""
    unknown_classes = [kind for kind in hazard_classes if find_class(kind) is None]
    for field, values, allowed, remedy in (
        ("signal_word", (signal_word,), SIGNAL_WORDS, f"Write one of: {', '.join(filter(None, SIGNAL_WORDS))}."),
        ("pictograms", pictograms, PICTOGRAMS, f"Write some of: {', '.join(PICTOGRAMS)}."),
        ("hazard_classes", unknown_classes, (), "Write class and category as the sheet does, like Skin Corr. 1A."),
        ("reactivity", reactivity, tuple(REACTS_AS), f"Write some of: {', '.join(REACTS_AS)}."),
    ):
        unknown = sorted(set(values) - set(allowed))
        if unknown:
            yield FieldError(field, f"Unknown: {', '.join(unknown)}. {remedy}")
    if NOTHING in reactivity and len(set(reactivity)) > 1:
        yield FieldError("reactivity", "It reacts as nothing on the list, or as what you chose: not both.")
    yield from _check_statements(statements)


def _check_statements(statements: Sequence[str]) -> Iterator[FieldError]:
    if len(statements) > MOST_STATEMENTS:
        yield FieldError("statements", f"These are more than {MOST_STATEMENTS} statements. Leave some out.")
    for text in statements:
        yield from find_bad_lines(statements=text)
        if not split_statement(text)[0]:
            yield FieldError("statements", f'"{text[:80]}" does not begin with a code such as H302 or EUH071.')
        if len(text) > LONGEST_STATEMENT:
            yield FieldError("statements", f'"{text[:20]}…" is longer than {LONGEST_STATEMENT} characters. Shorten it.')
