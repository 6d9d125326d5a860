"""Forms that choose a period and what to look at in it, and those that close one and open it again."""

from collections.abc import Mapping, Sequence
from datetime import date, datetime, time, timedelta
from typing import Any, ClassVar

from django import forms
from django.core.exceptions import ValidationError
from django.utils import timezone
from django.utils.translation import gettext_lazy as _

from compliance.web.forms.base import KeyForm, Shown
from compliance.web.forms.fields import NO_CHOICE, DayField, LineField, Text

DAY = timedelta(days=1)


def start_of(day: date) -> datetime:
    """Return the moment at which a day begins in the workshop's zone."""
    return datetime.combine(day, time(), timezone.get_current_timezone())


def start_after(day: date) -> datetime:
    """Return the moment at which the day after begins: the first that belongs to the day no more."""
    return start_of(day + DAY)


def last_day_of(until: datetime) -> date:
    """Return the last day of what ends just before a moment."""
    return timezone.localdate(until - timedelta(microseconds=1))


class DaysForm(Shown):
    """From the beginning of a day through the end of a day."""

    since = DayField(label=_("From"))
    until = DayField(label=_("Through"))

    def clean(self) -> dict[str, Any]:
        cleaned: dict[str, Any] = super().clean() or self.cleaned_data
        if cleaned.get("since") and cleaned.get("until") and cleaned["until"] < cleaned["since"]:
            self.add_error("until", _("The period ends before it begins. Turn the two days round."))
        return cleaned

    @property
    def moments(self) -> tuple[datetime, datetime]:
        """Return when the period begins, and when it ends, which is not part of it."""
        return start_of(self.cleaned_data["since"]), start_after(self.cleaned_data["until"])

    @property
    def kept(self) -> dict[str, str]:
        """Return what was chosen, as an address says it."""
        return {name: str(value) for name, value in self.cleaned_data.items()}


class ThingAndDaysForm(DaysForm):
    """Something to look at and a period. What is not chosen is the ``usual`` thing, and this year so far."""

    name: ClassVar[str]
    label: ClassVar[Text]

    def __init__(self, choices: Sequence[tuple[str, Text]], usual: str, data: Mapping[str, Any]) -> None:
        today = timezone.localdate()
        default = {self.name: usual, "since": date(today.year, 1, 1).isoformat(), "until": today.isoformat()}
        super().__init__(default | {name: value for name, value in data.items() if value})
        errors = {"invalid_choice": NO_CHOICE}
        self.fields[self.name] = forms.ChoiceField(label=str(self.label), choices=choices, error_messages=errors)
        self.order_fields([self.name])


class MetalForm(ThingAndDaysForm):
    """A metal and a period."""

    name, label = "metal", _("Metal")


class ComponentForm(ThingAndDaysForm):
    """Anything that the books count, and a period."""

    name, label = "component", _("What")


class DifferenceForm(ComponentForm):
    """Two days to compare, for anything that the books count, or for everything."""

    EVERYTHING = "everything"

    def __init__(self, choices: Sequence[tuple[str, Text]], usual: str, data: Mapping[str, Any]) -> None:
        super().__init__([*choices, (self.EVERYTHING, _("everything"))], usual, data)
        self.fields["since"].label = _("At the beginning of")
        self.fields["until"].label = _("At the end of")

    @property
    def component(self) -> str | None:
        """Return the chosen component; None for everything."""
        chosen: str = self.cleaned_data["component"]
        return None if chosen == self.EVERYTHING else chosen


def neighbours(since: date, until: date) -> tuple[tuple[date, date], tuple[date, date]]:
    """Return the period before this one and the one after it: as many whole months, else as many days."""
    months = 12 * (until.year - since.year) + until.month - since.month + 1
    if since.day == 1 and (until + DAY).day == 1:
        return (_months_on(since, -months), since - DAY), (until + DAY, _months_on(until + DAY, months) - DAY)
    days = until - since
    return (since - DAY - days, since - DAY), (until + DAY, until + DAY + days)


def _months_on(first: date, months: int) -> date:
    """Return the first of a month some months before or after the first of another."""
    years, month = divmod(12 * first.year + first.month - 1 + months, 12)
    return date(years, month + 1, 1)


class CloseForm(KeyForm):
    """Through which day the books are closed."""

    until = DayField(label=_("Last day"), help_text=_("Everything that happened through its end is closed."))

    def clean_until(self) -> date:
        """Refuse a day that is not over."""
        day: date = self.cleaned_data["until"]
        if day >= timezone.localdate():
            raise ValidationError(_("This day is not over. Choose an earlier one."))
        return day


class ReopenForm(KeyForm):
    """Why a period is opened again."""

    reason = LineField(label=_("Reason"), max_length=200, help_text=_("It stays in the journal."))
