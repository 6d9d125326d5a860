"""What goes along on a drop-off: closed waste containers, and stock containers as they are, empty or not."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import date
from uuid import UUID

from django.db.models import Q
from django_scopes import scope

from chemicals.books.events import UNKNOWN_LIQUID
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import list_vessels_for
from chemicals.register.models import ProductRevision
from chemicals.science.reactivity import UNKNOWN, declared
from chemicals.workshop.models import Membership
from compliance.clearance.selectors import read_marks
from compliance.dropoffs.models import DropOff
from compliance.premises.empties import Empty, list_empties_for
from compliance.premises.hazards import Hazards
from compliance.premises.selectors import Standing, list_standing_for
from compliance.waste.models import WasteContainer


@dataclass(frozen=True)
class StockOnLoad:
    """A stock container that goes along; ``empty`` says what it held, where nothing is in it any more."""

    standing: Standing
    empty: Empty | None

    @property
    def vessel(self) -> Vessel:
        """The container."""
        return self.standing.vessel

    @property
    def revisions(self) -> tuple[ProductRevision, ...]:
        """What is in it, or what it ever held."""
        return self.standing.revisions if self.empty is None else self.empty.held

    @property
    def names(self) -> list[str]:
        """What is in it, or what it ever held, by name."""
        return self.standing.names if self.empty is None else self.empty.names

    @property
    def hazards(self) -> Hazards:
        """The hazards of all of it, as entered."""
        return self.standing.hazards if self.empty is None else self.empty.hazards

    @property
    def marks(self) -> Mapping[str, frozenset[str]]:
        """What each product in it reacts as; what is left in an empty one reacts as what it held."""
        marks: dict[str, frozenset[str]] = {}
        for row in self.revisions:
            key = str(row.product.uuid)
            marks[key] = marks.get(key, frozenset()) | declared(row.reactivity)
        unnamed = self.standing.unnamed if self.empty is None else self.empty.unnamed
        return {**marks, str(self.vessel.uuid): frozenset({UNKNOWN})} if unnamed else marks

    @property
    def note(self) -> str:
        """What it is, in words of the manifest."""
        if self.empty is not None:
            return f"empty, not cleaned, last held: {', '.join(self.empty.names)}"
        expires = self.vessel.expires_on
        return "stock as bought" + ("" if expires is None else f", keeps until {expires.isoformat()}")


@dataclass(frozen=True)
class Load:
    """Everything that goes along and is not gone yet, each part by name."""

    waste: tuple[WasteContainer, ...]
    stock: tuple[StockOnLoad, ...]

    @property
    def marks(self) -> list[tuple[Vessel, Mapping[str, frozenset[str]]]]:
        """What each container may react as."""
        waste = [(each.vessel, _by_product(read_marks(each.vessel))) for each in self.waste]
        return [*waste, *((each.vessel, each.marks) for each in self.stock)]


def _by_product(marks: Mapping[str, frozenset[str]]) -> dict[str, frozenset[str]]:
    """Return marks of revisions as marks of their products."""
    found: dict[str, frozenset[str]] = {}
    for key, kinds in marks.items():
        name = key if key.startswith(("stream/", UNKNOWN_LIQUID)) else key.partition("/")[0]
        found[name] = found.get(name, frozenset()) | kinds
    return found


def read_load(member: Membership, drop_off: DropOff) -> Load:
    """Return what goes along on a drop-off; what is gone by itself meanwhile does not."""
    with scope(workshop=member.workshop):
        rows = WasteContainer.objects.filter(vessel__drop_off_container__drop_off=drop_off, vessel__gone_at=None)
        waste = tuple(rows.select_related("vessel__workshop", "stream").order_by("vessel__name"))
        vessels = Vessel.objects.filter(
            drop_off_container__drop_off=drop_off, kind=VesselKind.STOCK, gone_at=None
        ).values_list("uuid", flat=True)
        named = list(vessels)
    return Load(waste, tuple(read_stock(member, named)) if named else ())


def read_stock(member: Membership, vessels: Iterable[UUID]) -> list[StockOnLoad]:
    """Return stock containers as a load, by name. Eleven queries."""
    named = list(vessels)
    empties = {each.vessel.pk: each for each in list_empties_for(member, named)}
    return [StockOnLoad(each, empties.get(each.vessel.pk)) for each in list_standing_for(member, named)]


def list_ready_stock_for(member: Membership, today: date, named: Iterable[UUID] = ()) -> list[tuple[Vessel, str]]:
    """Return the stock containers that may go along, by name, each with why. Four queries.

    Empties that stay a waste or of which nothing is entered, what has kept long enough, and what was ``named``.
    """
    empties = {each.vessel.pk: each for each in list_empties_for(member) if each.stays_waste or each.must_ask}
    with scope(workshop=member.workshop):
        wanted = Q(pk__in=list(empties)) | Q(expires_on__lt=today) | Q(uuid__in=list(named))
        rows = list_vessels_for(member, VesselKind.STOCK).filter(wanted, gone_at=None, drop_off_container=None)
        return [(vessel, empties[vessel.pk].why if vessel.pk in empties else str(vessel.product)) for vessel in rows]
