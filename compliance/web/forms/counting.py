"""Forms of a count day: where somebody counts, which code was scanned, what is there."""

from typing import Any

from django.utils.translation import gettext_lazy as _

from chemicals.process.counting.services import LONGEST_NOTE
from chemicals.process.inputs.base import UNCERTAINTY_HELP
from chemicals.process.models import Seen
from chemicals.workshop.models import Membership
from chemicals.workshop.selectors import list_places_for
from compliance.web.forms.base import WebForm
from compliance.web.forms.fields import AmountField, LineField, ThingField

LONGEST_CODE = 300
"""Characters of the address on a label, which some scanners type in full."""


class StartForm(WebForm):
    """Where somebody is about to count."""

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(data)
        places = [(place.uuid, place.name) for place in list_places_for(member)]
        self.fields["place"] = ThingField(places, empty=_("Everything"), required=False, label=_("Where"))
        self.fields["note"] = LineField(label=_("Note"), required=False, max_length=LONGEST_NOTE)


class CodeForm(WebForm):
    """The code on a container."""

    code = LineField(label=_("Code"), max_length=LONGEST_CODE)

    def __init__(self, data: Any = None, *, ready: bool = True) -> None:
        super().__init__(data)
        attrs = {"autocapitalize": "characters", "autocomplete": "off", "spellcheck": "false", "enterkeyhint": "go"}
        self.fields["code"].widget.attrs |= attrs | ({"autofocus": True} if ready else {})


class SeenForm(WebForm):
    """What is in the container; ``said`` is the button that was pressed."""

    details = frozenset({"sd", "remark"})
    amount = AmountField(
        ("mass", "volume"),
        required=False,
        label=_("What is there"),
        help_text=_("Without the container."),
        example="1.2 kg, 0.8 L",
    )
    sd = AmountField(
        ("mass", "volume"), required=False, label=_("Uncertainty"), help_text=UNCERTAINTY_HELP, example="20 g"
    )
    remark = LineField(label=_("Remark"), required=False, max_length=LONGEST_NOTE)

    def __init__(self, data: Any = None, *, said: Seen | None = None) -> None:
        super().__init__(data)
        self.fields["amount"].widget.attrs |= {"autofocus": True, "inputmode": "text"}
        if said in (Seen.AGREES, Seen.MISSING):  # whatever was begun there is not meant
            del self.fields["amount"], self.fields["sd"]
