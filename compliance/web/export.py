"""Every list of a page as a file: the address of the page, and which of its lists in which format."""

from collections.abc import Callable, Iterable, Sequence
from typing import Any

from django.http import Http404, HttpRequest, HttpResponseBase

from compliance.documents.export import FORMATS, Column, Table, grams, litres, millimoles, send

__all__ = ["Column", "Listed", "grams", "litres", "millimoles", "wanted_file"]

Listed = tuple[Sequence[Column], Callable[[], Iterable[Any]]]
"""Columns of a list, and how to get its rows."""


def wanted_file(request: HttpRequest, *, about: str = "", **lists: Listed) -> HttpResponseBase | None:
    """Return the list that the address asks for as a file (``as=csv``, ``xlsx`` or ``jsonl``); None for the page.

    It is the first list, or the one named by ``list``. ``about`` ends the name of the file.
    """
    ending = request.GET.get("as", "")
    if ending not in FORMATS:
        return None
    name = request.GET.get("list", next(iter(lists)))
    if name not in lists:
        raise Http404("no such list")
    columns, rows = lists[name]
    return send(Table(name, columns, rows()), ending, about=about)
