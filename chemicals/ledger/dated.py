"""What every vessel held at a moment: the books on a date."""

from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from django_scopes import scope

from chemicals.books.fold.state import EVERY, root
from chemicals.ledger import projection
from chemicals.ledger.models import Component, ComponentKind, Vessel
from chemicals.workshop.models import Membership


@dataclass(frozen=True)
class Balance:
    """What a vessel held of a component: base units with standard uncertainty; amount None is unknown.

    Of a vessel with an incomplete list there is one of everything else (component EVERY), of an unknown amount.
    """

    vessel: Vessel
    component: str
    kind: ComponentKind
    amount: int | None
    sd: int


def list_balances_before(
    member: Membership, moment: datetime, *, vessel: UUID | None = None, component: str = ""
) -> list[Balance]:
    """Return what the vessels of the member's workshop held just before a moment, by vessel and component.

    Four queries. Only of one vessel, and only of one component, where these are given.
    """
    with scope(workshop=member.workshop):
        wanted = None if vessel is None else [str(vessel)]
        state = projection.load_state_before((moment, 0), wanted)
        vessels = {str(row.uuid): row for row in Vessel.objects.order_by("name")}
        kinds = dict(Component.objects.values_list("code", "kind"))
    found = [
        Balance(vessels[name], code, ComponentKind(kinds[code]), held.amount, root(held.variance))
        for (name, code), held in state.holdings.items()
    ]
    found += [
        Balance(vessels[name], EVERY, ComponentKind.EVERYTHING, None, 0)
        for name, whole in state.vessels.items()
        if whole.incomplete
    ]
    order = list(ComponentKind)
    rows = sorted(found, key=lambda row: (row.vessel.name, order.index(row.kind), row.component))
    return [row for row in rows if component in ("", row.component)]
