"""Pages that stay where they are while rows are added: a cursor points at a row, not at a count."""

from collections.abc import Mapping
from typing import Any

from django.utils.translation import gettext_lazy as _
from rest_framework.exceptions import NotFound, ValidationError
from rest_framework.pagination import Cursor, CursorPagination
from rest_framework.request import Request

PAGE_SIZE, LARGEST_PAGE = 50, 200


class StableCursor(CursorPagination):
    """In order of creation, by a key that no two rows share."""

    page_size = PAGE_SIZE
    page_size_query_param = "page_size"
    max_page_size = LARGEST_PAGE
    ordering = "pk"

    def decode_cursor(self, request: Request) -> Cursor | None:
        """Return where the page begins; a cursor that this service did not give out is refused by its name."""
        try:
            cursor = super().decode_cursor(request)
        except NotFound as error:
            raise _refuse() from error
        if cursor is not None and (cursor.offset or not _is_key(cursor.position)):
            raise _refuse()
        return cursor

    def get_paginated_response_schema(self, schema: Mapping[str, Any]) -> dict[str, Any]:
        """Return the shape of a page."""
        link = {"type": ["string", "null"], "format": "uri"}
        return {
            "type": "object",
            "required": ["next", "previous", "results"],
            "properties": {
                "next": {**link, "description": str(_("Address of the next page; null on the last one."))},
                "previous": {**link, "description": str(_("Address of the page before; null on the first one."))},
                "results": {**schema, "description": str(_("The rows of this page."))},
            },
        }


class NewestFirst(StableCursor):
    """The latest first: what is added comes before the first page and moves none."""

    ordering = "-pk"


class EntryCursor(StableCursor):
    """Entries, the latest record first: their sequence has no gaps and never changes."""

    ordering = "-sequence"


def _is_key(position: object) -> bool:
    """Say whether a position is a row's number; a cursor without one points at the beginning."""
    text = "" if position is None else str(position)
    return position is None or (text.isascii() and text.isdigit() and len(text) <= 18)


def _refuse() -> ValidationError:
    return ValidationError({"cursor": [_("This is no cursor of this list. Follow next or previous of a page.")]})
