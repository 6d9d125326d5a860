"""Who may ask: tokens, revoked tokens, strangers, observers."""

from collections.abc import Callable
from datetime import datetime
from uuid import uuid4

import pytest
from rest_framework.test import APIClient

from chemicals.workshop.models import ApiToken, Membership, Role, User
from chemicals.workshop.services import revoke_token
from tests.api.conftest import Caller, Shop, errors_of

Call = Callable[[Membership], Caller]


def test_without_a_token_nothing_is_told(owner: Membership) -> None:
    response = APIClient().get(f"/api/v1/workshops/{owner.workshop.uuid}/vessels/")
    assert "Authorization" in errors_of(response, 401)
    assert response.headers["WWW-Authenticate"] == "Bearer"


@pytest.mark.parametrize("header", ["Bearer glt_unknown", "Bearer ", "Bearer", "Basic b2xnYTpvbGdh", "glt_bare"])
def test_a_wrong_header_says_what_to_write(owner: Membership, header: str) -> None:
    client = APIClient()
    client.credentials(HTTP_AUTHORIZATION=header)
    response = client.get("/api/v1/workshops/")
    assert len(errors_of(response, 401)["Authorization"]) > 30
    assert response.headers["WWW-Authenticate"] == "Bearer"


def test_a_session_opens_nothing_here(owner: Membership) -> None:
    client = APIClient()
    client.force_login(owner.user, backend="django.contrib.auth.backends.ModelBackend")
    assert client.get("/api/v1/workshops/").status_code == 401


def test_a_token_opens_its_own_workshop(api: Caller, owner: Membership) -> None:
    said = api.get("/workshops/").json()
    assert [(row["name"], row["role"]) for row in said["results"]] == [("Alder Court", "owner")]
    assert (said["next"], said["previous"]) == (None, None)
    assert said["results"][0]["uuid"] == str(owner.workshop.uuid)
    assert api.get("/workshops/").headers["Cache-Control"] == "private, no-cache"


def test_a_revoked_token_is_refused(api: Caller, owner: Membership, now: datetime) -> None:
    assert api.get("").status_code == 200
    revoke_token(actor=owner, now=now, token_uuid=ApiToken.objects.get().uuid)
    assert "revoked" in errors_of(api.get(""), 401)["Authorization"]


def test_the_token_of_somebody_who_left_is_refused(call: Call, worker: Membership) -> None:
    caller = call(worker)
    Membership.objects.filter(pk=worker.pk).update(active=False)
    assert caller.get("").status_code == 401


def test_the_token_of_a_deactivated_person_is_refused(call: Call, worker: Membership) -> None:
    caller = call(worker)
    User.objects.filter(pk=worker.user_id).update(is_active=False)
    assert caller.get("").status_code == 401


def test_a_stranger_gets_404_as_for_a_workshop_that_does_not_exist(
    call: Call, shop: Shop, stranger: Membership
) -> None:
    caller = call(stranger)
    caller.workshop = shop.workshop.uuid
    absent = Caller(caller.token, uuid4())
    for address in ("", "vessels/", f"vessels/{shop.bath.uuid}/", "entries/"):
        assert caller.get(address).status_code == 404
        assert caller.get(address).json() == absent.get(address).json()
    assert caller.post("places/", {"name": "Shelf"}).status_code == 404
    assert caller.record("move", source=str(shop.bath.uuid), target=str(shop.rinse.uuid)).status_code == 404


def test_a_things_uuid_is_no_key_to_another_workshop(call: Call, shop: Shop, stranger: Membership) -> None:
    caller = call(stranger)
    for address in (
        f"vessels/{shop.bath.uuid}/",
        f"products/{shop.product.uuid}/",
        f"waste-containers/{shop.drum.vessel.uuid}/",
        f"routes/{shop.route.uuid}/",
    ):
        assert caller.get(address).status_code == 404
    wrong = caller.record("move", source=str(shop.bath.uuid), target=str(shop.rinse.uuid))
    assert set(errors_of(wrong, 400)) == {"source", "target"}


def test_an_observer_reads_and_writes_nothing(call: Call, observer: Membership, shop: Shop) -> None:
    caller = call(observer)
    assert caller.get("vessels/").status_code == 200
    for response in (
        caller.post("places/", {"name": "Shelf"}),
        caller.post("preview/move", {}),
        caller.record("move", source=str(shop.bath.uuid), target=str(shop.rinse.uuid)),
        caller.post(f"waste-containers/{shop.drum.vessel.uuid}/close", {"gross": "20 kg"}),
    ):
        assert "Observers only read" in errors_of(response, 403)[""]


def test_a_worker_writes(call: Call, worker: Membership) -> None:
    assert worker.role == Role.WORKER
    assert call(worker).post("places/", {"name": "Shelf"}).status_code == 201
