"""Appending many entries at once: the same chain as one by one, all of them or none."""

from datetime import datetime, timedelta
from typing import Any
from unittest.mock import patch
from uuid import UUID, uuid4

import pytest
from django_scopes import scopes_disabled

from chemicals.books import events
from chemicals.books.clearance import Clearance, not_asked
from chemicals.books.occurred import Occurred
from chemicals.journal import files
from chemicals.journal.models import Entry
from chemicals.journal.selectors import get_head
from chemicals.journal.services import Fact, append_all, keep_file
from chemicals.journal.verify import verify_chain
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership, Workshop
from tests.journal.conftest import Note, hand_over


def fact(now: datetime, days: int = 1, event: events.Event | None = None, **said: Any) -> Fact:
    """Return something that happened some days ago."""
    known = {"key": uuid4(), "clearance": not_asked("of a test"), **said}
    return Fact(event=event or hand_over(f"receiver {days}"), occurred=Occurred(now - timedelta(days=days)), **known)


def entries() -> list[Entry]:
    with scopes_disabled():
        return list(Entry.objects.order_by("sequence").select_related("about"))


def test_they_follow_what_is_there_in_the_order_given(
    worker: Membership, workshop: Workshop, now: datetime, note: Note
) -> None:
    note()
    facts = [fact(now, days) for days in (3, 9, 1)]
    written = append_all(actor=worker, now=now, facts=facts)
    assert [entry.uuid for entry in written] == [each.key for each in facts]
    assert [entry.sequence for entry in written] == [2, 3, 4]
    assert entries()[1:] == written
    assert verify_chain(workshop) == []
    note()
    assert get_head(workshop)[0] == 5
    assert verify_chain(workshop) == []


def test_one_may_speak_of_another_that_comes_with_it(worker: Membership, workshop: Workshop, now: datetime) -> None:
    first, later = fact(now), uuid4()
    cancelling = fact(now, event=events.Cancellation(first.key, "a mistake"), key=later)
    append_all(actor=worker, now=now, facts=[first, cancelling])
    told = {entry.uuid: entry.about and entry.about.uuid for entry in entries()}
    assert told == {first.key: None, later: first.key}
    assert verify_chain(workshop) == []


def test_nothing_to_append_changes_nothing(worker: Membership, workshop: Workshop, now: datetime) -> None:
    assert append_all(actor=worker, now=now, facts=[]) == []
    assert get_head(workshop) == (0, "00" * 32)


def test_many_take_no_more_queries_than_their_batches(
    worker: Membership, now: datetime, django_assert_max_num_queries: Any
) -> None:
    facts = [fact(now) for _ in range(300)]
    with django_assert_max_num_queries(16):  # on SQLite an INSERT takes 76 rows of 13 columns
        append_all(actor=worker, now=now, facts=facts)
    assert len(entries()) == 300


@pytest.mark.parametrize("wrong", ["future", "control character", "file"])
def test_one_that_cannot_be_kept_keeps_all_of_them_out(worker: Membership, now: datetime, wrong: str) -> None:
    bad = {
        "future": fact(now, -2),
        "control character": fact(now, event=hand_over("bell\a")),
        "file": fact(now, attachments=("ab" * 32,)),
    }[wrong]
    with pytest.raises(InvalidInputError):
        append_all(actor=worker, now=now, facts=[fact(now), bad])
    assert entries() == []


def test_a_key_is_used_once(worker: Membership, now: datetime, note: Note) -> None:
    key: UUID = note().entry.uuid
    for facts in ([fact(now, key=key)], [fact(now, key=(twice := uuid4())), fact(now, key=twice)]):
        with pytest.raises(ConflictError, match="used before"):
            append_all(actor=worker, now=now, facts=facts)
    assert len(entries()) == 1


def test_an_observer_appends_nothing(observer: Membership, now: datetime) -> None:
    with pytest.raises(NotPermittedError):
        append_all(actor=observer, now=now, facts=[fact(now)])
    assert entries() == []


def test_an_unknown_verdict_is_a_mistake_of_the_caller(worker: Membership, now: datetime) -> None:
    with pytest.raises(ValueError, match="unknown verdict"):
        append_all(actor=worker, now=now, facts=[fact(now, clearance=Clearance("perhaps"))])


def test_a_file_that_many_entries_name_is_proved_once(worker: Membership, workshop: Workshop, now: datetime) -> None:
    kept = keep_file(actor=worker, now=now, name="book.csv", data=b"Date\n", media_type="text/csv")
    append_all(actor=worker, now=now, facts=[fact(now, attachments=(kept.sha256,)) for _ in range(3)])
    with patch.object(files, "read", wraps=files.read) as read:
        assert verify_chain(workshop) == []
    assert read.call_count == 1
    files.path_of(kept.sha256).unlink()
    assert [problem.sequence for problem in verify_chain(workshop)] == [1, 2, 3]


def test_a_file_with_a_broken_name_is_not_kept(worker: Membership, now: datetime) -> None:
    with pytest.raises(InvalidInputError, match="file"):
        keep_file(actor=worker, now=now, name="a\nb.csv", data=b"x", media_type="text/csv")
