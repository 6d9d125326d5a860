"""A whole file of the register, understood: what it would make, everything that is wrong, and what is only odd."""

from collections.abc import Iterable, Iterator, Sequence
from datetime import datetime
from itertools import islice
from uuid import UUID, uuid5

from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.journal.services import FUTURE, lies_ahead
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.naming import number_names, split_number
from chemicals.ledger.periods import explain_closed
from chemicals.ledger.recompute import get_last_close
from chemicals.ledger.selectors import list_vessels_for
from chemicals.ledger.services import check_vessel
from chemicals.process.importing.columns import ColumnMap
from chemicals.process.importing.reading import RowError
from chemicals.process.importing.register.columns import (
    AMOUNT,
    CONTAINER,
    LOT,
    PLACE,
    PRODUCT,
    RECEIVED,
    SUPPLIER,
    check_register_map,
    list_register_targets,
)
from chemicals.process.importing.register.plan import Container, Plan, Planned, RegisterUnderstood
from chemicals.process.importing.register.products import Group, Planner
from chemicals.process.importing.register.reading import Holder, Reader, Said
from chemicals.process.importing.register.substances import Substances
from chemicals.process.importing.table import Table
from chemicals.process.importing.understanding import refuse_map
from chemicals.register.models import Product, ProductRevision
from chemicals.register.selectors import list_current_revisions_for, list_products_for
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.rows import check_row
from chemicals.workshop.selectors import list_places_for
from chemicals.workshop.texts import searchable

BATCH = 500
"""Of how many products it is asked at once what the register says of them."""

Key = tuple[str, str]
"""Name and supplier, by which a product is known."""


def understand_register(
    member: Membership, now: datetime, table: Table, chosen: ColumnMap, sha256: str, *, most: int | None = None
) -> RegisterUnderstood:
    """Return what the rows of a file would make, at most so many of them. Writes nothing.

    A few queries for each table, and three for each BATCH of products that are here already.
    """
    problems = check_register_map(chosen, table.headings)
    if problems:
        return RegisterUnderstood(**refuse_map(problems))
    with scope(workshop=member.workshop):
        return _Understanding(member, now, table, chosen, sha256).run(table, most)


class _Understanding:
    """Goes through a file: reads every row, then plans every product, then every container."""

    def __init__(self, member: Membership, now: datetime, table: Table, chosen: ColumnMap, sha256: str) -> None:
        self.member, self.now, self.chosen, self.sha256 = member, now, chosen, sha256
        self.substances = Substances(member)
        self.reader = Reader(table, chosen, self.substances)
        self.errors, self.remarks = self.reader.errors, list[RowError]()
        self.planner = Planner(member, chosen, self.substances, self.refuse, self.remark)
        self.labels = list_register_targets()
        self.places = {place.name: place for place in list_places_for(member)}
        self.new_places: dict[str, None] = {}
        self.taken = dict.fromkeys(list_vessels_for(member).values_list("name", flat=True), 0)
        self.closed = get_last_close()
        self.broken: set[tuple[int, str]] = set()

    def refuse(self, row: int, target: str, message: str) -> None:
        """Note what is wrong with what a row says; where no column says it, by what it would be called.

        What could not be read was told already.
        """
        if (row, target) not in self.broken:
            self.errors.add(row, self._heading(target), message)
        if not row:
            self.broken.add((row, target))  # once is enough

    def remark(self, row: int, target: str, message: str) -> None:
        """Note what is only odd."""
        self.remarks.append(RowError(row, self._heading(target), message))

    def _heading(self, target: str) -> str:
        return self.reader.columns.get(target) or str(self.labels.get(target, ""))

    def run(self, table: Table, most: int | None) -> RegisterUnderstood:
        """Return what the rows say."""
        rows = table.rows()
        said, count = [], 0
        for row in rows if most is None else islice(rows, most):
            count += 1
            found = self.reader.read(row)
            if found is not None:
                said.append(found)
                self.broken |= {(found.row, target) for target in found.broken}
        if not count:
            self.errors.add(0, "", "There is no row below the headings. Choose another file.")
        plan = self._plan(said)
        return RegisterUnderstood(
            rows=count,
            made=plan,
            errors=self.errors.in_order(),
            wrong=self.errors.count,
            all_read=next(rows, None) is None,
            remarks=tuple(sorted(self.remarks, key=lambda remark: remark.row)),
        )

    def _plan(self, said: Sequence[Said]) -> Plan:
        groups = self._merge(said)
        current = self._find_current(groups)
        planned = {key: self.planner.plan(group, current.get(key)) for key, group in groups.items()}
        containers = list(self._hold(said, planned))
        products = [each for each in planned.values() if each is not None]
        used = {line.substance.uuid for each in products if each.checked for line in each.checked.lines}
        used |= {x.substance.uuid for each in products if each.checked for x in each.checked.limits if x.substance}
        fresh = [row for row in self.substances.fresh.values() if row.uuid in used]
        return Plan(tuple(fresh), tuple(self.new_places), tuple(products), tuple(containers))

    def _merge(self, said: Iterable[Said]) -> dict[Key, Group]:
        """Return the products of the file; refuse names that differ in spelling only."""
        groups: dict[Key, Group] = {}
        alike: dict[str, Key] = {}
        for each in said:
            key = each.name, each.supplier
            first = alike.setdefault(_spell(key), key)
            if first != key:
                message = f"Row {groups[first].first.row} writes {_call(first)}. Write it like that, or otherwise."
                self.refuse(each.row, PRODUCT, message)
            groups.setdefault(key, Group(each)).merge(each, self.refuse)
        return groups

    def _find_current(self, groups: dict[Key, Group]) -> dict[Key, ProductRevision]:
        """Return what the register says of the products; refuse those that nearly are one of its own."""
        known: dict[Key, Product] = {(row.name, row.supplier): row for row in list_products_for(self.member)}
        alike = {_spell(key): key for key in known}
        suppliers = {name: supplier for name, supplier in known if supplier}
        for key, group in groups.items():
            if key in known:
                continue
            near = alike.get(_spell(key))
            if near is not None:
                message = f"In the register stands {_call(near)}. Write it like that, or otherwise."
                self.refuse(group.first.row, PRODUCT, message)
            elif not group.first.supplier and group.first.name in suppliers:
                message = f"In the register this product is {suppliers[group.first.name]}'s. Write the supplier."
                self.refuse(group.first.row, SUPPLIER, message)
        wanted = [known[key].pk for key in groups if key in known]
        found: dict[Key, ProductRevision] = {}
        for start in range(0, len(wanted), BATCH):
            rows = list_current_revisions_for(self.member).filter(product__in=wanted[start : start + BATCH])
            found |= {(row.product.name, row.product.supplier): row for row in rows}
        return found

    def _hold(self, said: Sequence[Said], planned: dict[Key, Planned | None]) -> Iterator[Container]:
        """Yield the containers; names that are written go before those that are made."""
        names = {each.row: self._write_names(each, each.holder) for each in said if each.holder}
        for each in said:
            if each.holder is None:
                continue
            before, holder, product = self.errors.count, each.holder, planned[each.name, each.supplier]
            self._check_amount(each.row, holder)
            place = self._find_place(each.row, holder.place)
            vessels = [
                Vessel(
                    workshop=self.member.workshop,
                    kind=VesselKind.STOCK,
                    name=name,
                    place=place,
                    opened_on=holder.opened_on,
                    expires_on=holder.expires_on,
                )
                for name in names[each.row] or self._make_names(each.name, holder.count)
            ]
            problems = dict.fromkeys(error for vessel in vessels for error in check_vessel(vessel, self.now))
            for problem in problems:
                self.refuse(each.row, CONTAINER if problem.field == "name" else problem.field, problem.message)
            if product is None or self.errors.count > before:
                continue
            new_place = holder.place if place is None else ""
            for number, vessel in enumerate(vessels, 1):
                vessel.product = product.revision.product
                key = self._key(each.row, number)
                yield Container(
                    each.row, key, vessel, product, new_place, holder.amount, holder.lot, holder.received_on
                )

    def _key(self, row: int, number: int) -> UUID:
        """Return the uuid of the entry of a container: the same whenever the file is imported."""
        return uuid5(self.member.workshop.uuid, f"import/register/{self.sha256}/{row}/{number}")

    def _write_names(self, said: Said, holder: Holder) -> list[str]:
        """Return the names that a row writes, none if it leaves them out; refuse those that are taken."""
        if not holder.name:
            return []
        stem, start = split_number(holder.name)
        names = [holder.name] if holder.count == 1 else list(islice(number_names(stem, start), holder.count))
        for name in names:
            first = self.taken.setdefault(name, said.row)
            if first == 0:
                message = f'A vessel "{name}" is here already. Leave the row out, or write another name.'
                self.refuse(said.row, CONTAINER, message)
            elif first != said.row:
                self.refuse(said.row, CONTAINER, f'Row {first} names a container "{name}" already. Write another name.')
        return names

    def _make_names(self, product: str, count: int) -> list[str]:
        """Return free names after the product."""
        names = list(islice((name for name in number_names(product) if name not in self.taken), count))
        self.taken.update(dict.fromkeys(names, 0))
        return names

    def _find_place(self, row: int, name: str) -> Place | None:
        """Return the place of a name; note one that is to be created, refuse it where that was not chosen."""
        if not name or name in self.places or name in self.new_places:
            return self.places.get(name)
        near = {searchable(other): other for other in (*self.places, *self.new_places)}.get(searchable(name))
        if near is not None:
            self.refuse(row, PLACE, f'There is a place "{near}". Write it like that, or otherwise.')
        elif not self.chosen.add_places:
            remedy = "Write one that is here, add it first, or choose that new places are added."
            self.refuse(row, PLACE, f'There is no place "{name}". {remedy}')
        else:
            problems = check_row(Place(workshop=self.member.workshop, name=name), leave_out=["workshop"])
            for problem in problems:
                self.refuse(row, PLACE, problem.message)
            if not problems:
                self.new_places[name] = None
        return None

    def _check_amount(self, row: int, holder: Holder) -> None:
        """Refuse an amount that is none, what belongs to a receipt without one, and days on which nothing can be."""
        amount, day = holder.amount, holder.received_on
        if amount is not None and amount.base <= 0:
            self.refuse(row, AMOUNT, "Write how much is in it, or leave it out for an empty container.")
        if amount is None and (holder.lot or day):
            self.refuse(
                row, AMOUNT, "A lot and a day belong to what was received. Write the amount, or leave them out."
            )
        if holder.lot and amount is not None and day is None:
            self.refuse(row, LOT, "A lot belongs to what was received on a day. Write the day, or leave the lot out.")
        if day is None:
            return
        when = Occurred.on_day(day, self.member.workshop.zone)
        if lies_ahead(self.member.workshop, self.now, when):
            self.refuse(row, RECEIVED, FUTURE)
        elif self.closed is not None and when.at < self.closed.until:
            self.refuse(row, RECEIVED, f"{explain_closed(self.closed)} Without a day, what is in it now is counted.")


def _spell(key: Key) -> str:
    return "\0".join(map(searchable, key))


def _call(key: Key) -> str:
    name, supplier = key
    return f'"{name}" by "{supplier}"' if supplier else f'"{name}" without a supplier'
