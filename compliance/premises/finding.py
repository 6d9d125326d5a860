"""Finding: products and their containers by words, codes and filters, in a fixed number of queries.

Every word typed must stand somewhere in the product, in a substance of its current composition, or in one of its
containers or that one's place; without case and accents (`workshop.texts.searchable`). Words are looked for in the
database by LIKE, in a few columns of text that are kept for it; no list of identifiers goes back and forth.
"""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import date, timedelta
from functools import reduce
from operator import or_
from typing import Any

from django.db.models import Case, Count, F, IntegerField, Q, QuerySet, TextField, Value, When, Window
from django.db.models.functions import Cast, RowNumber
from django.db.models.lookups import Contains
from django_scopes import scope

from chemicals.ledger.care import CONTAINERS
from chemicals.ledger.codes import tidy_code
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import Contents, list_contents_for, list_vessels_for
from chemicals.register.models import Product, ProductRevision
from chemicals.register.selectors import list_current_revisions_for, list_products_for
from chemicals.register.sheets import first_fine_day
from chemicals.workshop.models import Membership
from chemicals.workshop.texts import searchable
from compliance.premises.empties import keep_emptied
from compliance.premises.expiry import SOON
from compliance.premises.filters import NONE, Wanted
from compliance.premises.selectors import Standing, list_standing_for

MOST_WORDS = 10
"""So many words are looked for; what is typed after them does not count."""
MOST_SHOWN = 3
"""So many containers stand with their product."""


def find_containers(member: Membership, wanted: Wanted, today: date) -> QuerySet[Vessel]:
    """Return the stock containers and anode sets that are looked for. One query.

    First the one whose code was typed, then those whose name, or whose product's name, begins with a word, by name.
    """
    with scope(workshop=member.workshop):
        rows = _keep_containers(member, wanted, today)
        of_product = _ask_of_product(member, wanted, today)
        if of_product:
            rows = rows.filter(product__in=_current(member).filter(*of_product).values("product"))
        words, code = _words(wanted), _has_code(wanted)
        if not words:
            return rows
        begins = _any(Q(searched__startswith=word) | Q(product__searched__startswith=word) for word in words)
        rows = rows.filter(code | Q(*(_stands_there(word) | _is_of(word) for word in words)))
        return rows.order_by(_rank(code, begins), "name")


def find_products(member: Membership, wanted: Wanted, today: date) -> QuerySet[Product]:
    """Return the products that are looked for. One query.

    First the one in whose container the typed code stands, then those whose name begins with a word, by name.
    """
    with scope(workshop=member.workshop):
        rows = list_products_for(member)
        of_product = _ask_of_product(member, wanted, today)
        if of_product:
            rows = rows.filter(pk__in=_current(member).filter(*of_product).values("product"))
        containers = _keep_containers(member, wanted, today).order_by()
        if wanted.asks_for_containers:
            rows = rows.filter(pk__in=_products_of(containers))
        words, code = _words(wanted), Q(pk__in=_products_of(containers.filter(_has_code(wanted))))
        if not words:
            return rows
        begins = _any(Q(searched__startswith=word) for word in words)
        there = {word: Q(pk__in=_products_of(containers.filter(_stands_there(word)))) for word in words}
        rows = rows.filter(
            code | Q(*(Q(searched__contains=word) | Q(made_of__contains=word) | there[word] for word in words))
        )
        return rows.order_by(_rank(code, begins), "name", "supplier")


def list_keys(found: QuerySet[Any]) -> list[int]:
    """Return the primary keys of everything that was found, in order: how many there are, and each page. One query."""
    return list(found.values_list("pk", flat=True))


@dataclass(frozen=True)
class Shelved:
    """A product as it is known now with the first of its containers that fit, and what each holds.

    ``more`` is how many more there are.
    """

    revision: ProductRevision
    containers: tuple[tuple[Vessel, Contents | None], ...]
    more: int


def tell_products(member: Membership, products: Sequence[int], wanted: Wanted, today: date) -> list[Shelved]:
    """Return products, by their primary keys and in this order, with those of their containers that fit. Six queries.

    First the container whose code was typed, then those in whose name, code or place a word stands.
    """
    with scope(workshop=member.workshop):
        revisions = {row.product_id: row for row in list_current_revisions_for(member).filter(product__in=products)}
        of_these = _keep_containers(member, wanted, today).filter(product__in=products)
        words = _words(wanted)
        rank = [_rank(_has_code(wanted), _any(map(_stands_there, words))).asc()] if words else []
        order = [*rank, F("name").asc()]
        ranked = of_these.order_by(*order).annotate(
            turn=Window(RowNumber(), partition_by="product", order_by=order),
            together=Window(Count("pk"), partition_by="product"),
        )
        vessels = list(ranked.filter(turn__lte=MOST_SHOWN))
    contents = list_contents_for(member, [vessel.pk for vessel in vessels])
    by_product: dict[int | None, list[Vessel]] = {}
    for vessel in vessels:
        by_product.setdefault(vessel.product_id, []).append(vessel)
    return [_shelve(revisions[key], by_product.get(key, []), contents) for key in products]


def tell_containers(member: Membership, vessels: Sequence[int]) -> list[Standing]:
    """Return containers, by their primary keys and in this order, with what they hold and its hazards. Nine queries."""
    with scope(workshop=member.workshop):
        named = list_vessels_for(member).filter(pk__in=vessels).values_list("uuid", flat=True)
        found = {each.vessel.pk: each for each in list_standing_for(member, named)}
    return [found[key] for key in vessels]


def _shelve(revision: ProductRevision, vessels: Sequence[Vessel], contents: dict[int, Contents]) -> Shelved:
    together: int = vessels[0].together if vessels else 0  # type: ignore[attr-defined]  # annotated above
    shown = tuple((vessel, contents.get(vessel.pk)) for vessel in vessels)
    return Shelved(revision, shown, together - len(shown))


def _keep_containers(member: Membership, wanted: Wanted, today: date) -> QuerySet[Vessel]:
    """Return the containers that fit what is asked of containers."""
    rows = list_vessels_for(member, *CONTAINERS)
    if wanted.place:
        rows = rows.filter(place__uuid=wanted.place)
    if wanted.state != "all":
        rows = rows.filter(gone_at__isnull=wanted.state != "gone")
    if wanted.state == "empty":
        rows = keep_emptied(rows)
    elif wanted.state == "stock":
        rows = rows.exclude(pk__in=keep_emptied(rows).order_by().values("pk"))
    if wanted.keeps == "passed":
        rows = rows.filter(expires_on__lt=today)
    elif wanted.keeps == "soon":
        rows = rows.filter(expires_on__range=(today, today + timedelta(days=SOON)))
    return rows.filter(opened_on__isnull=wanted.opened == "no") if wanted.opened else rows


def _ask_of_product(member: Membership, wanted: Wanted, today: date) -> list[Q]:
    """Return what the current revision of a product must say."""
    asked = []
    if wanted.supplier:
        asked.append(Q(product__supplier=wanted.supplier))
    if wanted.form:
        asked.append(Q(form=wanted.form))
    if wanted.signal_word:
        asked.append(Q(signal_word="" if wanted.signal_word == NONE else wanted.signal_word))
    for column, value in (
        ("pictograms", wanted.pictogram),
        ("hazard_classes", wanted.hazard_class),
        ("reactivity", wanted.reacts_as),
    ):
        if value:
            asked.append(Q(Contains(Cast(column, TextField()), f'"{value}"')))
    if wanted.hazards:
        nothing = Q(signal_word="", pictograms=[], statements=[], hazard_classes=[])
        asked.append(nothing if wanted.hazards == "missing" else ~nothing)
    return [*asked, *_ask_of_sheet(wanted.sheet, first_fine_day(today, member.workshop.sheet_years))]


def _ask_of_sheet(mark: str, first_fine: date) -> list[Q]:
    """Return what must be true of a sheet for it to be marked so (`register.sheets.mark_of`)."""
    here = Q(safety_data_sheet__isnull=False)
    marks = {
        NONE: Q(safety_data_sheet=None),
        "undated": here & Q(sheet_date=None),
        "old": here & Q(sheet_date__lt=first_fine),
        "fine": here & Q(sheet_date__gte=first_fine),
    }
    return [marks[mark]] if mark else []


def _current(member: Membership) -> QuerySet[ProductRevision]:
    """Return the current revisions alone, to stand inside another query."""
    return list_current_revisions_for(member).order_by()


def _products_of(containers: QuerySet[Vessel]) -> QuerySet[Vessel, Any]:
    """Return the products of which containers are, to stand inside another query."""
    return containers.exclude(product=None).values("product")


def _stands_there(word: str) -> Q:
    """Return that a word stands in a container's name or code, or in its place."""
    return Q(searched__contains=word) | Q(place__searched__contains=word)


def _is_of(word: str) -> Q:
    """Return that a word stands in a container's product, or in a substance of it."""
    return Q(product__searched__contains=word) | Q(product__made_of__contains=word)


def _words(wanted: Wanted) -> list[str]:
    return list(dict.fromkeys(searchable(wanted.text).split()))[:MOST_WORDS]


def _has_code(wanted: Wanted) -> Q:
    """Return that a container's code was typed, or scanned: then it stands at the end of an address."""
    code = tidy_code(wanted.text.rpartition("/")[2])
    return Q(code=code) if code else Q(pk__in=[])


def _any(conditions: Iterable[Q]) -> Q:
    return reduce(or_, conditions)


def _rank(first: Q, second: Q) -> Case:
    return Case(When(first, then=Value(0)), When(second, then=Value(1)), default=Value(2), output_field=IntegerField())
