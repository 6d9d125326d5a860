"""Every list as a file: one exporter, a list of columns for each view."""

import csv
import io
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from datetime import date, datetime
from decimal import Decimal
from typing import Any

from django.http import Http404, HttpRequest, HttpResponse
from django.utils import timezone

FORMULA_SIGNS = ("=", "+", "-", "@", "\t", "\r")
"""A spreadsheet takes text that begins so for a formula; an apostrophe before it keeps it text."""


@dataclass(frozen=True)
class Column:
    """A column: its heading, and what stands in it for a row."""

    heading: str
    read: Callable[[Any], object]


Listed = tuple[Sequence[Column], Callable[[], Iterable[Any]]]
"""Columns of a list, and how to get its rows."""


def is_wanted(request: HttpRequest) -> bool:
    """Say whether the address asks for a list as CSV."""
    return request.GET.get("as") == "csv"


def wanted_file(request: HttpRequest, **lists: Listed) -> HttpResponse | None:
    """Return the list that the address asks for as CSV: the first, or the one named by ``list``. None: the page."""
    if not is_wanted(request):
        return None
    name = request.GET.get("list", next(iter(lists)))
    if name not in lists:
        raise Http404("no such list")
    columns, rows = lists[name]
    return to_csv(name.replace("_", "-"), columns, rows())


def to_csv(name: str, columns: Sequence[Column], rows: Iterable[Any]) -> HttpResponse:
    """Return a CSV file to keep: UTF-8 with a mark for spreadsheets, one line for each row, empty means unknown."""
    target = io.StringIO()
    writer = csv.writer(target)
    writer.writerow([column.heading for column in columns])
    writer.writerows([_cell(column.read(row)) for column in columns] for row in rows)
    headers = {"Content-Disposition": f'attachment; filename="{name}.csv"'}
    return HttpResponse("\ufeff" + target.getvalue(), content_type="text/csv; charset=utf-8", headers=headers)


def _cell(value: object) -> str:
    if value is None:
        return ""
    if isinstance(value, datetime):
        return timezone.localtime(value).isoformat(timespec="minutes")
    if isinstance(value, date):
        return value.isoformat()
    if isinstance(value, Decimal):
        return f"{value:f}"
    text = str(value)
    return f"'{text}" if isinstance(value, str) and text.startswith(FORMULA_SIGNS) else text


def grams(micrograms: int | None) -> Decimal | None:
    """Return exact grams."""
    return None if micrograms is None else Decimal(micrograms) / 10**6


def litres(nanolitres: int | None) -> Decimal | None:
    """Return exact litres."""
    return None if nanolitres is None else Decimal(nanolitres) / 10**9
