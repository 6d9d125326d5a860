"""The books as files, streamed: the same columns as on the page Export."""

from typing import ClassVar

from django.http import StreamingHttpResponse
from rest_framework.request import Request

from compliance.api.serializers.entries import ExportQuery
from compliance.api.views.base import WorkshopView
from compliance.api.views.entries import read_search
from compliance.documents.books import BOOKS
from compliance.documents.export import FORMATS, send


class ExportView(WorkshopView):
    """Base of the exports: one of the books as a file."""

    query_class = ExportQuery
    media_types = tuple(media_type.partition(";")[0] for _write, media_type in FORMATS.values())
    read_conflicts = True
    book: ClassVar[str]

    def get(self, request: Request, **kwargs: object) -> StreamingHttpResponse:
        """Send the file."""
        zone = self.member.workshop.zone
        table = BOOKS[self.book](self.member, read_search(self.query, zone), self.now)
        return send(table, self.query.get("as", "jsonl"), about=self.now.astimezone(zone).date().isoformat())


class JournalExportView(ExportView):
    """The journal as a file: every entry with all that it says, in order of recording.

    The first of the JSON lines says at which end of the chain the file was taken. Each other line holds an entry:
    what stands between ``{"body":`` and ``,"previous_hash":`` are its bytes, and ``hash`` is SHA-256 of a byte 01, the
    32 bytes of ``previous_hash``, and these bytes. The first entry takes 32 zero bytes as the hash before it.
    """

    book = "journal"


class PostingsExportView(ExportView):
    """What followed from the entries as a file: one row for each end of a movement; those of a transfer sum to zero.

    Of a vessel or a component that is asked for only its own rows. Amounts stand in base units, and in grams,
    millilitres or millimoles, each with its standard uncertainty.
    """

    book = "postings"


class BalancesExportView(ExportView):
    """What every vessel held of every component as a file, at the end of the day ``end``, now if it is left out.

    Of the filters only ``vessel``, ``component`` and ``end`` count. An unknown amount is empty, and said so.
    """

    book = "balances"


VIEWS: dict[str, type[ExportView]] = {
    view.book: view for view in (JournalExportView, PostingsExportView, BalancesExportView)
}
