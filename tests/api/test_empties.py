"""Empty containers and what is gone, through the API."""

from collections.abc import Callable
from typing import Any
from uuid import uuid4

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.setup import create_holder
from chemicals.register.models import Product
from chemicals.register.services import RevisionInput, create_product
from chemicals.workshop.models import Membership
from tests.api.conftest import Caller, Shop, errors_of

Make = Callable[[str, Product], Vessel]


@pytest.fixture
def make(api: Caller, owner: Membership, now: Any) -> Make:
    """Return what sets up a container, fills it and uses it up."""

    def emptied(name: str, product: Product) -> Vessel:
        jar = create_holder(actor=owner, now=now, kind=VesselKind.STOCK, name=name, product=product)
        for verb, amount in (("receipt", "100 g"), ("count", "0 g")):
            assert api.record(verb, vessel=str(jar.uuid), amount=amount).status_code == 201
        return jar

    return emptied


def product(owner: Membership, now: Any, name: str, *statements: str) -> Product:
    known = RevisionInput(form="solid", statements=statements)
    return create_product(actor=owner, now=now, name=name, supplier="", revision=known).product


def test_each_empty_says_whether_it_stays_a_waste_and_why(api: Caller, make: Make, owner: Membership, now: Any) -> None:
    make("Jar 1", product(owner, now, "Mystery"))
    jar = make("Jar 2", product(owner, now, "Poison", "H310 Fatal in contact with skin."))
    first, second = api.get("empty-containers/").json()["containers"]
    assert (first["vessel"]["code"], first["stays_waste"], first["very_toxic"]) == (jar.code, True, ["H310"])
    assert (second["stays_waste"], second["not_entered"], second["held"]) == (False, ["Mystery"], ["Mystery"])
    assert "Nothing is entered of the hazards of Mystery" in second["why"]


def test_what_may_go_is_put_away_and_comes_back(api: Caller, make: Make, owner: Membership, now: Any) -> None:
    jar = make("Jar 1", product(owner, now, "Mystery"))
    said = {"vessels": [str(jar.uuid)], "note": "Rubbish."}
    assert set(errors_of(api.post("empty-containers/put-away", said), 400)) == {"confirmed"}
    (gone,) = api.post("empty-containers/put-away", {**said, "confirmed": True}).json()["vessels"]
    assert gone["gone_at"] is not None
    assert api.get(f"vessels/{jar.uuid}/").json()["gone_at"] == gone["gone_at"]
    refused = errors_of(api.record("receipt", vessel=str(jar.uuid), amount="1 kg"), 400)
    assert "Jar 1 is gone since" in refused["vessel"]
    (back,) = api.post("empty-containers/here-again", {"vessels": [str(jar.uuid)]}).json()["vessels"]
    assert back["gone_at"] is None
    assert api.record("receipt", vessel=str(jar.uuid), amount="1 kg").status_code == 201


def test_what_stays_a_waste_goes_by_a_hand_over_only(api: Caller, make: Make, owner: Membership, now: Any) -> None:
    jar = make("Jar 1", product(owner, now, "Poison", "H310"))
    said = {"vessels": [str(jar.uuid)], "confirmed": True}
    assert "hand it over" in errors_of(api.post("empty-containers/put-away", said), 400)["vessels"]
    key = uuid4()
    first = api.record("hand-over", key, container=str(jar.uuid), receiver="The yard")
    again = api.record("hand-over", key, container=str(jar.uuid), receiver="The yard")
    assert (first.status_code, again.json()["uuid"]) == (201, first.json()["uuid"])
    assert api.get("empty-containers/").json() == {"containers": []}
    refused = errors_of(api.post("empty-containers/here-again", {"vessels": [str(jar.uuid)]}), 400)
    assert "was handed over" in refused["vessels"]


def test_what_is_unknown_is_told_by_its_place(api: Caller, shop: Shop) -> None:
    for act in ("put-away", "here-again"):
        said = {"vessels": [str(shop.stock.uuid), str(uuid4())], "colour": "red"}
        assert set(errors_of(api.post(f"empty-containers/{act}", said), 400)) == {"colour"}
        del said["colour"]
        assert set(errors_of(api.post(f"empty-containers/{act}", said), 400)) == {"vessels.1"}


def test_one_and_three_empties_take_the_same_queries(api: Caller, make: Make, owner: Membership, now: Any) -> None:
    poison, counts = product(owner, now, "Poison", "H310"), []
    for jars in (["Jar 1"], ["Jar 2", "Jar 3"]):
        for jar in jars:
            make(jar, poison)
        with CaptureQueriesContext(connection) as queries:
            api.get("empty-containers/")
        counts.append(len(queries))
    assert counts[0] == counts[1]
