"""Empty stock containers: which of them stay a waste until they are handed over, and which may go.

What held something very toxic is as hazardous empty as full until somebody who may has cleaned it: it stays a waste.
Of what held something of which no hazards are entered nobody knows. Local rules decide in the end.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from uuid import UUID

from django.db.models import Exists, OuterRef, Q, QuerySet
from django_scopes import scope

from chemicals.books.events import UNKNOWN_LIQUID
from chemicals.books.fold.state import EVERY
from chemicals.ledger.models import Content, Holding, Memory, Vessel, VesselKind
from chemicals.ledger.selectors import list_vessels_for
from chemicals.register.models import ProductRevision
from chemicals.science.ghs import find_very_toxic
from chemicals.workshop.models import Membership
from compliance.premises.hazards import Hazards, Part, merge, part_of
from compliance.premises.selectors import UNNAMED


@dataclass(frozen=True)
class Empty:
    """A stock container that held something, is known to be empty, and is not gone.

    ``held``: every revision of its product, and of whatever else was ever poured in; ``unnamed``: something that nobody
    can name was.
    """

    vessel: Vessel
    held: tuple[ProductRevision, ...]
    unnamed: bool = False

    @property
    def names(self) -> list[str]:
        """What it held, by name."""
        return sorted({row.product.name for row in self.held} | ({UNNAMED} if self.unnamed else set()))

    @property
    def very_toxic(self) -> list[str]:
        """What says that it held something very toxic: classes and codes, each once."""
        found = (find_very_toxic(row.statements, row.hazard_classes) for row in self.held)
        return list(dict.fromkeys(sign for signs in found for sign in signs))

    @property
    def not_entered(self) -> list[str]:
        """What it held of which no hazards are entered, by name."""
        entered = {row.product.name for row in self.held if part_of(row).entered}
        return [name for name in self.names if name not in entered]

    @property
    def stays_waste(self) -> bool:
        """Whether it stays a waste until it is handed over."""
        return bool(self.very_toxic)

    @property
    def must_ask(self) -> bool:
        """Whether nobody can say from what is entered."""
        return not self.stays_waste and bool(self.not_entered)

    @property
    def why(self) -> str:
        """The reason, in a sentence."""
        held = ", ".join(self.names)
        if self.stays_waste:
            return f"It held {held}, very toxic ({', '.join(self.very_toxic)}): it stays a waste until handed over."
        if self.not_entered:
            return f"Nothing is entered of the hazards of {', '.join(self.not_entered)}: ask before it goes."
        return f"It held {held}; nothing that is entered of it says very toxic."

    @property
    def hazards(self) -> Hazards:
        """The hazards of everything that it held together, as entered."""
        unnamed = [Part(UNNAMED)] if self.unnamed else []
        return merge([*(part_of(row) for row in self.held), *unnamed])


def list_empties_for(member: Membership, vessels: Iterable[UUID] | None = None) -> list[Empty]:
    """Return the empty stock containers of the member's workshop (of those named, if any are), by name.

    Those that stay a waste come first. Three queries.
    """
    with scope(workshop=member.workshop):
        rows = keep_emptied(list_vessels_for(member, VesselKind.STOCK).filter(gone_at=None))
        rows = rows.select_related("place", "product", "drop_off_container")
        if vessels is not None:
            rows = rows.filter(uuid__in=list(vessels))
        found = list(rows)
        poured = _read_poured(rows)
        named = {
            key.partition("/")[0] for keys in poured.values() for key in keys if not key.startswith(UNKNOWN_LIQUID)
        }
        by_product = _read_revisions(rows, named)
    empties = [
        Empty(
            vessel,
            _revisions_of(vessel, poured.get(vessel.pk, frozenset()), by_product),
            any(key.startswith(UNKNOWN_LIQUID) for key in poured.get(vessel.pk, ())),
        )
        for vessel in found
    ]
    return sorted(empties, key=lambda each: (not each.stays_waste, not each.must_ask))


def keep_emptied(vessels: QuerySet[Vessel]) -> QuerySet[Vessel]:
    """Return those that ever held something, and of which the books know that nothing is left."""
    something = Q(amount=None) | Q(amount__gt=0)
    mine = {"vessel": OuterRef("pk")}
    return vessels.filter(
        Exists(Content.objects.filter(something, **mine)),
        ~Exists(Holding.objects.filter(something, **mine)),
        ~Exists(Memory.objects.filter(incomplete=True, **mine)),
    )


def _read_poured(vessels: QuerySet[Vessel]) -> dict[int, frozenset[str]]:
    """Return everything that was ever poured into each vessel, by its primary key. One query."""
    rows = Content.objects.filter(component__code=EVERY, vessel__in=vessels.order_by()).exclude(poured=None)
    found: dict[int, frozenset[str]] = {}
    for vessel, keys in rows.values_list("vessel_id", "poured"):
        found[vessel] = found.get(vessel, frozenset()) | frozenset(keys or ())
    return found


def _read_revisions(vessels: QuerySet[Vessel], named: Iterable[str]) -> dict[str, list[ProductRevision]]:
    """Return the revisions of the products that vessels are of, and of those named, by product. One query."""
    of_vessels = vessels.exclude(product=None).order_by().values("product")
    rows = ProductRevision.objects.filter(Q(product__in=of_vessels) | Q(product__uuid__in=list(named)))
    found: dict[str, list[ProductRevision]] = {}
    for row in rows.select_related("product").order_by("product__name", "number"):
        found.setdefault(str(row.product.uuid), []).append(row)
    return found


def _revisions_of(
    vessel: Vessel, poured: Iterable[str], by_product: Mapping[str, list[ProductRevision]]
) -> tuple[ProductRevision, ...]:
    products = {key.partition("/")[0] for key in poured}
    if vessel.product is not None:
        products.add(str(vessel.product.uuid))
    return tuple(row for product in sorted(products & by_product.keys()) for row in by_product[product])


def find_empty(member: Membership, vessel: Vessel) -> Empty | None:
    """Return what is to be known of an empty stock container; None of any other vessel. Three queries."""
    return next(iter(list_empties_for(member, [vessel.uuid])), None)
