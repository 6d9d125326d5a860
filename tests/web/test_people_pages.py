"""People on the pages: signing in, the first start, links for passwords, members, keys."""

import re
from pathlib import Path
from typing import Any

import pytest
from django.test import Client
from pytest_django import Settings

from chemicals.workshop.models import ApiToken, Membership, Role, User, Workshop
from compliance.ops.first_start import ensure_token
from tests.web.conftest import Line, Visitor, text_of

PASSWORD = "quiet copper kettle"


def sign_in(client: Client, email: str, password: str, **more: str) -> Any:
    return client.post("/sign-in", {"username": email, "password": password, **more})


def test_signing_in_leads_to_where_one_wanted_to_go(owner: Membership, line: Line) -> None:
    client, wanted = Client(), Visitor(owner).address("tanks")
    sent_to = client.get(wanted).headers["Location"]
    assert sent_to == f"/sign-in?next={wanted}"
    assert f'name="next" value="{wanted}"' in client.get(sent_to).content.decode()
    arrived = sign_in(client, "OLGA@alder.example", "olga@alder.example", next=wanted)
    assert arrived.headers["Location"] == wanted
    assert client.post("/sign-out").headers["Location"] == "/sign-in"
    assert client.get(wanted).status_code == 302


def test_a_wrong_password_says_the_same_whoever_it_is(owner: Membership) -> None:
    pages = [text_of(sign_in(Client(), email, "wrong")) for email in (owner.user.email, "nobody@alder.example")]
    assert all("do not go together" in page for page in pages)


def test_nobody_is_sent_to_a_foreign_address(owner: Membership) -> None:
    arrived = sign_in(Client(), owner.user.email, owner.user.email, next="https://elsewhere.example/")
    assert arrived.headers["Location"] == "/"


def test_too_many_wrong_passwords_shut_the_door(owner: Membership, settings: Settings) -> None:
    settings.AXES_ENABLED = True
    client = Client()
    for _ in range(settings.AXES_FAILURE_LIMIT):
        page = sign_in(client, owner.user.email, "wrong")
    assert page.status_code == 429
    assert "Wait a quarter of an hour" in text_of(page)
    assert sign_in(client, owner.user.email, owner.user.email).status_code == 429


@pytest.fixture
def token(db: None, tmp_path: Path, settings: Settings) -> str:
    """Return the token that the terminal printed."""
    settings.DATA = tmp_path
    found = ensure_token(tmp_path)
    assert found is not None
    return found


def first(token: str, **changes: str) -> dict[str, str]:
    said = {
        "token": token,
        "workshop_name": "Bench and bath",
        "time_zone": "Europe/Berlin",
        "name": "Ada",
        "email": "ada@example.org",
        "password": PASSWORD,
    }
    return {**said, **changes}


def test_whoever_reads_the_terminal_becomes_the_first_owner(token: str) -> None:
    client = Client()
    assert token in client.get("/first-start", {"token": token}).content.decode()
    arrived = client.post("/first-start", first(token))
    workshop = Workshop.objects.get()
    assert arrived.headers["Location"] == f"/w/{workshop.uuid}/"
    assert client.get(arrived.headers["Location"]).status_code == 200
    assert Membership.objects.get().role == Role.OWNER
    assert client.get("/first-start", {"token": token}).status_code == 409


def test_the_first_start_tells_all_errors_and_keeps_the_token_good(token: str) -> None:
    page = Client().post("/first-start", first(token, workshop_name="", email="ada", password="short"))
    text = text_of(page)
    assert page.status_code == 400
    assert 'href="#id_workshop_name"' in text
    page = Client().post("/first-start", first(token, email="ada", password="short"))
    assert {"#id_email", "#id_password"} <= set(re.findall(r'href="(#id_[a-z_]+)"', text_of(page)))
    assert not User.objects.exists()
    assert Client().post("/first-start", first(token)).status_code == 302


def test_a_wrong_token_opens_nothing(token: str) -> None:
    assert Client().get("/first-start", {"token": "guess"}).status_code == 409
    assert Client().post("/first-start", first("guess")).status_code == 409
    assert not User.objects.exists()


def invited(visit: Visitor, email: str = "ina@alder.example") -> Membership:
    assert visit.post("invite", name="Ina", email=email, role="worker").status_code == 302
    return Membership.objects.get(user__email=email, workshop=visit.member.workshop)


def link_for(visit: Visitor, member: Membership) -> str:
    page = visit.post("password-link", member.uuid).content.decode()
    found = re.search(r'id="link">http://testserver([^<]+)<', page)
    assert found is not None
    return found[1]


def set_password(address: str, password: str = PASSWORD) -> Any:
    client = Client()
    form = client.get(address)
    return client.post(form.headers["Location"], {"new_password1": password, "new_password2": password})


def test_an_invited_person_sets_a_password_through_the_link_once(visit: Visitor) -> None:
    member = invited(visit)
    assert "no password yet" in text_of(visit.get("workshop"))
    address = link_for(visit, member)
    assert set_password(address).headers["Location"] == "/sign-in"
    assert sign_in(Client(), member.user.email, PASSWORD).status_code == 302
    assert "was used or is too old" in text_of(Client().get(address))


def test_a_weak_password_is_refused(visit: Visitor) -> None:
    address = link_for(visit, invited(visit))
    client = Client()
    page = client.post(client.get(address).headers["Location"], {"new_password1": "short", "new_password2": "short"})
    assert "too short" in text_of(page)


def test_an_owner_cannot_take_over_a_member_of_another_workshop(visit: Visitor, stranger: Membership) -> None:
    member = invited(visit, stranger.user.email)
    page = visit.post("password-link", member.uuid)
    assert page.status_code == 403
    assert "belongs to another workshop" in text_of(page)


def test_a_link_ends_when_its_person_joins_another_workshop(visit: Visitor, stranger: Membership) -> None:
    member = invited(visit)
    address = link_for(visit, member)
    Membership.objects.create(workshop=stranger.workshop, user=member.user, role=Role.OWNER)
    assert "was used or is too old" in text_of(Client().get(address))


def test_a_role_is_changed_and_a_membership_ended(visit: Visitor) -> None:
    member = invited(visit)
    visit.post("change-member", member.uuid, role="observer", active="on")
    member.refresh_from_db()
    assert (member.role, member.active) == ("observer", True)
    visit.post("change-member", member.uuid, role="observer")
    member.refresh_from_db()
    assert not member.active
    assert "ended" in text_of(visit.get("workshop"))


def test_the_last_owner_stays(visit: Visitor, owner: Membership) -> None:
    page = visit.post("change-member", owner.uuid, role="worker", active="on")
    assert page.status_code == 400
    assert "keeps at least one owner" in text_of(page)


def test_a_key_is_shown_once_and_can_be_ended(visit: Visitor) -> None:
    page = visit.post("add-token", name="scale")
    found = re.search(r'id="key">(glt_[^<]+)<', page.content.decode())
    assert found is not None
    assert found[1] not in visit.get("workshop").content.decode()
    assert visit.post("end-token", ApiToken.objects.get().uuid).status_code == 302
    assert ApiToken.objects.get().revoked_at is not None
    assert visit.post("add-token", name=" ").status_code == 400


def test_the_workshop_is_described_by_its_owner(visit: Visitor) -> None:
    said = {"name": "Alder Court", "address": "Lane 1\r\nTown", "telephone": "+49 1", "time_zone": "Europe/Vienna"}
    said |= {"sheet_years": "5"}
    assert visit.post("workshop-settings", **said).status_code == 302
    workshop = Workshop.objects.get()
    assert (workshop.address, workshop.time_zone, workshop.sheet_years) == ("Lane 1\nTown", "Europe/Vienna", 5)
    assert "after 5 years" in text_of(visit.get("workshop"))
    assert visit.post("workshop-settings", **{**said, "sheet_years": "0"}).status_code == 400
    assert visit.post("workshop-settings", **{**said, "time_zone": "Mars/Base"}).status_code == 400


def test_a_place_is_added(visit: Visitor) -> None:
    assert visit.post("add-place", name="Shelf", bund="north").status_code == 302
    assert "bund north" in text_of(visit.get("workshop"))
    page = visit.post("add-place", name="Shelf")
    assert page.status_code == 400
