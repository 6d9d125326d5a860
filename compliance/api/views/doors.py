"""The two doors: preview says what would follow and writes nothing, record writes. One view for each verb."""

from collections.abc import Iterator
from typing import Any, ClassVar

from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.books import events
from chemicals.books.occurred import MINUTE
from chemicals.process import fields as kinds
from chemicals.process.inputs import INPUTS, Input
from chemicals.science.quantity import Quantity, echo
from compliance.api.keys import read_key
from compliance.api.serializers.base import With
from compliance.api.serializers.doors import DOORS, PreviewShape, build_input, build_occurred
from compliance.api.serializers.entries import EntryDetail
from compliance.api.views.base import WorkshopView
from compliance.api.views.entries import name_vessels, read_entry
from compliance.clearance.selectors import Preview, preview
from compliance.clearance.services import record


class PreviewView(WorkshopView):
    """Base of the previews."""

    shape, statuses = PreviewShape, (200,)
    verb: ClassVar[type[Input]]

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Return the verdict, the amounts as understood, and what would follow."""
        said = self.read_body(request)
        data = build_input(self.verb, said)
        occurred = build_occurred(said.get("occurred_at"), self.member.workshop)
        found = preview(self.member, self.now, data, occurred)
        return self.respond(tell_preview(found, data), vessels=name_vessels(self.member))


def tell_preview(found: Preview, data: Input) -> With:
    """Return the answer with the amounts as understood, and what would follow."""
    return With(found.answer, echo=list(echo_amounts(data)), **_would_follow(found))


def _would_follow(found: Preview) -> dict[str, Any]:
    trial = found.trial
    return {
        "verdict": found.answer.clearance.verdict,
        "occurred_at": trial.occurred and trial.occurred.at,
        "precision": trial.occurred.precision if trial.occurred else MINUTE,
        "payload": events.encode(trial.event),
        "transfers": trial.folded.transfers,
        "findings": trial.folded.findings,
    }


def echo_amounts(data: Any, path: str = "") -> Iterator[dict[str, str]]:
    """Yield every amount of an input with what it was taken for, rows included."""
    for name, kind in kinds.describe(type(data)):
        value = getattr(data, name)
        if isinstance(value, Quantity):
            yield {"field": path + name, "typed": value.typed, "understood": echo(value)}
        if isinstance(kind, kinds.RowsField):
            for number, row in enumerate(value):
                yield from echo_amounts(row, f"{path}{name}.{number}.")


class RecordView(WorkshopView):
    """Base of the records."""

    shape, statuses, needs_key = EntryDetail, (201, 200), True
    verb: ClassVar[type[Input]]

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Write the entry; the same key with the same body returns it again and writes nothing."""
        key, said = read_key(request), self.read_body(request)
        appended = record(
            actor=self.member,
            now=self.now,
            key=key,
            data=build_input(self.verb, said),
            occurred=build_occurred(said.get("occurred_at"), self.member.workshop),
            already_happened=said.get("already_happened", False),
            attachments=said.get("attachments", ()),
        )
        whole, context = read_entry(appended.entry, self.member)
        return self.respond(whole, 201 if appended.is_new else 200, **context)


def _build_views(base: type[WorkshopView], doc: str) -> dict[str, type[WorkshopView]]:
    return {
        name: type(
            f"{verb.__name__.removesuffix('Input')}{base.__name__}",
            (base,),
            {"verb": verb, "input_class": DOORS[name], "__doc__": doc.format(doc=verb.__doc__)},
        )
        for name, verb in INPUTS.items()
    }


PREVIEWS = _build_views(PreviewView, "{doc} This only says what would follow.")
RECORDS = _build_views(RecordView, "{doc} This writes the entry.")
"""One view for each verb, by its name in addresses."""
