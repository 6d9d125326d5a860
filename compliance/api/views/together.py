"""Several records in one request, all of them or none: a morning's readings, the day sheets of a week."""

from typing import Any

from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.journal.selectors import find_cancelled
from chemicals.process.inputs import INPUTS
from compliance.api.keys import read_key
from compliance.api.serializers import together as shapes
from compliance.api.serializers.doors import build_input, build_occurred
from compliance.api.views.base import WorkshopView
from compliance.api.views.doors import tell_preview
from compliance.api.views.entries import name_vessels
from compliance.clearance.together import Said, preview_all, record_all


class RecordAllView(WorkshopView):
    """Writes several entries, all of them or none; errors stand under records.NUMBER, by the fields of the verb.

    Each finds the books as those before it have left them. The same key with the same body returns them again.
    """

    shape, input_class, statuses, needs_key = shapes.EntriesShape, shapes.RecordsInput, (201, 200), True

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Write the entries."""
        key, said = read_key(request), _read_said(self, request)
        found = record_all(actor=self.member, now=self.now, key=key, said=said)
        entries = [appended.entry for appended in found]
        status = 201 if any(appended.is_new for appended in found) else 200
        return self.respond({"entries": entries}, status, cancelled=find_cancelled(entries))


class PreviewAllView(WorkshopView):
    """Says of several records what would follow from each, and writes nothing."""

    shape, input_class, statuses = shapes.PreviewsShape, shapes.RecordsInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Return the verdicts."""
        said = _read_said(self, request)
        found = preview_all(self.member, self.now, said)
        previews = [tell_preview(each, one.data) for each, one in zip(found, said, strict=True)]
        return self.respond({"previews": previews}, vessels=name_vessels(self.member))


def _read_said(view: WorkshopView, request: Request) -> list[Said]:
    return [
        Said(
            data=build_input(INPUTS[row["verb"]], row["data"]),
            occurred=build_occurred(row["data"].get("occurred_at"), view.member.workshop),
            already_happened=row["data"].get("already_happened", False),
            attachments=tuple(row["data"].get("attachments", ())),
        )
        for row in view.read_body(request)["records"]
    ]
