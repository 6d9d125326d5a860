"""Who sees what: every address and every method, as five kinds of people of two workshops."""

from collections.abc import Callable, Iterator
from datetime import datetime
from typing import Any

import pytest
from django.apps import apps
from django.db import models, transaction
from django.test import Client
from django_scopes import scopes_disabled
from pytest_django.plugin import DjangoDbBlocker

from chemicals.journal.models import Attachment
from chemicals.workshop.models import Membership, Role, User, Workshop
from chemicals.workshop.services import create_token
from compliance.ops.demo import load_demo
from tests.conftest import NOW, make_member
from tests.house.walk import METHODS, WRITING, Address, addresses, secrets_of

PUBLIC = {"sign-in", "sign-out", "first-start", "set-password/<uidb64>/<token>"}
"""Addresses that anybody may open: they show nothing of a workshop."""
ASKS_BACK = {"first-start": 409, "w/<uuid:workshop>/waste/<uuid:uuid>/may/": 400}
"""Addresses that answer a bare GET with a reason: there is an owner already; nothing was chosen to pour in."""
NOT_DATA = {"Session", "AccessAttempt", "AccessLog", "AccessFailureLog", "AccessAttemptExpiration"}


class Walk:
    """The demo workshop with its people, a stranger who owns another one, and all addresses."""

    def __init__(self, now: datetime) -> None:
        load_demo(now=now)
        self.workshop = Workshop.objects.get()
        members = {role: self.workshop.memberships.filter(role=role).first() for role in Role.values}
        self.owner, self.worker, self.observer = (self._need(members[role]) for role in Role.values)
        self.stranger = make_member(
            Workshop.objects.create(name="Birch Yard", time_zone="UTC", created_at=now),
            Role.OWNER,
            "sten@birch.example",
        )
        with scopes_disabled():
            sha256 = Attachment.objects.filter(workshop=self.workshop).values_list("sha256", flat=True)[0]
            self.addresses = addresses(self.owner, sha256)
            self.secrets = secrets_of(self.owner)
            self.keys = {
                member: create_token(actor=member, now=now, name="walk")[1]
                for member in (self.owner, self.worker, self.stranger)
            }
            self.keys[self.observer] = self._observers_key(now)

    @staticmethod
    def _need(member: Membership | None) -> Membership:
        assert member is not None, "the demo has an owner, a worker and an observer"
        return member

    def _observers_key(self, now: datetime) -> str:
        """Return a key that a worker made before becoming an observer."""
        Membership.objects.filter(pk=self.observer.pk).update(role=Role.WORKER)
        self.observer.refresh_from_db()
        key = create_token(actor=self.observer, now=now, name="walk")[1]
        Membership.objects.filter(pk=self.observer.pk).update(role=Role.OBSERVER)
        self.observer.refresh_from_db()
        return key

    def ask(self, member: Membership | None, address: Address, method: str) -> Any:
        """Send a request as a member, or as nobody."""
        client = Client(raise_request_exception=True)
        headers = {}
        if member is not None and address.in_api:
            headers = {"authorization": f"Bearer {self.keys[member]}"}
        elif member is not None:
            client.force_login(member.user, backend="django.contrib.auth.backends.ModelBackend")
        return getattr(client, method)(address.path, headers=headers)


@pytest.fixture(scope="module")
def demo_walk(django_db_setup: None, django_db_blocker: DjangoDbBlocker) -> Iterator[Walk]:
    """Load the demo once for all tests here; each of them runs in a savepoint of this transaction."""
    with django_db_blocker.unblock(), transaction.atomic():
        yield Walk(NOW)
        transaction.set_rollback(True)


@pytest.fixture
def walk(demo_walk: Walk, db: None) -> Walk:
    """Return the walk through the demo workshop."""
    return demo_walk


def count_rows() -> dict[str, int]:
    """Return the number of rows of every table that holds data of people."""
    with scopes_disabled():
        return {
            model.__name__: model._default_manager.count()
            for model in apps.get_models()
            if model.__name__ not in NOT_DATA and issubclass(model, models.Model)
        }


def body_of(response: Any) -> str:
    """Return what the answer says, streamed or not."""
    content = b"".join(response.streaming_content) if response.streaming else response.content
    return str(content, "utf-8", "replace")


def test_the_walk_reaches_every_room(walk: Walk) -> None:
    assert len({address.route for address in walk.addresses}) > 70
    assert sum(address.in_api for address in walk.addresses) > 40
    assert len(walk.secrets) > 15


def test_a_stranger_gets_404_everywhere(walk: Walk) -> None:
    wrong = []
    for address in walk.addresses:
        for method in METHODS:
            response = walk.ask(walk.stranger, address, method)
            if not _hidden(address, method, response.status_code):
                wrong.append(f"{method} {address.path}: {response.status_code}")
            leaked = sorted(secret for secret in walk.secrets if secret in body_of(response))
            if leaked:
                wrong.append(f"{method} {address.path} tells {leaked}")
    assert wrong == []


def _hidden(address: Address, method: str, status: int) -> bool:
    """Say whether the answer could be the same for a thing that does not exist."""
    if address.route == "c/<str:code>":  # it knows no other methods, whatever the code
        return status == (404 if method in ("get", "head") else 405)
    return status == 404 or not address.in_workshop


def test_an_anonymous_visitor_is_asked_to_sign_in(walk: Walk) -> None:
    wrong = []
    for address in walk.addresses:
        for method in METHODS:
            response = walk.ask(None, address, method)
            asked = response.status_code == 401 if address.in_api else _leads_to_sign_in(response)
            if address.route not in PUBLIC and not asked:
                wrong.append(f"{method} {address.path}: {response.status_code}")
            if any(secret in body_of(response) for secret in walk.secrets):
                wrong.append(f"{method} {address.path} tells a secret")
    assert wrong == []


def _leads_to_sign_in(response: Any) -> bool:
    return response.status_code == 302 and str(response.headers["Location"]).startswith("/sign-in")


def test_an_observer_reads_and_writes_nothing(walk: Walk) -> None:
    before, wrong = count_rows(), []
    for address in walk.addresses:
        if not address.in_workshop:
            continue
        for method in METHODS:
            status = walk.ask(walk.observer, address, method).status_code
            if method in WRITING and status not in (403, 405):
                wrong.append(f"{method} {address.path}: {status}")
            if method == "get" and status not in (200, 302, 403, 405, ASKS_BACK.get(address.route)):
                wrong.append(f"{method} {address.path}: {status}")
    assert wrong == []
    assert count_rows() == before


@pytest.mark.parametrize("who", [Role.OWNER, Role.WORKER])
def test_members_get_a_page_or_a_reason_never_a_crash(walk: Walk, who: Role) -> None:
    member = {Role.OWNER: walk.owner, Role.WORKER: walk.worker}[who]
    wrong = []
    for address in walk.addresses:
        status = walk.ask(member, address, "get").status_code
        if status not in (200, 302, 403, 404, 405, ASKS_BACK.get(address.route)) or (
            status == 404 and address.in_workshop and "tokens" not in address.route
        ):
            wrong.append(f"get {address.path}: {status}")
    assert wrong == []


def test_no_page_or_answer_passes_judgement(walk: Walk) -> None:
    word = "compl" + "iant"
    pages = [(address.path, body_of(walk.ask(walk.owner, address, "get"))) for address in walk.addresses]
    assert [path for path, text in pages if word in text.lower()] == []
    assert sum(len(text) > 500 for _, text in pages) > 60


def test_reading_writes_nothing(walk: Walk) -> None:
    before = count_rows()
    for address in walk.addresses:
        for method in ("get", "head", "options"):
            walk.ask(walk.owner, address, method)
    assert count_rows() == before


def test_somebody_whose_membership_ended_is_a_stranger(walk: Walk) -> None:
    Membership.objects.filter(pk=walk.worker.pk).update(active=False)
    inside = [address for address in walk.addresses if address.in_workshop]
    expected: Callable[[Address], int] = lambda address: 401 if address.in_api else 404  # noqa: E731  (read beside its use)
    wrong = [a.path for a in inside if walk.ask(walk.worker, a, "get").status_code != expected(a)]
    assert wrong == []


def test_a_deactivated_person_is_nobody(walk: Walk) -> None:
    User.objects.filter(pk=walk.worker.user_id).update(is_active=False)
    client = Client()
    client.force_login(walk.worker.user, backend="django.contrib.auth.backends.ModelBackend")
    assert client.get(f"/w/{walk.workshop.uuid}/").status_code == 302
