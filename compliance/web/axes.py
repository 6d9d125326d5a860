"""Axes of a plot: where marks stand and what they say. Amounts in a unit that suits them, days of the workshop."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta
from decimal import ROUND_CEILING, ROUND_FLOOR, Decimal

from django.utils import timezone

from chemicals.ledger.components import dimension_of
from chemicals.science.units import find, to_base
from compliance.web import words

STEPS = 5
"""Into how many steps an axis of amounts is divided, about."""

DAYS = (1, 2, 7, 14)
MONTHS = (1, 2, 3, 6, 12, 24, 60, 120, 600)
"""How many days, or else months, may lie between two marks."""


@dataclass(frozen=True)
class Scale:
    """An axis of amounts in base units, from ``low`` to ``high`` by ``step``; one ``unit`` has ``size`` of them."""

    low: Decimal
    high: Decimal
    step: Decimal
    unit: str
    size: Decimal

    @classmethod
    def around(cls, low: int, high: int, component: str) -> "Scale":
        """Return an axis that shows these amounts of a component in the unit in which pages say them."""
        return cls.around_in(low, high, *_unit(max(abs(low), abs(high)), component))

    @classmethod
    def around_in(cls, low: int, high: int, unit: str, size: Decimal) -> "Scale":
        """Return an axis that shows these amounts: with zero on it, unless all of them are far from zero."""
        if low > 0 and (2 * low < high or low == high):
            low = 0
        if high < 0 and (2 * high > low or low == high):
            high = 0
        step = _round_step(Decimal(high - low) / STEPS) if high > low else size
        lowest = (Decimal(low) / step).to_integral_value(ROUND_FLOOR)
        highest = (Decimal(high) / step).to_integral_value(ROUND_CEILING)
        return cls(lowest * step, max(highest, lowest + 1) * step, step, unit, size)

    @property
    def begins_at_zero(self) -> bool:
        """Say whether a line twice as high is twice as much."""
        return self.low <= 0 <= self.high

    def place(self, amount: int | Decimal) -> float:
        """Return where an amount stands: 0 at the lower end of the axis, 1 at the upper one."""
        return float((amount - self.low) / (self.high - self.low))

    def marks(self) -> Iterator[tuple[Decimal, str]]:
        """Yield the amounts at which marks stand, with their figures in the unit of the axis."""
        for number in range(int((self.high - self.low) / self.step) + 1):
            at = self.low + number * self.step
            yield at, f"{(at / self.size).normalize():f}".replace("-", "−")


def _unit(largest: int, component: str) -> tuple[str, Decimal]:
    """Return the unit in which pages say such an amount, and how many base units it has."""
    dimension = dimension_of(component)
    name = words.amount(largest, component).rpartition(" ")[2]
    unit = find(name, dimension)
    if unit is None:
        raise ValueError(f"{name} is no unit of {component}")
    return name, to_base(Decimal(1), unit, dimension)


def _round_step(least: Decimal) -> Decimal:
    """Return the next larger of 1, 2, 5, 10 and so on."""
    tens = Decimal(1).scaleb(least.adjusted())
    return next(factor * tens for factor in (1, 2, 5, 10) if factor * tens >= least)


def date_marks(start: datetime, end: datetime, most: int) -> list[tuple[datetime, str]]:
    """Return the beginnings of days, months or years within a period, no more than ``most`` if that can be, as text."""
    first, last = timezone.localtime(start).date(), timezone.localtime(end).date()
    days = (last - first).days + 1
    for step in DAYS:
        if days <= step * most:
            return _marks([first + timedelta(days=n) for n in range(0, days, step)], end, "%Y-%m-%d")
    months = 12 * (last.year - first.year) + last.month - first.month + 1
    step = next((step for step in MONTHS if months <= step * most), MONTHS[-1])
    beginnings = (date(year, month + 1, 1) for year in range(first.year, last.year + 1) for month in range(12))
    wanted = [day for day in beginnings if first <= day <= last and (12 * day.year + day.month - 1) % step == 0]
    return _marks(wanted, end, "%Y" if step % 12 == 0 else "%Y-%m")


def _marks(days: list[date], end: datetime, pattern: str) -> list[tuple[datetime, str]]:
    zone = timezone.get_current_timezone()
    found = [(datetime.combine(day, time(), zone), day.strftime(pattern)) for day in days]
    return [(at, text) for at, text in found if at < end]
