"""Forms of empty containers: what became of one."""

from typing import Any

from django.utils.translation import gettext_lazy as _

from chemicals.ledger.models import LONGEST_NOTE
from compliance.premises.empties import Empty
from compliance.web.forms.base import WebForm
from compliance.web.forms.fields import FlagField, LineField


class PutAwayForm(WebForm):
    """What became of an empty container, and that somebody looked where nothing is entered."""

    note = LineField(
        label=_("What became of it"),
        required=False,
        max_length=LONGEST_NOTE,
        help_text=_("For example: rinsed three times and reused, rubbish, returned to the supplier."),
    )

    def __init__(self, empty: Empty | None, data: Any = None) -> None:
        super().__init__(data)
        if empty is not None and empty.must_ask:
            self.fields["confirmed"] = FlagField(
                label=_("I read its label and its sheet: it held nothing very toxic"),
                help_text=_("Nothing is entered of its hazards, so nobody but you can say."),
            )
