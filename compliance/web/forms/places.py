"""Forms of limits of places, of what is kept apart, and of what was assessed."""

from datetime import date
from typing import Any

from django.utils.translation import gettext_lazy as _

from compliance.premises.models import Reach
from compliance.premises.sorts import list_sorts
from compliance.premises.violation_words import sort_name
from compliance.web.forms.base import WebForm
from compliance.web.forms.fields import AmountField, DayField, LineField, WordField


class SortField(WordField):
    """A sort of matter."""

    def __init__(self, **kwargs: Any) -> None:
        super().__init__([(sort, sort_name(sort)) for sort in list_sorts()], **kwargs)


class LineForm(WebForm):
    """Where a line was read, and when it was last compared."""

    citation = LineField(label=_("Where it was read"), max_length=200, help_text=_("The rule with its paragraph."))
    checked_on = DayField(
        label=_("Compared on"), help_text=_("The day on which somebody here last read it. After a year it is stale.")
    )

    def __init__(self, today: date, data: Any = None, **kwargs: Any) -> None:
        super().__init__(data, **kwargs)
        self.fields["checked_on"].initial = today


class LimitForm(LineForm):
    """How much of a sort may stand in a place."""

    amount = AmountField(
        ("volume", "mass"),
        label=_("At most"),
        example="20 L",
        help_text=_("A volume or a mass. Every container counts whole, however diluted."),
    )
    field_order = ("sort", "amount", "citation", "checked_on")

    def __init__(self, today: date, data: Any = None, **kwargs: Any) -> None:
        super().__init__(today, data, **kwargs)
        self.fields["sort"] = SortField(label=_("Of what"))
        self.order_fields(self.field_order)


class KeepApartForm(LineForm):
    """Two sorts that must not stand together."""

    field_order = ("first", "second", "reach", "citation", "checked_on")

    def __init__(self, today: date, data: Any = None, **kwargs: Any) -> None:
        super().__init__(today, data, **kwargs)
        self.fields["first"] = SortField(label=_("This"))
        self.fields["second"] = SortField(label=_("and that"))
        self.fields["reach"] = WordField(
            Reach.choices,
            label=_("never in"),
            help_text=_("A bund or duct counts where places name it."),
        )
        self.order_fields(self.field_order)


class AssessmentForm(WebForm):
    """What somebody decided of two sorts that stand together."""

    assessed_by = LineField(label=_("Assessed by"), max_length=120)
    until = DayField(label=_("Until"), help_text=_("The last day on which this holds; after it the alarm is back."))
    reason = LineField(label=_("Why it may stand so"), lines=3, max_length=1000)
