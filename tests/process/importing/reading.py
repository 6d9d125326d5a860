"""Reading a file for a shop: what is understood, what is wrong."""

from typing import Any

from chemicals.process.importing.columns import ColumnMap, guess
from chemicals.process.importing.table import open_table
from chemicals.process.importing.understanding import Understood, understand
from tests.process.shop import Shop

SHA = "ab" * 32


def read(shop: Shop, data: bytes, chosen: ColumnMap | None = None, **more: Any) -> Understood:
    """Return what a file says, by its headings unless said otherwise."""
    table = open_table(data)
    return understand(shop.member, shop.now, table, chosen or guess(table.headings), SHA, **more)


def wrong(shop: Shop, data: bytes, chosen: ColumnMap | None = None) -> list[tuple[int, str, str]]:
    return [(error.row, error.column, error.message) for error in read(shop, data, chosen).errors]
