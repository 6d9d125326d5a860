"""What a person says of the books themselves: an entry was a mistake, a closed period was wrong."""

from dataclasses import dataclass
from uuid import UUID

from django.utils.translation import gettext_lazy as _

from chemicals.process.fields import (
    AmountField,
    ChoiceField,
    ComponentField,
    ReferenceField,
    RowsField,
    TextField,
    VesselField,
    use,
)
from chemicals.process.inputs.base import EVERYTHING, FORMULA_HELP, Input
from chemicals.science.quantity import Quantity

MORE, LESS = "more", "less"


@dataclass(frozen=True, kw_only=True)
class CancellationInput(Input):
    """An entry was a mistake."""

    verb = "cancellation"
    title = _("Cancel an entry")
    entry: UUID = use(ReferenceField(_("Entry"), to="entry"))
    reason: str = use(TextField(_("Reason"), longest=400))


@dataclass(frozen=True, kw_only=True)
class ChangeRow:
    """How much more or less of something is there than the books said."""

    metal: str = use(ComponentField(_("Metal or other substance"), bulk=True))
    change: str = use(
        ChoiceField(_("There is"), choices=((MORE, _("more than the books say")), (LESS, _("less than the books say"))))
    )
    amount: Quantity = use(
        AmountField(_("By how much"), dimensions=("mass", "volume", "amount_of_substance"), example="12 g")
    )
    sd: Quantity | None = use(
        AmountField(
            _("Uncertainty"), required=False, dimensions=("mass", "volume", "amount_of_substance"), example="0.5 g"
        )
    )
    expressed_as: str = use(TextField(_("Expressed as"), FORMULA_HELP, required=False, longest=80))


@dataclass(frozen=True, kw_only=True)
class CorrectionInput(Input):
    """An entry of a closed period was wrong: what it got wrong is set right now."""

    verb = "correction"
    title = _("Correct a closed period")
    entry: UUID = use(ReferenceField(_("Entry that was wrong"), to="entry"))
    vessel: UUID = use(VesselField(_("Vessel"), kinds=EVERYTHING))
    changes: tuple[ChangeRow, ...] = use(RowsField(_("Change"), of=ChangeRow, blank_rows=2))
    reason: str = use(TextField(_("Reason"), longest=400))
