"""What can be recorded at a vessel: what is done most as large buttons, the rest by what it is about."""

from collections.abc import Mapping, Sequence

from django.utils.translation import gettext_lazy as _

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.fields import Text, VesselField, describe
from chemicals.process.inputs import INPUTS

BENCH: Mapping[str, Sequence[str]] = {
    VesselKind.BATH: ("run", "level-reading", "top-up", "analysis"),
    VesselKind.RINSE: ("drum-off", "top-up", "level-reading", "analysis"),
    VesselKind.STOCK: ("receipt", "count"),
    VesselKind.ANODE: ("receipt", "count"),
    VesselKind.FILTER: ("filter", "drum-off"),
    VesselKind.CARBON: ("carbon", "drum-off"),
    VesselKind.RESIN: ("resin", "drum-off"),
    VesselKind.RECOVERY_CELL: ("dummy", "count"),
    VesselKind.RACKS: ("strip", "count"),
    VesselKind.SLUDGE: ("sludge", "drum-off"),
    VesselKind.WASTE: ("drum-off", "level-reading", "analysis"),
}
"""What is done most at a vessel of each kind."""

GROUPS: Sequence[tuple[Text, Sequence[str]]] = (
    (
        _("Read and count"),
        ("reading", "level-reading", "weight-reading", "density-reading", "count", "analysis", "sample"),
    ),
    (_("Load and current"), ("run", "day-sheet", "dummy", "strip")),
    (_("Make up and keep up"), ("make-up", "top-up", "filter", "carbon", "resin", "sludge", "clean-out", "treatment")),
    (_("Move and waste"), ("move", "drum-off", "hand-over", "discharge", "spill")),
    (_("Start and set right"), ("opening", "correction")),
)
"""Everything else, by what it is about."""

BY_ROUTE = ("run", "day-sheet")
"""Verbs that name tanks by their route."""
Verb = tuple[str, Text]
"""A verb as in addresses, and what its button says."""


def list_bench(vessel: Vessel) -> list[Verb]:
    """Return the large buttons; nothing is bought for a set without a product."""
    possible = [verb for verb in BENCH[vessel.kind] if verb != "receipt" or vessel.product is not None]
    return [(verb, INPUTS[verb].title) for verb in possible]


def list_groups(vessel: Vessel) -> list[tuple[Text, list[Verb]]]:
    """Return the rarer verbs that fit a vessel, group by group; empty groups are left out."""
    often = BENCH[vessel.kind]
    found = [
        (label, [(verb, INPUTS[verb].title) for verb in verbs if verb not in often and _fits(verb, vessel)])
        for label, verbs in GROUPS
    ]
    return [(label, verbs) for label, verbs in found if verbs]


def _fits(verb: str, vessel: Vessel) -> bool:
    """Say whether a verb may name a vessel of this kind."""
    if verb in BY_ROUTE:
        return vessel.kind in (VesselKind.BATH, VesselKind.RINSE)
    kinds = [kind.kinds for _name, kind in describe(INPUTS[verb]) if isinstance(kind, VesselField)]
    return any(vessel.kind in some for some in kinds)
