"""People and premises: roles, invitations, the last owner, names that papers can carry, keys of the API."""

from datetime import datetime

import pytest
from django_scopes import scope

from chemicals.workshop import services
from chemicals.workshop.errors import InvalidInputError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership, Place, Role, User, Workshop
from chemicals.workshop.selectors import (
    get_member_for,
    get_membership_by_token,
    get_membership_for,
    get_place_for,
    list_emergency_numbers_for,
    list_members_for,
    list_memberships_of,
    list_tokens_for,
)


def fields_of(error: InvalidInputError) -> list[str]:
    return [each.field for each in error.errors]


@pytest.mark.django_db
def test_a_workshop_begins_with_its_owner(now: datetime) -> None:
    user = services.create_user(email="Ada@Example.org", password="quiet copper bath", name=" Ada ")
    member = services.create_workshop(now=now, name=" Elm Works ", time_zone="Europe/Paris", owner=user)
    assert (user.email, user.name, member.role) == ("ada@example.org", "Ada", Role.OWNER)
    assert (member.workshop.name, member.workshop.zone.key) == ("Elm Works", "Europe/Paris")
    assert list(list_memberships_of(user)) == [member]


@pytest.mark.django_db
@pytest.mark.parametrize(
    ("name", "zone", "telephone", "fields"),
    [
        ("", "UTC", "", ["name"]),
        ("x" * 121, "UTC", "", ["name"]),
        ("Elm\x07", "UTC", "", ["name"]),
        ("Elm", "Europe/Atlantis", "", ["time_zone"]),
        ("Elm", "UTC", "1\n2", ["telephone"]),
    ],
)
def test_a_workshop_is_refused_by_field(now: datetime, name: str, zone: str, telephone: str, fields: list[str]) -> None:
    user = User.objects.create_user("ada@example.org")
    with pytest.raises(InvalidInputError) as caught:
        services.create_workshop(now=now, name=name, time_zone=zone, owner=user, telephone=telephone)
    assert fields_of(caught.value) == fields
    assert not Workshop.objects.exists()


@pytest.mark.django_db
def test_an_address_may_have_lines(now: datetime) -> None:
    user = User.objects.create_user("ada@example.org")
    member = services.create_workshop(now=now, name="Elm", time_zone="UTC", owner=user, address="1 Lane\nTown\n")
    assert member.workshop.address == "1 Lane\nTown"


@pytest.mark.parametrize(("years", "kept"), [(5, 5), (None, 3)])
def test_when_a_sheet_is_old_is_the_workshop_s_own_figure(owner: Membership, years: int | None, kept: int) -> None:
    said = {"name": "Alder", "address": "", "telephone": "", "time_zone": "UTC"}
    assert services.change_workshop(actor=owner, **said, sheet_years=years).sheet_years == kept
    with pytest.raises(InvalidInputError) as caught:
        services.change_workshop(actor=owner, **said, sheet_years=0)
    assert fields_of(caught.value) == ["sheet_years"]


@pytest.mark.django_db
@pytest.mark.parametrize(
    ("email", "password", "name", "fields"),
    [
        ("nobody", "quiet copper bath", "Ada", ["email"]),
        ("ada@example.org", "short", "Ada", ["password"]),
        ("ada@example.org", "quiet copper bath", "A\x00da", ["name"]),
        ("nobody", "short", "A\nda", ["password", "name", "email"]),
    ],
)
def test_a_user_is_refused_by_field(email: str, password: str, name: str, fields: list[str]) -> None:
    with pytest.raises(InvalidInputError) as caught:
        services.create_user(email=email, password=password, name=name)
    assert fields_of(caught.value) == fields
    assert not User.objects.exists()


def test_an_address_belongs_to_one_person(worker: Membership) -> None:
    with pytest.raises(InvalidInputError, match="email"):
        services.create_user(email="WIM@alder.example", password="quiet copper bath", name="Wim")
    assert User.objects.filter(email__iexact="wim@alder.example").count() == 1


def test_only_owners_invite_and_a_person_is_invited_once(
    owner: Membership, worker: Membership, stranger: Membership
) -> None:
    with pytest.raises(NotPermittedError):
        services.invite_member(actor=worker, email="new@alder.example", name="New", role=Role.WORKER)
    invited = services.invite_member(actor=owner, email=" New@alder.example", name="New", role=Role.OBSERVER)
    assert (invited.user.email, invited.user.has_usable_password()) == ("new@alder.example", False)
    with pytest.raises(InvalidInputError, match="member already"):
        services.invite_member(actor=owner, email="new@alder.example", name="New", role=Role.WORKER)
    with pytest.raises(InvalidInputError, match="Choose owner, worker or observer"):
        services.invite_member(actor=owner, email="x@alder.example", name="X", role="king")
    guest = services.invite_member(actor=owner, email=stranger.user.email, name="ignored", role=Role.WORKER)
    assert guest.user == stranger.user
    assert {member.role for member in list_memberships_of(stranger.user)} == {Role.OWNER, Role.WORKER}


def test_the_last_owner_stays(owner: Membership, worker: Membership) -> None:
    for role, active in ((Role.WORKER, True), (Role.OWNER, False)):
        with pytest.raises(InvalidInputError, match="keeps at least one owner"):
            services.change_member(actor=owner, member_uuid=owner.uuid, role=role, active=active)
    owner.refresh_from_db()
    assert (owner.role, owner.active) == (Role.OWNER, True)
    services.change_member(actor=owner, member_uuid=worker.uuid, role=Role.OWNER, active=True)
    services.change_member(actor=owner, member_uuid=owner.uuid, role=Role.WORKER, active=True)
    assert Membership.objects.get(pk=owner.pk).role == Role.WORKER


def test_nobody_changes_people_of_another_workshop(owner: Membership, stranger: Membership) -> None:
    with pytest.raises(NotFoundError):
        services.change_member(actor=owner, member_uuid=stranger.uuid, role=Role.OBSERVER, active=False)
    with pytest.raises(NotFoundError):
        get_member_for(owner, stranger.uuid)
    with pytest.raises(NotFoundError):
        get_membership_for(stranger.user, owner.workshop.uuid)
    assert stranger not in list_members_for(owner)


def test_who_has_left_is_no_member(owner: Membership, worker: Membership) -> None:
    services.change_member(actor=owner, member_uuid=worker.uuid, role=Role.WORKER, active=False)
    with pytest.raises(NotFoundError):
        get_membership_for(worker.user, owner.workshop.uuid)
    assert list(list_memberships_of(worker.user)) == []


def test_places_have_one_name_each(worker: Membership, observer: Membership, stranger: Membership) -> None:
    place = services.create_place(actor=worker, name=" Bench ", bund="tray")
    assert place.name == "Bench"
    with pytest.raises(InvalidInputError, match="Choose another name") as caught:
        services.create_place(actor=worker, name="Bench")
    assert fields_of(caught.value) == ["name"]
    with pytest.raises(InvalidInputError):
        services.create_place(actor=worker, name="")
    with pytest.raises(NotPermittedError):
        services.create_place(actor=observer, name="Shelf")
    assert get_place_for(observer, place.uuid) == place
    with pytest.raises(NotFoundError):
        get_place_for(stranger, place.uuid)
    with scope(workshop=worker.workshop):
        assert Place.objects.count() == 1


def test_a_token_is_shown_once_and_ends_when_revoked(worker: Membership, now: datetime) -> None:
    token, key = services.create_token(actor=worker, now=now, name="scale")
    assert key not in str(vars(token))
    assert get_membership_by_token(key) == worker
    assert list(list_tokens_for(worker)) == [token]
    services.revoke_token(actor=worker, now=now, token_uuid=token.uuid)
    with pytest.raises(NotFoundError, match="unknown or revoked"):
        get_membership_by_token(key)
    with pytest.raises(NotFoundError, match="revoked already"):
        services.revoke_token(actor=worker, now=now, token_uuid=token.uuid)


def test_a_token_of_somebody_else_cannot_be_revoked(worker: Membership, owner: Membership, now: datetime) -> None:
    token, key = services.create_token(actor=worker, now=now, name="scale")
    with pytest.raises(NotFoundError):
        services.revoke_token(actor=owner, now=now, token_uuid=token.uuid)
    assert get_membership_by_token(key) == worker


def test_a_token_ends_with_the_membership(worker: Membership, owner: Membership, now: datetime) -> None:
    _, key = services.create_token(actor=worker, now=now, name="scale")
    services.change_member(actor=owner, member_uuid=worker.uuid, role=Role.WORKER, active=False)
    with pytest.raises(NotFoundError):
        get_membership_by_token(key)
    with pytest.raises(NotFoundError):
        get_membership_by_token("glt_guess")


@pytest.mark.parametrize("name", ["", "x" * 81, "a\x00b"])
def test_a_token_needs_a_name(worker: Membership, now: datetime, name: str) -> None:
    with pytest.raises(InvalidInputError) as caught:
        services.create_token(actor=worker, now=now, name=name)
    assert fields_of(caught.value) == ["name"]


def set_numbers(actor: Membership, now: datetime, *rows: tuple[str, str]) -> None:
    services.set_emergency_numbers(actor=actor, now=now, numbers=[services.NumberInput(*row) for row in rows])


def test_emergency_numbers_are_replaced_as_a_whole(owner: Membership, observer: Membership, now: datetime) -> None:
    set_numbers(owner, now, ("Fire brigade", "112"), (" Poison centre ", "+49 000 19240"))
    set_numbers(owner, now, ("Poison centre", "+49 000 19240"), ("Fire brigade", "112"), ("Owner", "000 1"))
    rows = list_emergency_numbers_for(observer)
    assert [(row.label, row.number) for row in rows] == [
        ("Poison centre", "+49 000 19240"),
        ("Fire brigade", "112"),
        ("Owner", "000 1"),
    ]
    assert {(row.entered_by, row.entered_at) for row in rows} == {(owner, now)}


def test_wrong_emergency_numbers_are_told_all_at_once_and_the_old_ones_stay(owner: Membership, now: datetime) -> None:
    set_numbers(owner, now, ("Fire brigade", "112"))
    with pytest.raises(InvalidInputError) as caught:
        set_numbers(owner, now, ("", "112"), ("Neighbour", "ask"), ("Poison\ncentre", ""), *[("x", "1")] * 10)
    assert fields_of(caught.value) == [
        "numbers.0.label",
        "numbers.1.number",
        "numbers.2.label",
        "numbers.2.number",
        "numbers",
    ]
    assert [str(row) for row in list_emergency_numbers_for(owner)] == ["Fire brigade: 112"]


def test_emergency_numbers_are_the_owners_to_set_and_stay_in_the_workshop(
    owner: Membership, worker: Membership, stranger: Membership, now: datetime
) -> None:
    set_numbers(owner, now, ("Fire brigade", "112"))
    set_numbers(stranger, now, ("Fire brigade", "911"))
    with pytest.raises(NotPermittedError):
        set_numbers(worker, now)
    assert [row.number for row in list_emergency_numbers_for(worker)] == ["112"]
    assert [row.number for row in list_emergency_numbers_for(stranger)] == ["911"]
