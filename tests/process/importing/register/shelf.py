"""Files of the register, read and recorded for a workshop."""

from datetime import datetime
from typing import Any

from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.process.importing.columns import ColumnMap
from chemicals.process.importing.files import add_import, find_map, read_table
from chemicals.process.importing.register.columns import guess_register
from chemicals.process.importing.register.plan import RegisterUnderstood
from chemicals.process.importing.register.understanding import understand_register
from chemicals.process.importing.table import open_table
from chemicals.process.models import Import, Subject
from chemicals.register.models import ProductRevision
from chemicals.register.selectors import list_current_revisions_for
from chemicals.workshop.models import Membership
from compliance.clearance.importing import record_import
from tests.process.importing.sheets import lines

SHA = "cd" * 32


class Shelf:
    """A workshop whose register is imported by one member."""

    def __init__(self, member: Membership, now: datetime) -> None:
        self.member, self.now = member, now

    def read(self, *rows: str, data: bytes = b"", chosen: ColumnMap | None = None, **more: Any) -> RegisterUnderstood:
        """Return what a file says; options of the column map by name."""
        table = open_table(data or lines(*rows))
        said = chosen or ColumnMap(guess_register(table.headings).columns, **more)
        return understand_register(self.member, self.now, table, said, SHA)

    def wrong(self, *rows: str, **more: Any) -> list[tuple[int, str, str]]:
        """Return what is wrong with a file."""
        return [(error.row, error.column, error.message) for error in self.read(*rows, **more).errors]

    def record(self, *rows: str, data: bytes = b"", name: str = "shelf.csv", **more: Any) -> Import:
        """Import a file as its headings say."""
        found = add_import(
            actor=self.member, now=self.now, name=name, data=data or lines(*rows), subject=Subject.REGISTER
        )
        chosen = find_map(found, read_table(found))
        chosen = ColumnMap(chosen.columns, "", **{"dates": chosen.dates, "decimal": chosen.decimal, **more})
        return record_import(actor=self.member, now=self.now, upload=found, chosen=chosen)

    def product(self, name: str) -> ProductRevision:
        """Return a product as it is known now."""
        return list_current_revisions_for(self.member).get(product__name=name)

    def products(self) -> list[str]:
        return [row.product.name for row in list_current_revisions_for(self.member)]

    def vessels(self) -> dict[str, Vessel]:
        """Return the containers by name."""
        with scope(workshop=self.member.workshop):
            return {row.name: row for row in Vessel.objects.select_related("product", "place").order_by("name")}
