"""What the figures of an event may be. Each check refuses by the name of the field."""

from collections.abc import Collection, Sequence
from decimal import Decimal, InvalidOperation

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
