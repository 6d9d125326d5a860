"""Finding among 5 000 products and 6 000 containers: right, and fast enough to type along."""

from datetime import date, datetime
from time import perf_counter, process_time
from typing import Any

import pytest
from django.db import connection
from django.test import Client
from django.urls import reverse
from django_scopes import scope

from chemicals.ledger.models import Component, Holding, Vessel
from chemicals.register.models import CompositionLine, Product, ProductRevision, Substance
from chemicals.workshop.models import Membership, Place
from compliance.premises.filters import Wanted
from compliance.premises.finding import find_containers, find_products, list_keys, tell_containers, tell_products

PRODUCTS, CONTAINERS, SUBSTANCES, PLACES, PAGE = 5_000, 6_000, 500, 60, 50
MOST_MS = 100
EXPECTED = {
    "nitric": (30, 36),
    "ACID 7697-37-2": (30, 36),
    "salpetersaure": (30, 36),
    "bright solution 4321": (1, 1),
    "no such thing": (0, 0),
    "": (PRODUCTS, CONTAINERS),
    "e": (PRODUCTS, CONTAINERS),
    "shelf 7": (2950, 3540),
    "supplier 3 shelf": (4065, 4801),
}
"""What is typed, and how many products and containers it finds: each substance is in thirty products, two kinds of
which stand in two containers. The last two were also counted by a search through the composition lines themselves."""


def furnish(member: Membership) -> None:
    """Put places and substances into a workshop, one of them nitric acid."""
    shop = {"workshop": member.workshop}
    keep(Place, (Place(**shop, name=f"Shelf {n}") for n in range(PLACES)))
    salts = (
        Substance(**shop, name=f"Invented salt {n}", cas_number=f"9{n:05d}-11-1", formula=f"K{n}X", synonyms=["e n"])
        for n in range(SUBSTANCES - 1)
    )
    nitric = Substance(
        **shop, name="Nitric acid", cas_number="7697-37-2", ec_number="231-714-2", formula="HNO3",
        synonyms=["aqua fortis", "Salpetersäure"],
    )  # fmt: skip
    keep(Substance, [*salts, nitric])
    Component.objects.create(**shop, code="volume", kind="volume")


def stock(member: Membership, now: datetime, products: int, containers: int) -> None:
    """Put up more products of two revisions, three substances each, and more containers with a litre in each."""
    shop = {"workshop": member.workshop}
    made = {"created_at": now, "created_by": member}
    before = Product.objects.count()
    places, substances = list(Place.objects.order_by("pk")), list(Substance.objects.order_by("pk"))
    numbers = range(before, before + products)
    listed = keep(
        Product,
        (Product(**shop, name=f"Bright solution {n}", supplier=f"Invented supplier {n % 40}") for n in numbers),
    )
    revisions = [
        ProductRevision(
            **made, product=product, number=number, form="liquid", signal_word="Danger", pictograms=["GHS05"],
            statements=["H314"], hazard_classes=["Skin Corr. 1A"], reactivity=["acid"],
        )
        for product in listed for number in (1, 2)
    ]  # fmt: skip
    lines = [
        CompositionLine(
            revision=row, substance=substances[(n // 2 * 3 + step) % SUBSTANCES], typed="10 %", amount=10**8, per="kg"
        )
        for n, row in enumerate(ProductRevision.objects.bulk_create(revisions))
        for step in range(3)
    ]
    CompositionLine.objects.bulk_create(lines)
    for n, product in enumerate(listed):
        product.note_made_of(line.substance for line in lines[6 * n + 3 : 6 * n + 6])
    Product.objects.bulk_update(listed, ["made_of"], batch_size=500)
    vessels = keep(
        Vessel,
        (
            Vessel(
                **shop, **made, kind="stock", code=f"Z{before + n:05d}", name=f"Bottle {before + n}",
                product=listed[n % products], place=places[n % PLACES],
            )
            for n in range(containers)
        ),
    )  # fmt: skip
    volume = Component.objects.get(code="volume")
    Holding.objects.bulk_create(
        Holding(**shop, vessel=vessel, component=volume, amount=10**9, variance=0) for vessel in vessels
    )


def keep(model: Any, rows: Any) -> list[Any]:
    """Write rows at once, each with its searched text."""
    listed = list(rows)
    for row in listed:
        row.note_searched()
    found: list[Any] = model.objects.bulk_create(listed)
    return found


@pytest.fixture
def many(owner: Membership, now: datetime) -> Membership:
    """Return the owner of a workshop with 5 000 products and 6 000 containers."""
    with scope(workshop=owner.workshop):
        furnish(owner)
        stock(owner, now, PRODUCTS, CONTAINERS)
    if connection.vendor == "postgresql":
        with connection.cursor() as cursor:
            cursor.execute("ANALYZE")
    return owner


def products_page(member: Membership, text: str, today: date) -> tuple[int, list[Any]]:
    """Return how many products are found, and the first page of them with their containers."""
    wanted = Wanted(text=text)
    keys = list_keys(find_products(member, wanted, today))
    return len(keys), tell_products(member, keys[:PAGE], wanted, today)


def containers_page(member: Membership, text: str, today: date) -> tuple[int, list[Any]]:
    """Return how many containers are found, and the first page of them with what they hold."""
    keys = list_keys(find_containers(member, Wanted(text=text), today))
    return len(keys), tell_containers(member, keys[:PAGE])


def spent() -> float:
    """Return seconds: of this process's work, which on SQLite is all of it; on PostgreSQL of the clock."""
    return process_time() if connection.vendor == "sqlite" else perf_counter()


@pytest.mark.parametrize("page", [products_page, containers_page])
def test_the_answer_comes_while_somebody_types(many: Membership, now: datetime, page: Any) -> None:
    found, slow = {}, {}
    for text in EXPECTED:
        took = []
        for _ in range(5):
            start = spent()
            found[text] = page(many, text, now.date())[0]
            took.append(1000 * (spent() - start))
        if min(took) >= MOST_MS:
            slow[text] = took
    assert found == {text: both[page is containers_page] for text, both in EXPECTED.items()}
    assert slow == {}


@pytest.mark.parametrize("name", ["register", "containers"])
def test_a_page_of_5_000_asks_as_often_as_one_of_three(
    owner: Membership, now: datetime, name: str, django_assert_num_queries: Any
) -> None:
    client = Client()
    client.force_login(owner.user, backend="django.contrib.auth.backends.ModelBackend")
    address = reverse(name, args=[owner.workshop.uuid]) + "?q=bright"
    with scope(workshop=owner.workshop):
        furnish(owner)
    for more in (1, 2, PRODUCTS - 3):
        with scope(workshop=owner.workshop):
            stock(owner, now, more, more)
        with django_assert_num_queries({"register": 12, "containers": 14}[name]):
            page = client.get(address)
        assert page.status_code == 200
