"""Many rows into one table, by their columns: no object is made of rows that nobody looks at."""

from collections.abc import Callable, Iterable, Mapping, Sequence
from datetime import datetime
from functools import lru_cache
from itertools import islice
from typing import Any

from django.db import connection
from django.db.models import DateTimeField, JSONField, Model

from chemicals.ledger.fields import ExactIntegerField

BATCH = 2000
"""How many rows are sent at once."""

Row = tuple[Any, ...]


def insert_rows(table: type[Model], columns: Sequence[str], rows: Iterable[Row]) -> None:
    """Insert rows of values, in the order of the columns; call it inside a transaction.

    A column that is left out must have a default in the database, as the primary key does.
    """
    fields: list[Any] = [table._meta.get_field(name) for name in columns]
    quote = connection.ops.quote_name
    names = ", ".join(quote(field.column) for field in fields)
    marks = ", ".join(["%s"] * len(fields))
    sql = f"INSERT INTO {quote(table._meta.db_table)} ({names}) VALUES ({marks})"  # noqa: S608  (names of our models)
    changes = [(place, change) for place, field in enumerate(fields) if (change := _change_of(field))]
    remaining = iter(rows)
    with connection.cursor() as cursor:
        while batch := [_adapt(row, changes) for row in islice(remaining, BATCH)]:
            cursor.executemany(sql, batch)


Change = Callable[[Any], Any]


def _adapt(row: Row, changes: Sequence[tuple[int, Change]]) -> list[Any]:
    values = list(row)
    for place, change in changes:
        if values[place] is not None:
            values[place] = change(values[place])
    return values


def _change_of(field: Any) -> Change | None:
    """Return how a value of a field must be changed for the database; whole numbers and texts go as they are."""
    return next((make(field) for kind, make in CHANGES.items() if isinstance(field, kind)), None)


def _change_time(_field: object) -> Change:
    @lru_cache(maxsize=8)  # the rows of an entry follow each other
    def change(value: datetime) -> Any:
        return connection.ops.adapt_datetimefield_value(value)

    return change


CHANGES: Mapping[type, Callable[[Any], Change]] = {
    DateTimeField: _change_time,
    ExactIntegerField: lambda _field: str,
    JSONField: lambda field: lambda value: field.get_db_prep_save(value, connection),
}
