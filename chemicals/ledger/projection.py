"""Between the fold's state and the tables: what vessels hold and remember, now, at any moment, at the end of a period.

All functions run inside the workshop's scope; those that write, inside a transaction. What followed from each entry
stands in ``followed``.
"""

from collections.abc import Collection, Iterable, Mapping
from datetime import datetime
from typing import Any, TypeVar

from django.db.models import OuterRef, Q, QuerySet, Subquery

from chemicals.books.events import GROSS_MASS, SPECIES, VOLUME
from chemicals.books.fold.state import EVERY, Holding, State, Vessel
from chemicals.ledger import models
from chemicals.ledger.models import ComponentKind
from chemicals.science.formula import METALS
from chemicals.workshop.models import Workshop

BATCH = 2000
"""How many rows are written at once."""

Order = tuple[datetime, int]
"""A place in the fold: when it happened, then in which order it was recorded."""

HELD = ("amount", "variance", "known_part")
"""The columns of a Holding of the fold, in Holding, Content and ClosingHolding."""


class Names:
    """Row ids of vessels and components by the names that the fold uses."""

    def __init__(self, workshop: Workshop, components: Iterable[str], vessels: Iterable[str] | None = None) -> None:
        rows = models.Vessel.objects.all() if vessels is None else models.Vessel.objects.filter(uuid__in=list(vessels))
        self.vessels = {str(uuid): pk for uuid, pk in rows.values_list("uuid", "pk")}
        self.components = dict(models.Component.objects.values_list("code", "pk"))
        for code in sorted(set(components) - set(self.components)):
            component = models.Component.objects.create(workshop=workshop, code=code, kind=_kind(code))
            self.components[code] = component.pk

    @property
    def known(self) -> set[str]:
        """Return every vessel and component that has a row."""
        return {*self.vessels, *self.components}


def _kind(code: str) -> ComponentKind:
    special = {
        VOLUME: ComponentKind.VOLUME,
        GROSS_MASS: ComponentKind.GROSS_MASS,
        EVERY: ComponentKind.EVERYTHING,
        **dict.fromkeys(SPECIES, ComponentKind.SPECIES),
        **dict.fromkeys(METALS, ComponentKind.METAL),
    }
    return special.get(code, ComponentKind.SOLUTE)


def load_state(workshop: Workshop, vessels: Iterable[str] | None = None) -> State:
    """Return what the named vessels (all, if none are given) hold and remember now. Two queries."""
    state = State()
    holdings, memories = models.Holding.objects.all(), models.Memory.objects.all()
    if vessels is not None:
        names = list(vessels)
        holdings, memories = holdings.filter(vessel__uuid__in=names), memories.filter(vessel__uuid__in=names)
    for vessel, component, *held in holdings.values_list("vessel__uuid", "component__code", *HELD):
        state.put(str(vessel), component, Holding(*held))
    for vessel, incomplete, poured in memories.values_list("vessel__uuid", "incomplete", "poured"):
        state.put_vessel(str(vessel), Vessel(incomplete, frozenset(poured)))
    return state


def load_state_before(order: Order, vessels: Collection[str] | None = None) -> State:
    """Return the fold's whole state just before a place in the fold (of the named vessels, if given). Two queries.

    The last rows of Content before a place are the state there. Every vessel and component that has a row of Content
    has one in Holding or, for the vessel as a whole, in Memory: from these the last rows are looked up by their index.
    """
    rows = models.Content.objects.filter(vessel=OuterRef("vessel"), occurred_at__lte=order[0])
    before = rows.filter(Q(occurred_at__lt=order[0]) | Q(sequence__lt=order[1])).order_by("-occurred_at", "-sequence")
    every = Subquery(models.Component.objects.filter(code=EVERY).values("pk")[:1])
    held = models.Holding.objects.annotate(last=_last(before.filter(component=OuterRef("component"))))
    seen = models.Memory.objects.annotate(last=_last(before.filter(component=every)))
    state = State()
    pairs: QuerySet[Any]
    for pairs in (held, seen):
        found = pairs if vessels is None else pairs.filter(vessel__uuid__in=list(vessels))
        put_rows(state, models.Content.objects.filter(pk__in=Subquery(found.values("last"))))
    return state


def _last(rows: QuerySet[models.Content]) -> Subquery:
    return Subquery(rows.values("pk")[:1])


def load_closing_state(period: models.Period | None) -> State:
    """Return the state at the end of a closed period; before the first one everything is empty. One query at most."""
    state = State()
    if period is not None:
        put_rows(state, models.ClosingHolding.objects.filter(period=period))
    return state


def put_rows(state: State, rows: QuerySet[Any]) -> None:
    """Put rows of Content, or of ClosingHolding, into a state."""
    for vessel, component, poured, *held in rows.values_list("vessel__uuid", "component__code", "poured", *HELD):
        if component == EVERY:
            state.put_vessel(str(vessel), read_vessel(held[0], poured))
        else:
            state.put(str(vessel), component, Holding(*held))


def read_vessel(amount: int | None, poured: Iterable[str] | None) -> Vessel:
    """Return what a row of everything else says; version 1 of the fold did not keep there what was poured in."""
    return Vessel(amount is None, frozenset(poured or ()))


def write_closing_state(period: models.Period, state: State) -> None:
    """Keep a state as the end of a period."""
    names = Names(period.workshop, {EVERY, *(component for _, component in state.holdings)})
    wholes = {
        (name, EVERY): (Holding(None if vessel.incomplete else 0), sorted(vessel.poured))
        for name, vessel in state.vessels.items()
    }
    parts = {key: (holding, None) for key, holding in state.holdings.items()}
    models.ClosingHolding.objects.bulk_create(
        (
            models.ClosingHolding(
                workshop_id=period.workshop_id,
                period=period,
                vessel_id=names.vessels[vessel],
                component_id=names.components[component],
                poured=poured,
                **_columns(holding),
            )
            for (vessel, component), (holding, poured) in {**parts, **wholes}.items()
        ),
        batch_size=BATCH,
    )


def _columns(holding: Holding) -> dict[str, int | None]:
    return {"amount": holding.amount, "variance": holding.variance, "known_part": holding.known_part}


def write_touched(workshop: Workshop, state: State, names: Names) -> None:
    """Write the holdings and memories that the last entry touched."""
    holdings = {key: state.holding(*key) for key in state.touched if key[1] != EVERY}
    memories = {vessel: state.vessel(vessel) for vessel, component in state.touched if component == EVERY}
    _upsert_holdings(workshop, holdings, names)
    write_memories(workshop, memories, names)


def replace_holdings(workshop: Workshop, state: State, names: Names) -> None:
    """Make holdings and memories those of the state: what differs is written, what nothing speaks of vanishes."""
    now = load_state(workshop)
    for vessel, component in now.holdings.keys() - state.holdings.keys():
        models.Holding.objects.filter(vessel__uuid=vessel, component__code=component).delete()
    models.Memory.objects.filter(vessel__uuid__in=now.vessels.keys() - state.vessels.keys()).delete()
    _upsert_holdings(workshop, _differing(state.holdings, now.holdings), names)
    write_memories(workshop, _differing(state.vessels, now.vessels), names)


def add_missing_holdings(workshop: Workshop, state: State, names: Names) -> None:
    """Give a row to whatever the state speaks of and the tables do not: from these rows states are looked up."""
    now = load_state(workshop)
    _upsert_holdings(workshop, {key: state.holdings[key] for key in state.holdings.keys() - now.holdings.keys()}, names)
    write_memories(workshop, {name: state.vessels[name] for name in state.vessels.keys() - now.vessels.keys()}, names)


Key = TypeVar("Key")
Value = TypeVar("Value")


def _differing(wanted: Mapping[Key, Value], kept: Mapping[Key, Value]) -> dict[Key, Value]:
    return {key: value for key, value in wanted.items() if kept.get(key) != value}


def _upsert_holdings(workshop: Workshop, holdings: Mapping[tuple[str, str], Holding], names: Names) -> None:
    models.Holding.objects.bulk_create(
        (
            models.Holding(
                workshop=workshop,
                vessel_id=names.vessels[vessel],
                component_id=names.components[component],
                **_columns(holding),
            )
            for (vessel, component), holding in holdings.items()
        ),
        batch_size=BATCH,
        update_conflicts=True,
        unique_fields=["vessel", "component"],
        update_fields=HELD,
    )


def write_memories(workshop: Workshop, vessels: Mapping[str, Vessel], names: Names) -> None:
    """Write what is known of vessels as a whole."""
    models.Memory.objects.bulk_create(
        (
            models.Memory(
                workshop=workshop,
                vessel_id=names.vessels[name],
                incomplete=vessel.incomplete,
                poured=sorted(vessel.poured),
            )
            for name, vessel in vessels.items()
        ),
        batch_size=BATCH,
        update_conflicts=True,
        unique_fields=["vessel"],
        update_fields=["incomplete", "poured"],
    )
