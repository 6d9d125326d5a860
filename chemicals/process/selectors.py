"""Reads of the process: tanks, rack types, routes; trying out an entry without writing it."""

from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from django.db.models import Prefetch, QuerySet
from django_scopes import scope

from chemicals.books import fold
from chemicals.books.events import Acceptance, Analysis, Event, Run
from chemicals.books.occurred import Occurred
from chemicals.journal import selectors as journal
from chemicals.journal.models import Entry
from chemicals.ledger import selectors as ledger
from chemicals.ledger.models import Vessel
from chemicals.process.build import build
from chemicals.process.inputs import Input
from chemicals.process.models import Import, RackType, Route, RouteStep, Tank, TankChange
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership

RECENT_RUNS = 20
"""How far back the last run of a tank is looked for."""


@dataclass(frozen=True)
class Trial:
    """What would be recorded, and what would follow from it, at the end of the books as they stand."""

    event: Event
    occurred: Occurred | None
    folded: fold.Folded


def try_out(member: Membership, now: datetime, data: Input, occurred: Occurred | None) -> Trial:
    """Return what recording the input would do. Writes nothing; raises InvalidInputError as recording would."""
    with scope(workshop=member.workshop):
        built = build(member, now, data, occurred)
        built.require_here()
        state = ledger.load_state(member.workshop, built.event.vessels())
        return Trial(built.event, built.occurred, fold.fold_event(state, built.event))


def list_tanks_for(member: Membership) -> QuerySet[Tank]:
    """Return the baths and rinses of the member's workshop, by name. One query."""
    with scope(workshop=member.workshop):
        return Tank.objects.select_related("vessel__place", "anode", "racks").order_by("vessel__kind", "vessel__name")


def get_tank_of(vessel: Vessel) -> Tank | None:
    """Return the tank settings of a vessel, if it is a bath or a rinse."""
    with scope(workshop=vessel.workshop):
        return Tank.objects.filter(vessel=vessel).select_related("anode", "racks", "vessel").first()


def list_tank_changes_of(vessel: Vessel) -> QuerySet[TankChange]:
    """Return what was changed of how a tank is set up, the latest first. One query."""
    with scope(workshop=vessel.workshop):
        changes = TankChange.objects.filter(tank__vessel=vessel).select_related("changed_by__user")
        return changes.order_by("-changed_at", "-pk")


def list_open_analyses_for(member: Membership) -> list[tuple[Entry, Analysis]]:
    """Return the analyses that are neither accepted nor cancelled, newest first. One query."""
    rows = journal.list_unanswered_for(member, Analysis.KIND, Acceptance.KIND)
    return [(row, event) for row in rows if isinstance(event := journal.read_event(row), Analysis)]


def find_last_run(member: Membership, vessel: Vessel) -> Entry | None:
    """Return the latest recorded run through a tank that was not cancelled. Two queries."""
    runs = list(journal.list_entries_naming(member, vessel.uuid).filter(kind=Run.KIND)[:RECENT_RUNS])
    cancelled = journal.find_cancelled(runs)
    return next((run for run in runs if run.pk not in cancelled), None)


def list_rack_types_for(member: Membership) -> QuerySet[RackType]:
    """Return the rack types of the member's workshop, by name. One query."""
    with scope(workshop=member.workshop):
        return RackType.objects.order_by("name")


def list_routes_for(member: Membership) -> QuerySet[Route]:
    """Return the routes with their tanks, by name. Two queries."""
    with scope(workshop=member.workshop):
        steps = Prefetch("steps", RouteStep.objects.select_related("vessel").order_by("position"))
        return Route.objects.select_related("rack").prefetch_related(steps).order_by("name")


def list_routes_through(member: Membership, vessel: Vessel) -> QuerySet[Route]:
    """Return the routes that go through a tank, by name. Two queries."""
    return list_routes_for(member).filter(steps__vessel=vessel).distinct()


def get_rack_type_for(member: Membership, uuid: UUID) -> RackType:
    """Return one rack type of the member's workshop."""
    try:
        return list_rack_types_for(member).get(uuid=uuid)
    except RackType.DoesNotExist as error:
        raise NotFoundError("There is no such rack type in this workshop.") from error


def get_route_for(member: Membership, uuid: UUID) -> Route:
    """Return one route of the member's workshop."""
    try:
        return list_routes_for(member).get(uuid=uuid)
    except Route.DoesNotExist as error:
        raise NotFoundError("There is no such route in this workshop.") from error


def list_imports_for(member: Membership) -> QuerySet[Import]:
    """Return the files of past records of the member's workshop, the latest first. One query."""
    with scope(workshop=member.workshop):
        rows = Import.objects.select_related("file", "changed_by__user", "job", "workshop")
        return rows.order_by("-changed_at", "-pk")


def get_import_for(member: Membership, uuid: UUID) -> Import:
    """Return one file of past records of the member's workshop."""
    try:
        return list_imports_for(member).get(uuid=uuid)
    except Import.DoesNotExist as error:
        raise NotFoundError("There is no such import in this workshop.") from error
