"""Imports of past records and of the register: keep a file, say what its columns mean, record all of it or nothing."""

from collections.abc import Sequence
from typing import Any

from django.db.models import QuerySet
from rest_framework.parsers import MultiPartParser
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.books import events
from chemicals.process.importing.columns import as_json, list_targets
from chemicals.process.importing.files import add_import, find_map, read_table
from chemicals.process.importing.reading import RowError
from chemicals.process.importing.register.columns import list_register_targets
from chemicals.process.importing.register.plan import Container, Plan, Planned, RegisterUnderstood
from chemicals.process.importing.understanding import Made, Understood
from chemicals.process.models import Import, Subject
from chemicals.process.selectors import get_import_for, list_imports_for
from chemicals.science.quantity import echo
from compliance.api.pagination import NewestFirst
from compliance.api.serializers import imports as shapes
from compliance.api.serializers.base import With
from compliance.api.views.base import ListCreateView, WorkshopView
from compliance.api.views.doors import echo_amounts
from compliance.clearance.importing import preview_import, record_import

SHOWN_ROWS = 10


class ImportsView(ListCreateView):
    """Files of past records and of the register, the latest first."""

    shape, input_class, pagination_class = shapes.ImportShape, shapes.ImportInput, NewestFirst
    parser_classes = (MultiPartParser,)

    def rows(self) -> QuerySet[Import]:
        """Return the files."""
        return list_imports_for(self.member)

    def create(self, said: dict[str, Any]) -> Import:
        """Keep a file, told by its content. Nothing is recorded; the same bytes are the same import of a subject."""
        file, subject = said["file"], Subject(said.get("subject") or Subject.ENTRIES)
        return add_import(actor=self.member, now=self.now, name=file.name, data=file.read(), subject=subject)


class ImportView(WorkshopView):
    """A file with its columns, what they seem to mean, and what they may mean."""

    shape = shapes.ImportDetail

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the file."""
        return self.respond(describe(get_import_for(self.member, kwargs["uuid"])))


def describe(found: Import) -> With:
    """Return a file with its columns."""
    table = read_table(found)
    chosen = find_map(found, table)
    of_register = found.subject == Subject.REGISTER
    return With(
        found,
        headings=table.headings,
        unread=table.unread,
        mapping=as_json(chosen),
        targets=list(list_register_targets(most=1) if of_register else list_targets(chosen.verbs, most=1)),
        errors=[RowError(*row) for row in found.errors],
    )


class ImportPreviewView(WorkshopView):
    """Says how the rows of a file are understood, and everything that is wrong. This writes nothing."""

    shape, input_class, statuses = shapes.UnderstoodShape, shapes.ColumnMapInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Return what the rows say."""
        found, chosen = get_import_for(self.member, kwargs["uuid"]), shapes.build_map(self.read_body(request))
        understood = preview_import(self.member, self.now, found, chosen)
        if isinstance(understood, RegisterUnderstood):
            return self.respond(With(understood, **_describe_plan(understood.made)))
        nothing: dict[str, Any] = {"makes": None, "substances": [], "places": [], "remarks": [], "rows_of_register": []}
        return self.respond(With(understood, entries=len(understood.made), first=_first_rows(understood), **nothing))


def _describe_plan(plan: Plan) -> dict[str, Any]:
    """Return what a file of the register would make, and its first rows."""
    return {
        "entries": sum(each.amount is not None for each in plan.containers),
        "first": [],
        "makes": plan.counts,
        "substances": [row.name for row in plan.substances],
        "places": list(plan.places),
        "rows_of_register": [
            _register_row(row, product, containers) for row, product, containers in plan.list_rows(SHOWN_ROWS)
        ],
    }


def _register_row(row: int, product: Planned, containers: Sequence[Container]) -> dict[str, Any]:
    revision = product.revision
    return {
        "row": row,
        "product": revision.product.name,
        "supplier": revision.product.supplier,
        "state": product.state,
        "composition": [f"{line.substance.name} {line.typed}" for line in product.lines],
        "hazard_classes": revision.hazard_classes,
        "statements": revision.statements,
        "containers": [_container(each) for each in containers],
    }


def _container(each: Container) -> dict[str, Any]:
    place, amount = each.vessel.place, each.amount
    return {
        "vessel": each.vessel,
        "place": each.new_place or ("" if place is None else place.name),
        "amount": amount and {"field": "amount", "typed": amount.typed, "understood": echo(amount)},
        "lot": each.lot,
        "received_on": each.received_on,
    }


def _first_rows(understood: Understood) -> list[dict[str, Any]]:
    made = sorted(understood.made, key=lambda each: each.said.row)[:SHOWN_ROWS]
    return [_row(each) for each in made]


def _row(made: Made) -> dict[str, Any]:
    return {
        "row": made.said.row,
        "verb": made.said.data.verb,
        "uuid": made.said.key,
        "occurred_at": made.occurred.at,
        "precision": made.occurred.precision,
        "echo": list(echo_amounts(made.said.data)),
        "payload": events.encode(made.event),
    }


class ImportRecordView(WorkshopView):
    """Records all that a file says, or nothing.

    201 when they are recorded, 202 when the file is large and a job does it, 200 when it was imported before. What is
    wrong is said by row and column: ``rows.7.Amount``.
    """

    shape, input_class, statuses = shapes.ImportShape, shapes.ColumnMapInput, (201, 200, 202)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Write the entries."""
        found, chosen = get_import_for(self.member, kwargs["uuid"]), shapes.build_map(self.read_body(request))
        done = record_import(actor=self.member, now=self.now, upload=found, chosen=chosen)
        status = 202 if done.imported_at is None else 201 if found.imported_at is None else 200
        return self.respond(done, status)
