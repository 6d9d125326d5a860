"""Between the fold's state and the tables. All functions run inside the workshop's scope and a transaction."""

from collections import Counter, defaultdict
from collections.abc import Iterable, Iterator, Mapping
from uuid import UUID

from django.db.models import Model

from chemicals.books import fold
from chemicals.books.events import BOUNDARIES, GROSS_MASS, VOLUME
from chemicals.books.fold.state import EVERY, Holding, State, Vessel
from chemicals.journal.models import Entry
from chemicals.ledger import models
from chemicals.ledger.models import ComponentKind
from chemicals.workshop.models import Workshop

BATCH = 2000


def load_state(workshop: Workshop, vessels: Iterable[str]) -> State:
    """Return the state of the named vessels. Two queries."""
    state = State()
    names = list(vessels)
    rows = models.Holding.objects.filter(vessel__uuid__in=names).values_list(
        "vessel__uuid", "component__code", "amount", "variance", "known_part"
    )
    for vessel, component, amount, variance, known_part in rows:
        state.put(str(vessel), component, Holding(amount, variance, known_part))
    memories = models.Memory.objects.filter(vessel__uuid__in=names).values_list("vessel__uuid", "incomplete", "poured")
    for vessel, incomplete, poured in memories:
        state.vessels[str(vessel)] = Vessel(incomplete, frozenset(poured))
    return state


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
    }
    return special.get(code, ComponentKind.METAL)


def _components(folded: fold.Folded) -> set[str]:
    return {t.component for t in folded.transfers} | {component for _, component, _ in folded.contents}


def _postings(entry: Entry, folded: fold.Folded, names: Names) -> Iterator[models.Posting]:
    for number, transfer in enumerate(folded.transfers):
        for end, amount in ((transfer.source, -transfer.amount), (transfer.target, transfer.amount)):
            yield models.Posting(
                workshop_id=entry.workshop_id,
                entry_id=entry.pk,
                transfer=number,
                component_id=names.components[transfer.component],
                vessel_id=None if end in BOUNDARIES else names.vessels[end],
                boundary=end if end in BOUNDARIES else "",
                amount=amount,
                sd=transfer.sd,
                basis=transfer.basis,
                occurred_at=entry.occurred_at,
            )


def _contents(entry: Entry, folded: fold.Folded, names: Names) -> Iterator[models.Content]:
    for vessel, component, holding in folded.contents:
        yield models.Content(
            workshop_id=entry.workshop_id,
            entry_id=entry.pk,
            vessel_id=names.vessels[vessel],
            component_id=names.components[component],
            occurred_at=entry.occurred_at,
            sequence=entry.sequence,
            amount=holding.amount,
            variance=holding.variance,
        )


def _findings(entry: Entry, folded: fold.Folded) -> Iterator[models.Finding]:
    for finding in folded.findings:
        yield models.Finding(
            workshop_id=entry.workshop_id,
            entry_id=entry.pk,
            code=finding.code,
            component=finding.component,
            source=finding.source,
            target=finding.target,
            occurred_at=entry.occurred_at,
        )


def write_incrementally(entry: Entry, state: State, folded: fold.Folded) -> None:
    """Write what followed from the newest entry, and the holdings that it touched."""
    ends = {end for transfer in folded.transfers for end in (transfer.source, transfer.target)}
    names = Names(entry.workshop, _components(folded), ends - BOUNDARIES | {vessel for vessel, _, _ in folded.contents})
    _write_followed([(entry, folded)], names)
    _upsert_holdings(entry.workshop, state, {key for key in state.touched if key[1] != EVERY}, names)
    _upsert_memories(
        entry.workshop, state, {vessel for vessel, component in state.touched if component == EVERY}, names
    )


def _write_followed(followed: Iterable[tuple[Entry, fold.Folded]], names: Names) -> None:
    pairs = list(followed)
    models.Posting.objects.bulk_create([row for e, f in pairs for row in _postings(e, f, names)], batch_size=BATCH)
    models.Content.objects.bulk_create([row for e, f in pairs for row in _contents(e, f, names)], batch_size=BATCH)
    models.Finding.objects.bulk_create([row for e, f in pairs for row in _findings(e, f)], batch_size=BATCH)


def _upsert_holdings(workshop: Workshop, state: State, keys: set[tuple[str, str]], names: Names) -> None:
    rows = [
        models.Holding(
            workshop=workshop,
            vessel_id=names.vessels[vessel],
            component_id=names.components[component],
            amount=state.holding(vessel, component).amount,
            variance=state.holding(vessel, component).variance,
            known_part=state.holding(vessel, component).known_part,
        )
        for vessel, component in sorted(keys)
    ]
    models.Holding.objects.bulk_create(
        rows,
        batch_size=BATCH,
        update_conflicts=True,
        unique_fields=["vessel", "component"],
        update_fields=["amount", "variance", "known_part"],
    )


def _upsert_memories(workshop: Workshop, state: State, vessels: set[str], names: Names) -> None:
    rows = [
        models.Memory(
            workshop=workshop,
            vessel_id=names.vessels[name],
            incomplete=state.vessel(name).incomplete,
            poured=sorted(state.vessel(name).poured),
        )
        for name in sorted(vessels)
    ]
    models.Memory.objects.bulk_create(
        rows, batch_size=BATCH, update_conflicts=True, unique_fields=["vessel"], update_fields=["incomplete", "poured"]
    )


def write_differences(workshop: Workshop, state: State, followed: Mapping[UUID, fold.Folded]) -> None:
    """Make the tables say what a full fold says, touching only the entries and holdings that differ."""
    names = Names(workshop, {component for folded in followed.values() for component in _components(folded)})
    entries = {entry.pk: entry for entry in Entry.objects.only("pk", "uuid", "workshop_id", "occurred_at", "sequence")}
    nothing = fold.Folded((), (), ())
    changed = [entry for entry in entries.values() if entry.pk in _differing(entries, followed, names)]
    for table in (models.Posting, models.Content, models.Finding):
        _delete(table, [entry.pk for entry in changed])
    _write_followed([(entry, followed.get(entry.uuid, nothing)) for entry in changed], names)
    _replace_holdings(workshop, state, names)


def _differing(entries: Mapping[int, Entry], followed: Mapping[UUID, fold.Folded], names: Names) -> set[int]:
    """Return the ids of the entries whose rows are not what they should be."""
    nothing = fold.Folded((), (), ())
    kept = stored_rows()
    return {
        pk
        for pk, entry in entries.items()
        if kept[pk] != expected_rows(entry, followed.get(entry.uuid, nothing), names)
    }


Row = tuple[object, ...]


def stored_rows() -> Mapping[int, Counter[Row]]:
    """Return the projected rows of the scope's workshop as counted plain tuples, by entry. Three queries."""
    rows: dict[int, Counter[Row]] = defaultdict(Counter)
    for table, fields in ROWS.items():
        for entry_id, *values in table._default_manager.values_list("entry_id", *fields).iterator(chunk_size=BATCH):
            rows[entry_id][table.__name__, *values] += 1
    return rows


ROWS: Mapping[type[Model], tuple[str, ...]] = {
    models.Posting: ("transfer", "component_id", "vessel_id", "boundary", "amount", "sd", "basis", "occurred_at"),
    models.Content: ("vessel_id", "component_id", "amount", "variance", "occurred_at", "sequence"),
    models.Finding: ("code", "component", "source", "target", "occurred_at"),
}


def expected_rows(entry: Entry, folded: fold.Folded, names: Names) -> Counter[Row]:
    """Return the rows that should be there for an entry, as counted plain tuples."""
    made: list[Model] = [
        *_postings(entry, folded, names),
        *_contents(entry, folded, names),
        *_findings(entry, folded),
    ]
    return Counter((type(row).__name__, *(getattr(row, field) for field in ROWS[type(row)])) for row in made)


def _delete(table: type[Model], entries: list[int]) -> None:
    for start in range(0, len(entries), BATCH):
        table._default_manager.filter(entry_id__in=entries[start : start + BATCH]).delete()


def _replace_holdings(workshop: Workshop, state: State, names: Names) -> None:
    wanted = {
        (names.vessels[vessel], names.components[component]): (holding.amount, holding.variance)
        for (vessel, component), holding in state.holdings.items()
    }
    surplus = [
        pk
        for pk, vessel, component in models.Holding.objects.values_list("pk", "vessel_id", "component_id")
        if (vessel, component) not in wanted
    ]
    models.Holding.objects.filter(pk__in=surplus).delete()
    _upsert_holdings(workshop, state, set(state.holdings), names)
    models.Memory.objects.exclude(vessel__uuid__in=list(state.vessels)).delete()
    _upsert_memories(workshop, state, set(state.vessels), names)
