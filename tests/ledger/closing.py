"""Closing and opening periods, in few words."""

from collections.abc import Callable
from datetime import UTC, datetime
from uuid import UUID, uuid4

import pytest
from django_scopes import scope

from chemicals.books import events, fold
from chemicals.ledger.models import Period, Posting
from chemicals.ledger.periods import close_period, reopen_period
from chemicals.ledger.verify import verify_projection
from chemicals.workshop.errors import DomainError, InvalidInputError
from chemicals.workshop.models import Membership, Role
from tests.conftest import make_member
from tests.process.shop import Shop

BEGUN = datetime(2026, 2, 27, 23, tzinfo=UTC)
"""28 February 2026, 0:00 in Berlin: two days and a half before the tests' now."""


def owner_of(shop: Shop) -> Membership:
    """Return the owner of the shop; whoever works there is none."""
    owner = shop.member.workshop.memberships.filter(role=Role.OWNER).first()
    return owner or make_member(shop.member.workshop, Role.OWNER, "otto@alder.example")


def close(shop: Shop, until: datetime = BEGUN, *, actor: Membership | None = None, key: UUID | None = None) -> Period:
    return close_period(actor=actor or owner_of(shop), now=shop.now, key=key or uuid4(), until=until)


def reopen(owner: Membership, period: Period, reason: str = "a drum was forgotten", key: UUID | None = None) -> Period:
    now = datetime(2026, 3, 2, 16, tzinfo=UTC)
    return reopen_period(actor=owner, now=now, key=key or uuid4(), period=period, reason=reason)


def refusal(act: Callable[[], object], error: type[DomainError] = InvalidInputError) -> str:
    with pytest.raises(error) as caught:
        act()
    return str(caught.value)


def problems(shop: Shop) -> list[tuple[int | None, str]]:
    return [(problem.sequence, problem.message) for problem in verify_projection(shop.member.workshop)]


def fold_by_another_version(monkeypatch: pytest.MonkeyPatch) -> None:
    """From now on the fold has another version, by which nothing is dragged out in a run."""
    monkeypatch.setattr(fold, "VERSION", fold.VERSION + 1)
    monkeypatch.setattr(fold, "FOLDS", {**fold.FOLDS, events.Run: lambda folding, event: None})


def postings_of(shop: Shop, label: str) -> int:
    with scope(workshop=shop.member.workshop):
        return Posting.objects.filter(entry=shop.entries[label]).count()
