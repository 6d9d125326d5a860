"""Things of the workshop by the names that people write in a file: each table is read once."""

from collections import defaultdict
from collections.abc import Callable, Iterable, Mapping
from difflib import get_close_matches
from functools import cached_property
from uuid import UUID, uuid5

from chemicals.journal.selectors import list_entries_for
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import list_vessels_for
from chemicals.process.fields import ReferenceField, VesselField
from chemicals.process.importing.values import CellError
from chemicals.process.instruments import list_instruments_for
from chemicals.process.selectors import list_rack_types_for, list_routes_for
from chemicals.register.selectors import list_products_for
from chemicals.workshop.models import Membership

ByName = Mapping[str, tuple[UUID, ...]]


class Names:
    """Finds what a name means for one member. Raises CellError with the nearest names where it means nothing."""

    def __init__(self, member: Membership) -> None:
        self.member = member
        self.keys: dict[UUID, str] = {}
        """The keys of rows by which other rows speak of them."""

    def vessel(self, kind: VesselField, text: str) -> UUID:
        """Return the vessel of a name or a code, if it is of a kind that the field takes."""
        uuid = _one(self._vessels, text, "vessel")
        found = self._kinds[uuid]
        if found not in kind.kinds:
            wanted = " or ".join(str(each.label) for each in kind.kinds)
            raise CellError(f'"{text}" is a {found.label}. Write the name of a {wanted}.')
        return uuid

    def reference(self, kind: ReferenceField, text: str) -> UUID:
        """Return what a name means; of an entry its number (#17) or the key of its row."""
        if kind.to in self._tables:
            return _one(self._tables[kind.to](), text, kind.to)
        if text.startswith("#"):
            return self._entry(text)
        uuid = key_of(self.member, text)
        self.keys[uuid] = text
        return uuid

    def _entry(self, text: str) -> UUID:
        number = text.removeprefix("#").strip()
        uuid = self._entries.get(int(number)) if number.isdecimal() and len(number) < 19 else None
        if uuid is None:
            raise CellError(f"There is no entry {text}. Write # and the number of an entry, or the key of a row.")
        return uuid

    @property
    def _tables(self) -> Mapping[str, Callable[[], ByName]]:
        return {
            "product": lambda: self._products,
            "route": lambda: self._routes,
            "rack type": lambda: self._racks,
            "instrument": lambda: self._instruments,
        }

    @cached_property
    def _vessels(self) -> ByName:
        pairs = [(row.name, row.uuid) for row in self._rows]
        return _by_name([*pairs, *((row.code, row.uuid) for row in self._rows if row.code != row.name)])

    @cached_property
    def _kinds(self) -> Mapping[UUID, VesselKind]:
        return {row.uuid: VesselKind(row.kind) for row in self._rows}

    @cached_property
    def _rows(self) -> list[Vessel]:
        return list(list_vessels_for(self.member))

    @cached_property
    def _products(self) -> ByName:
        rows = list(list_products_for(self.member))
        full = ((f"{row.name} · {row.supplier}", row.uuid) for row in rows if row.supplier)
        return _by_name([*((row.name, row.uuid) for row in rows), *full])

    @cached_property
    def _routes(self) -> ByName:
        return _by_name((row.name, row.uuid) for row in list_routes_for(self.member))

    @cached_property
    def _racks(self) -> ByName:
        return _by_name((row.name, row.uuid) for row in list_rack_types_for(self.member))

    @cached_property
    def _instruments(self) -> ByName:
        return _by_name((row.name, row.uuid) for row in list_instruments_for(self.member))

    @cached_property
    def _entries(self) -> Mapping[int, UUID]:
        return dict(list_entries_for(self.member).values_list("sequence", "uuid"))


def key_of(member: Membership, key: str) -> UUID:
    """Return the uuid of the entry that a row with this key makes: the same in every file of the workshop."""
    return uuid5(member.workshop.uuid, f"import/key/{key}")


def row_of(member: Membership, sha256: str, row: int) -> UUID:
    """Return the uuid of the entry that a row without a key makes."""
    return uuid5(member.workshop.uuid, f"import/{sha256}/{row}")


def _by_name(pairs: Iterable[tuple[str, UUID]]) -> ByName:
    found: dict[str, list[UUID]] = defaultdict(list)
    for name, uuid in pairs:
        found[name].append(uuid)
    return {name: tuple(uuids) for name, uuids in found.items()}


def _one(names: ByName, text: str, noun: str) -> UUID:
    found = names.get(text, ())
    if len(found) == 1:
        return found[0]
    if found:
        full = " or ".join(f'"{name}"' for name, uuids in names.items() if len(uuids) == 1 and uuids[0] in found)
        raise CellError(f'"{text}" is the name of more than one {noun}. Write {full or "another one of its names"}.')
    near = ", ".join(f'"{name}"' for name in get_close_matches(text, names, n=3))
    remedy = f"Did you mean {near}?" if near else "Write its name as it stands on the pages."
    raise CellError(f'There is no {noun} "{text}". {remedy}')
