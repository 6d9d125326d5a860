"""Every page: axe finds nothing, nothing scrolls sideways, the browser complains of nothing."""

import os
import re
from collections.abc import Callable
from pathlib import Path

import pytest
from django.db import connection
from django_scopes import scopes_disabled

from chemicals.journal.models import Attachment
from chemicals.ledger.models import Vessel
from chemicals.process.models import CountDay
from chemicals.workshop.models import Membership, Role
from tests.house.walk import addresses
from tests.journeys.conftest import DESK, PHONE, Visitor
from tests.journeys.test_bench import People

NO_PAGE = ("api/", "c/", "sign-out", "w/<uuid:workshop>/files")
"""Addresses that answer with data, a file or another address."""


LOOKS = [
    pytest.param(PHONE, "light", id="phone-light"),
    pytest.param(DESK, "dark", id="desk-dark"),
    pytest.param(PHONE, "dark", id="phone-dark"),
    pytest.param(DESK, "light", id="desk-light"),
]
if not os.environ.get("SCREENSHOTS"):  # what pages say does not depend on the database: a look on each engine
    LOOKS = LOOKS[:1] if connection.vendor == "sqlite" else LOOKS[1:2]


def pages_of_the_demo() -> list[tuple[str, str]]:
    """Return (name for a picture, path) of one address of each route that shows a page."""
    owner = Membership.objects.get(role=Role.OWNER)
    with scopes_disabled():
        sha256 = Attachment.objects.values_list("sha256", flat=True)[0]
        found = {
            (address.route, address.path.rsplit("/", 2)[-2] if "slug" in address.route else ""): address.path
            for address in addresses(owner, sha256)
            if not address.route.startswith(NO_PAGE) and not address.route.endswith(".pdf") and address.route != "c"
        }
    pages = [("-".join(re.findall("[a-z]+", route + " " + name)), path) for (route, name), path in found.items()]
    return [*pages, *states_of_the_demo(f"/w/{owner.workshop.uuid}")]


def states_of_the_demo(workshop: str) -> list[tuple[str, str]]:
    """Return (name for a picture, path) of pages that look different by what is asked, or of what they are."""
    with scopes_disabled():
        stock = list(Vessel.objects.filter(kind="stock").select_related("product").order_by("name"))
        each_kind = {vessel.kind: vessel for vessel in Vessel.objects.order_by("name")}
        over = CountDay.objects.exclude(finished_at=None)[0]
    codes = "&".join(f"code={vessel.code}" for vessel in stock)
    empty = next(vessel for vessel in stock if vessel.name == "Jar of pickling paste")
    assert empty.product is not None
    return [
        ("jars-set-up", f"{workshop}/register/jar/done/?{codes}"),
        ("jar-of-a-product", f"{workshop}/register/jar/?product={empty.product.uuid}"),
        ("change-several", f"{workshop}/containers/change/?{codes}"),
        ("found", f"{workshop}/register/?q=acid&signal_word=Danger"),
        ("found-nothing", f"{workshop}/register/containers/?q=no+such+thing"),
        ("filter-wrong", f"{workshop}/register/containers/?place=nowhere"),
        ("count-over", f"{workshop}/count/{over.uuid}/"),
        ("import-of-the-register", f"{workshop}/imports/?subject=register"),
        ("empty-jar", f"{workshop}/vessels/{empty.uuid}/"),
        ("empty-jar-put-away", f"{workshop}/vessels/{empty.uuid}/put-away/"),
        *((f"vessel-{kind}", f"{workshop}/vessels/{vessel.uuid}/") for kind, vessel in each_kind.items()),
    ]


@pytest.mark.parametrize(("size", "scheme"), LOOKS)
def test_every_page_is_accessible(
    demo: People, visit: Callable[..., Visitor], pictures: Path | None, size: dict[str, int], scheme: str
) -> None:
    visitor, seen = visit(size, scheme), 0
    visitor.go("/sign-in")
    visitor.check_page()
    visitor.sign_in(*demo["owner"])
    for name, path in pages_of_the_demo():
        answer = visitor.page.request.get(visitor.url + path)
        if answer.status == 405 or "text/html" not in answer.headers["content-type"]:
            continue  # an address that only takes what a form sends
        visitor.page.goto(visitor.url + path)
        seen += 1
        visitor.check_page()
        if pictures is not None:
            visitor.page.screenshot(path=pictures / f"{name}-{size['width']}-{scheme}.png", full_page=True)
    assert seen > 40
