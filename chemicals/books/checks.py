"""What the figures of an event may be. Each check refuses by the name of the field."""

from collections.abc import Collection, Sequence
from datetime import datetime
from decimal import Decimal, InvalidOperation
from itertools import pairwise

from chemicals.books.canonical import CanonicalError


def not_negative(where: str, **numbers: int) -> None:
    """Refuse numbers below zero."""
    for name, number in numbers.items():
        if number < 0:
            raise CanonicalError(f"{where}.{name}: {number} is less than nothing.")


def positive(where: str, **numbers: int | str) -> None:
    """Refuse what is no finite number above zero; decimals are strings."""
    for name, number in numbers.items():
        try:
            value = Decimal(number)
        except InvalidOperation:
            value = Decimal(0)
        if not value.is_finite() or value <= 0:
            raise CanonicalError(f"{where}.{name}: {number!r} is no number above zero.")


def one_of(where: str, allowed: Collection[str], **words: str) -> None:
    """Refuse words that are not among the allowed ones."""
    for name, word in words.items():
        if word not in allowed:
            raise CanonicalError(f"{where}.{name}: {word!r} is none of {', '.join(allowed)}.")


def as_many(where: str, things: Sequence[object], **lists: Sequence[object]) -> None:
    """Refuse lists that are not as long as the things they speak of."""
    for name, values in lists.items():
        if len(values) != len(things):
            raise CanonicalError(f"{where}.{name}: {len(values)} stand there, {len(things)} are needed.")


def once(where: str, **lists: Sequence[str]) -> None:
    """Refuse lists that name something more than once."""
    for name, words in lists.items():
        twice = sorted({word for word in words if words.count(word) > 1})
        if twice:
            raise CanonicalError(f"{where}.{name}: {', '.join(twice)} stands there more than once.")


def none_of(where: str, refused: Collection[str], **words: str) -> None:
    """Refuse words that are among the refused ones."""
    for name, word in words.items():
        if word in refused:
            raise CanonicalError(f"{where}.{name}: {word!r} cannot stand here.")


def between(where: str, least: int, most: int, **numbers: int) -> None:
    """Refuse numbers outside the two ends."""
    for name, number in numbers.items():
        if not least <= number <= most:
            raise CanonicalError(f"{where}.{name}: {number} is not between {least} and {most}.")


def not_above(where: str, **ends: int | None) -> None:
    """Refuse a lower end above the upper one, in the order in which they are named; None stands for no end."""
    known = [(name, end) for name, end in ends.items() if end is not None]
    for (_, lower), (name, upper) in pairwise(known):
        if lower > upper:
            raise CanonicalError(f"{where}.{name}: {upper} is less than {lower}.")


def at_most_one(where: str, **values: object) -> None:
    """Refuse more than one value that is not None."""
    given = [name for name, value in values.items() if value is not None]
    if len(given) > 1:
        raise CanonicalError(f"{where}: only one of {', '.join(given)} can be said.")


def exactly_one(where: str, **values: object) -> None:
    """Refuse none, or more than one, that is not None."""
    at_most_one(where, **values)
    needed(where, **{" or ".join(values): next((value for value in values.values() if value is not None), None)})


def both_or_neither(where: str, **values: object) -> None:
    """Refuse some values with others missing."""
    missing = [name for name, value in values.items() if value is None]
    if missing and len(missing) < len(values):
        raise CanonicalError(f"{where}.{missing[0]}: it goes with {', '.join(set(values) - set(missing))}.")


def needed(where: str, **values: object) -> None:
    """Refuse None."""
    for name, value in values.items():
        if value is None:
            raise CanonicalError(f"{where}.{name}: this is needed.")


def in_order(where: str, **moments: datetime | None) -> None:
    """Refuse moments that do not follow each other; None stands for no moment."""
    known = [(name, moment) for name, moment in moments.items() if moment is not None]
    for (_, earlier), (name, later) in pairwise(known):
        if earlier >= later:
            raise CanonicalError(f"{where}.{name}: {later} does not come after {earlier}.")
