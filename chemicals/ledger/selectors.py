"""Reads of the ledger: vessels, what they hold, balances on a date."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from django.db.models import Max, Q, QuerySet, Sum
from django_scopes import scope, scopes_disabled

from chemicals.books import fold
from chemicals.books.events import GROSS_MASS, VOLUME
from chemicals.books.fold.arithmetic import quotient
from chemicals.books.fold.state import EVERY, State, Transfer
from chemicals.jobs import models as jobs
from chemicals.journal.models import Entry
from chemicals.ledger import projection, recompute
from chemicals.ledger.codes import tidy_code
from chemicals.ledger.models import (
    Books,
    ClosingHolding,
    Component,
    ComponentKind,
    Content,
    Finding,
    Holding,
    Memory,
    Period,
    Posting,
    Vessel,
    VesselChange,
    VesselKind,
)
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership, Workshop

NANOLITRES_PER_LITRE = 10**9
ORDER = [kind.value for kind in ComponentKind]
"""In which order the kinds of components stand: metals first."""


def list_vessels_for(member: Membership, *kinds: VesselKind) -> QuerySet[Vessel]:
    """Return the vessels of the member's workshop (of the kinds, if given), by name. One query."""
    with scope(workshop=member.workshop):
        vessels = Vessel.objects.select_related("place", "product").order_by("name")
        return vessels.filter(kind__in=kinds) if kinds else vessels


def get_vessel_for(member: Membership, uuid: UUID) -> Vessel:
    """Return one vessel of the member's workshop."""
    try:
        return list_vessels_for(member).get(uuid=uuid)
    except Vessel.DoesNotExist as error:
        raise NotFoundError("There is no such vessel in this workshop.") from error


def find_workshop_of_code(code: str) -> Workshop | None:
    """Return the workshop in which a code was given out; whoever asks must be checked as its member next."""
    with scopes_disabled():
        vessel = Vessel.objects.filter(code=tidy_code(code)).select_related("workshop").first()
        return None if vessel is None else vessel.workshop


def get_vessel_by_code_for(member: Membership, code: str) -> Vessel:
    """Return the vessel that a typed or scanned code names."""
    try:
        return list_vessels_for(member).get(code=tidy_code(code))
    except Vessel.DoesNotExist as error:
        raise NotFoundError("No vessel of this workshop has this code.") from error


@dataclass(frozen=True)
class Held:
    """What a vessel holds of a component: base units, standard uncertainty; amount None is unknown."""

    component: str
    amount: int | None
    sd: int


def list_held(vessel: Vessel) -> list[Held]:
    """Return what a vessel holds now: volume and gross mass first, then metals. One query."""
    first = {VOLUME: 0, GROSS_MASS: 1}
    with scope(workshop=vessel.workshop):
        rows = Holding.objects.filter(vessel=vessel).values_list("component__code", "amount", "variance")
        held = [Held(code, amount, fold.state.root(variance)) for code, amount, variance in rows]
    return sorted(held, key=lambda row: (first.get(row.component, 2), row.component))


@dataclass(frozen=True)
class HeldMetal(Held):
    """A metal in a vessel, also per litre where the volume is known: ug/L with standard uncertainty, or None."""

    concentration: int | None
    concentration_sd: int


@dataclass(frozen=True)
class Contents:
    """What a vessel holds now. ``volume`` and ``mass`` None: nothing was ever recorded of it.

    ``incomplete``: there may be more in it than is listed.
    """

    volume: Held | None
    mass: Held | None
    metals: tuple[HeldMetal, ...]
    incomplete: bool

    @property
    def is_empty(self) -> bool:
        """Whether something was recorded of it, all of that is known, and nothing is left."""
        held = [part for part in (self.volume, self.mass, *self.metals) if part is not None]
        return bool(held) and not self.incomplete and all(part.amount is not None and part.amount <= 0 for part in held)


def list_contents_for(member: Membership, vessels: Iterable[int] | None = None) -> dict[int, Contents]:
    """Return what every vessel of the member's workshop holds, or those of these primary keys, by primary key.

    Two queries.
    """
    with scope(workshop=member.workshop):
        these = {} if vessels is None else {"vessel__in": list(vessels)}
        rows = Holding.objects.filter(**these).order_by("component__code")
        incomplete = set(Memory.objects.filter(incomplete=True, **these).values_list("vessel_id", flat=True))
    held: dict[int, list[Held]] = {}
    for vessel, code, amount, variance in rows.values_list("vessel_id", "component__code", "amount", "variance"):
        held.setdefault(vessel, []).append(Held(code, amount, fold.state.root(variance)))
    return {vessel: _contents(held.get(vessel, []), vessel in incomplete) for vessel in {*held, *incomplete}}


def read_contents(vessel: Vessel) -> Contents:
    """Return what one vessel holds now. Two queries."""
    return _contents(list_held(vessel), read_memory(vessel)[0])


def _contents(held: list[Held], incomplete: bool) -> Contents:  # noqa: FBT001  (one of two facts of a vessel)
    by_code = {row.component: row for row in held}
    volume, mass = by_code.pop(VOLUME, None), by_code.pop(GROSS_MASS, None)
    return Contents(volume, mass, tuple(_per_litre(row, volume) for row in by_code.values()), incomplete)


def _per_litre(metal: Held, volume: Held | None) -> HeldMetal:
    """Amount over volume, as if their uncertainties were independent."""
    if metal.amount is None or volume is None or volume.amount is None or volume.amount <= 0:
        return HeldMetal(metal.component, metal.amount, metal.sd, None, 0)
    per_litre, sd = quotient(metal.amount, metal.sd, volume.amount, volume.sd, NANOLITRES_PER_LITRE)
    return HeldMetal(metal.component, metal.amount, metal.sd, per_litre, sd)


def is_known_empty(vessel: Vessel) -> bool:
    """Say whether the books know that a vessel holds nothing: everything known, and none of it left. Two queries."""
    if read_memory(vessel)[0]:
        return False
    return all(row.amount is not None and row.amount <= 0 for row in list_held(vessel))


def list_changes_of(vessel: Vessel) -> QuerySet[VesselChange]:
    """Return what was changed of a vessel without anything being poured, the latest first. One query."""
    with scope(workshop=vessel.workshop):
        changes = VesselChange.objects.filter(vessel=vessel).select_related("changed_by__user")
        return changes.order_by("-changed_at", "-pk")


def read_memory(vessel: Vessel) -> tuple[bool, frozenset[str]]:
    """Return whether the vessel's list is incomplete, and what was poured in since it was last empty. One query."""
    with scope(workshop=vessel.workshop):
        memory = Memory.objects.filter(vessel=vessel).first()
    return (False, frozenset()) if memory is None else (memory.incomplete, frozenset(memory.poured))


def list_components_for(member: Membership) -> list[str]:
    """Return the codes of everything that the books of the member's workshop count, metals first. One query."""
    with scope(workshop=member.workshop):
        rows = Component.objects.exclude(code=EVERY).values_list("kind", "code")
        return [code for _kind, code in sorted(rows, key=lambda row: (ORDER.index(row[0]), row[1]))]


def list_findings_for(member: Membership) -> QuerySet[Finding]:
    """Return the findings of the member's workshop, newest first. One query."""
    with scope(workshop=member.workshop):
        return Finding.objects.select_related("entry").order_by("-occurred_at", "-pk")


def list_findings_of(vessel: Vessel) -> QuerySet[Finding]:
    """Return the findings that concern a vessel, newest first. One query."""
    with scope(workshop=vessel.workshop):
        mine = Finding.objects.filter(Q(source=str(vessel.uuid)) | Q(target=str(vessel.uuid)))
        return mine.select_related("entry").order_by("-occurred_at", "-pk")


def list_postings_of(entry: Entry) -> QuerySet[Posting]:
    """Return what followed from an entry, transfer by transfer. One query."""
    with scope(workshop=entry.workshop):
        postings = Posting.objects.filter(entry=entry).select_related("component", "vessel")
        return postings.order_by("transfer", "amount")


def list_transfers_of(entry: Entry) -> list[Transfer]:
    """Return what followed from an entry as movements between ends: vessels by uuid, or boundaries. One query."""
    pairs: dict[int, list[Posting]] = {}
    for posting in list_postings_of(entry):
        pairs.setdefault(posting.transfer, []).append(posting)
    return [
        Transfer(taker.component.code, _end(giver), _end(taker), taker.amount, taker.sd, taker.basis)
        for giver, taker in pairs.values()
    ]


def _end(posting: Posting) -> str:
    return posting.boundary if posting.vessel is None else str(posting.vessel.uuid)


def get_balances_before(workshop: Workshop, before: datetime) -> dict[tuple[str, str], int | None]:
    """Return (vessel uuid, component) -> what it held just before a moment; None is unknown.

    Four queries, one more if anything ever was unknown. Amounts are sums of postings; what was unknown at the moment
    is looked up where there ever was an unknown.
    """
    with scope(workshop=workshop):
        rows = (
            Posting.objects.filter(vessel__isnull=False, occurred_at__lt=before)
            .order_by()
            .values_list("vessel_id", "component_id")
            .annotate(total=Sum("amount"))
        )
        sums = {(vessel, component): total for vessel, component, total in rows}
        unknown = _unknown_before(before)
        return _with_names(workshop, {**sums, **unknown})


def _unknown_before(before: datetime) -> dict[tuple[int, int], int | None]:
    """Return the pairs whose last content at that moment was unknown."""
    ever = set(
        Content.objects.filter(amount=None, occurred_at__lt=before).order_by().values_list("vessel_id", "component_id")
    )
    if not ever:
        return {}
    last: dict[tuple[int, int], int | None] = {}
    contents = Content.objects.filter(
        vessel_id__in={vessel for vessel, _ in ever},
        component_id__in={component for _, component in ever},
        occurred_at__lt=before,
    ).order_by("occurred_at", "sequence")
    for vessel, component, amount in contents.values_list("vessel_id", "component_id", "amount"):
        last[vessel, component] = amount
    return {pair: None for pair in ever if last[pair] is None}


def _with_names(workshop: Workshop, rows: Mapping[tuple[int, int], int | None]) -> dict[tuple[str, str], int | None]:
    vessels = {pk: str(uuid) for pk, uuid in workshop.vessels.values_list("pk", "uuid")}
    components = dict(workshop.components.values_list("pk", "code"))
    return {(vessels[vessel], components[component]): amount for (vessel, component), amount in rows.items()}


def load_state(workshop: Workshop, vessels: tuple[str, ...]) -> State:
    """Return the fold's state of the named vessels, to try out an entry without writing it. Two queries."""
    with scope(workshop=workshop):
        return projection.load_state(workshop, vessels)


def get_last_change(workshop: Workshop) -> datetime | None:
    """Return when the latest matter entry of the books occurred."""
    with scope(workshop=workshop):
        last: datetime | None = Posting.objects.aggregate(last=Max("occurred_at"))["last"]
        return last


def list_periods_for(member: Membership) -> QuerySet[Period]:
    """Return the closed periods of the member's workshop, the latest first, superseded ones too. One query."""
    with scope(workshop=member.workshop):
        rows = Period.objects.select_related("closing__member__user", "reopening__member__user")
        return rows.order_by("-until", "-closing__sequence")


def get_period_for(member: Membership, uuid: UUID) -> Period:
    """Return one closed period of the member's workshop, by the uuid of its closing entry."""
    try:
        return list_periods_for(member).get(closing__uuid=uuid)
    except Period.DoesNotExist as error:
        raise NotFoundError("There is no such period in this workshop.") from error


def list_closing_holdings_of(period: Period) -> QuerySet[ClosingHolding]:
    """Return what every vessel held at the end of a closed period, by vessel. One query.

    A row of everything else is there only where the list was incomplete.
    """
    with scope(workshop=period.workshop):
        rows = ClosingHolding.objects.filter(period=period).exclude(component__code=EVERY, amount__isnull=False)
        return rows.select_related("vessel", "component").order_by(
            "vessel__name", "-component__kind", "component__code"
        )


def get_closed_until(workshop: Workshop) -> datetime | None:
    """Return the moment before which the books are closed; None if no period is. One query."""
    with scope(workshop=workshop):
        last = recompute.get_last_close()
        return None if last is None else last.until


@dataclass(frozen=True)
class Recomputing:
    """The books say what happened before ``until``; a job works on the rest.

    ``done`` of ``total`` entries are folded. ``failed``: the job has given up; remove the cause that it names, then run
    `manage.py work --retry-failed`.
    """

    until: datetime
    job: UUID
    done: int
    total: int
    failed: bool


def get_recomputed_to(workshop: Workshop) -> Recomputing | None:
    """Return up to when the books stand while a job recomputes them; None: they say all. One query."""
    with scope(workshop=workshop):
        books = Books.objects.select_related("job").filter(job__isnull=False).first()
    if books is None or books.job is None or books.recomputed_to is None:
        return None
    job = books.job
    return Recomputing(
        books.recomputed_to, job.pk, job.progress_done, job.progress_total, job.state == jobs.State.FAILED
    )


def list_outdated_books() -> list[Workshop]:
    """Return the workshops whose books another version of the fold kept: `manage.py upgrade` folds them again."""
    with scopes_disabled():
        books = Books.objects.exclude(fold_version=fold.VERSION).select_related("workshop").order_by("workshop")
        return [row.workshop for row in books]
