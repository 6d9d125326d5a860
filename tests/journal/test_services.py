"""Appending entries: one chain, one sequence, one entry per key."""

from datetime import UTC, datetime, timedelta
from uuid import UUID, uuid4

import pytest
from django_scopes import scope, scopes_disabled

from chemicals.books import canonical, events
from chemicals.books.clearance import Clearance
from chemicals.books.occurred import Occurred
from chemicals.journal.models import Attachment, Entry, Head
from chemicals.journal.selectors import get_attachment_for, get_entry_for, get_head, list_entries_for, read_body
from chemicals.journal.services import add_attachment, append
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership, Workshop
from tests.journal.conftest import ALLOWED, Note, hand_over

PDF = b"%PDF-1.4 a sheet"


def entries() -> list[Entry]:
    with scopes_disabled():
        return list(Entry.objects.order_by("sequence"))


def test_each_entry_chains_to_the_one_before(workshop: Workshop, note: Note) -> None:
    for number in range(3):
        note(hand_over(f"receiver {number}"))
    written = entries()
    assert [entry.sequence for entry in written] == [1, 2, 3]
    previous = bytes(32)
    for entry in written:
        assert bytes(entry.previous_hash) == previous
        previous = canonical.chain_hash(previous, bytes(entry.body))
        assert bytes(entry.hash) == previous
    assert get_head(workshop) == (3, previous.hex())


def test_each_workshop_has_its_own_chain(note: Note, workshop: Workshop, stranger: Membership) -> None:
    note()
    note(actor=stranger)
    note()
    assert get_head(workshop)[0] == 2
    assert get_head(stranger.workshop)[0] == 1


def test_an_empty_journal_ends_at_the_zero_hash(workshop: Workshop) -> None:
    assert get_head(workshop) == (0, "00" * 32)


def test_the_body_says_what_the_columns_say(worker: Membership, note: Note, now: datetime) -> None:
    occurred = Occurred(now - timedelta(days=2, hours=3))
    entry = note(hand_over("Müller"), occurred=occurred).entry
    body = read_body(entry)
    assert (body.workshop, body.sequence, body.entry) == (worker.workshop.uuid, 1, entry.uuid)
    assert (body.kind, body.kind_version) == (entry.kind, entry.kind_version) == ("hand-over", 1)
    assert (body.occurred_at, body.precision) == (entry.occurred_at, "minute") == (occurred.at, "minute")
    assert body.recorded_at == entry.recorded_at == now
    assert body.member == worker.uuid  # never a name
    assert body.clearance == ALLOWED
    assert body.payload["observed"]["receiver"] == "Müller"
    assert b"Wim" not in bytes(entry.body)


def test_the_same_key_and_content_returns_the_first_entry(note: Note) -> None:
    key = uuid4()
    first, second = note(key=key), note(key=key)
    assert (first.is_new, second.is_new) == (True, False)
    assert first.entry == second.entry
    assert len(entries()) == 1


def test_the_same_key_returns_the_first_entry_whatever_the_time_of_the_second_try(
    worker: Membership, note: Note, now: datetime
) -> None:
    key = uuid4()
    first = note(key=key)
    again = append(
        actor=worker, now=now + timedelta(hours=1), key=key, event=hand_over(), occurred=None, clearance=ALLOWED
    )
    assert again.entry == first.entry


@pytest.mark.parametrize(
    ("event", "occurred"),
    [
        (hand_over("somebody else"), None),
        (events.Cancellation(uuid4(), "no"), None),
        (hand_over(), Occurred(datetime(2026, 3, 1, 9, 0, tzinfo=UTC))),
    ],
)
def test_the_same_key_with_another_content_is_refused(
    note: Note, event: events.Event, occurred: Occurred | None
) -> None:
    key = uuid4()
    note(key=key)
    with pytest.raises(ConflictError, match="Open a fresh form"):
        note(event, key=key, occurred=occurred)
    assert len(entries()) == 1


def test_the_same_key_with_another_file_is_refused(worker: Membership, note: Note, now: datetime) -> None:
    key = uuid4()
    note(key=key)
    file = add_attachment(actor=worker, now=now, name="a.pdf", data=PDF)
    with pytest.raises(ConflictError):
        note(key=key, attachments=(file.sha256,))


def test_a_key_of_another_workshop_is_refused_and_tells_nothing(note: Note, stranger: Membership) -> None:
    key = uuid4()
    note(key=key, actor=stranger)
    with pytest.raises(ConflictError, match="used before"):
        note(key=key)
    assert len(entries()) == 1


def test_observers_and_people_who_have_left_write_nothing(
    note: Note, observer: Membership, worker: Membership, now: datetime
) -> None:
    with pytest.raises(NotPermittedError):
        note(actor=observer)
    with pytest.raises(NotPermittedError):
        add_attachment(actor=observer, now=now, name="a.pdf", data=PDF)
    worker.active = False
    with pytest.raises(NotPermittedError):
        note()
    assert entries() == []


def test_the_future_is_refused_but_a_clock_that_runs_ahead_a_little_is_not(note: Note, now: datetime) -> None:
    note(occurred=Occurred(now + timedelta(minutes=4)))
    with pytest.raises(InvalidInputError, match="future") as caught:
        note(occurred=Occurred(now + timedelta(minutes=6)))
    assert caught.value.errors[0].field == "occurred_at"


def test_a_day_is_not_in_the_future_before_its_noon_but_tomorrow_is(
    note: Note, worker: Membership, now: datetime
) -> None:
    morning = datetime(2026, 3, 2, 6, 0, tzinfo=UTC)
    today = Occurred.on_day(now.date(), worker.workshop.zone)
    assert today.at > morning
    append(actor=worker, now=morning, key=uuid4(), event=hand_over(), occurred=today, clearance=ALLOWED)
    with pytest.raises(InvalidInputError, match="future"):
        note(occurred=Occurred.on_day(now.date() + timedelta(days=1), worker.workshop.zone))


def test_the_day_is_that_of_the_workshop(stranger: Membership) -> None:
    """At 03:00 UTC it is still the evening before in New York."""
    night = datetime(2026, 3, 2, 3, 0, tzinfo=UTC)
    tomorrow_there = Occurred.on_day(night.date(), stranger.workshop.zone)
    with pytest.raises(InvalidInputError, match="future"):
        append(actor=stranger, now=night, key=uuid4(), event=hand_over(), occurred=tomorrow_there, clearance=ALLOWED)


def test_attachments_must_be_there_first(note: Note, stranger: Membership, now: datetime) -> None:
    theirs = add_attachment(actor=stranger, now=now, name="a.pdf", data=PDF)
    for sha256 in ("ab" * 32, theirs.sha256):
        with pytest.raises(InvalidInputError, match="Upload it first") as caught:
            note(attachments=(sha256,))
        assert caught.value.errors[0].field == "attachments"
    assert entries() == []


def test_attachments_stand_in_the_body_once_and_sorted(worker: Membership, note: Note, now: datetime) -> None:
    files = [add_attachment(actor=worker, now=now, name="a.pdf", data=PDF + bytes([n])).sha256 for n in range(3)]
    entry = note(attachments=(*files, files[0])).entry
    assert read_body(entry).attachments == tuple(sorted(files))


def test_control_characters_are_refused_under_the_name_of_each_field(note: Note) -> None:
    measured = events.Measured("5\x1fkg", "kg", 5 * 10**9)
    event = events.HandOver(container="ok", receiver="The\x07yard", gross=measured)
    with pytest.raises(InvalidInputError) as caught:
        note(event)
    assert [(error.field, error.message) for error in caught.value.errors] == [
        ("gross.typed", "The control character U+001F cannot be recorded. Remove it."),
        ("receiver", "The control character U+0007 cannot be recorded. Remove it."),
    ]
    assert entries() == []


def test_control_characters_in_a_reason_are_refused(worker: Membership, now: datetime) -> None:
    clearance = Clearance("incident", ("Tank \x00 and tank B must never meet.",))
    with pytest.raises(InvalidInputError, match="U\\+0000"):
        append(actor=worker, now=now, key=uuid4(), event=hand_over(), occurred=None, clearance=clearance)


def test_text_is_kept_in_one_spelling(note: Note) -> None:
    """NFC: typed on two keyboards, one meaning, one hash."""
    key = uuid4()
    first = note(hand_over("Cafe\u0301"), key=key)
    assert note(hand_over("Caf\u00e9"), key=key).entry == first.entry


def test_an_unknown_verdict_is_an_error_of_the_program(worker: Membership, now: datetime) -> None:
    with pytest.raises(ValueError, match="unknown verdict"):
        append(actor=worker, now=now, key=uuid4(), event=hand_over(), occurred=None, clearance=Clearance("maybe"))


def test_a_failed_record_leaves_no_gap(note: Note, now: datetime) -> None:
    note()
    with pytest.raises(InvalidInputError):
        note(hand_over("\x01"))
    note()
    assert [entry.sequence for entry in entries()] == [1, 2]


def test_only_the_kinds_of_file_that_are_meant_are_kept(worker: Membership, now: datetime) -> None:
    kept = [
        add_attachment(actor=worker, now=now, name="x", data=data).media_type
        for data in (PDF, b"\x89PNG\r\n\x1a\n...", b"\xff\xd8\xff...")
    ]
    assert kept == ["application/pdf", "image/png", "image/jpeg"]
    with pytest.raises(InvalidInputError, match="PDF, PNG and JPEG") as caught:
        add_attachment(actor=worker, now=now, name="sheet.pdf", data=b"<html>")
    assert caught.value.errors[0].field == "file"


def test_a_file_name_with_control_characters_is_refused(worker: Membership, now: datetime) -> None:
    with pytest.raises(InvalidInputError, match="U\\+000D") as caught:
        add_attachment(actor=worker, now=now, name="a\r\nSet-Cookie: x.pdf", data=PDF)
    assert caught.value.errors[0].field == "file"


def test_a_line_break_in_a_file_name_is_refused_too(worker: Membership, now: datetime) -> None:
    with pytest.raises(InvalidInputError, match="line break"):
        add_attachment(actor=worker, now=now, name="a\nb.pdf", data=PDF)


def test_the_same_bytes_are_kept_once_in_each_workshop(worker: Membership, stranger: Membership, now: datetime) -> None:
    first = add_attachment(actor=worker, now=now, name="first.pdf", data=PDF)
    assert add_attachment(actor=worker, now=now, name="second.pdf", data=PDF) == first
    theirs = add_attachment(actor=stranger, now=now, name="theirs.pdf", data=PDF)
    assert theirs.sha256 == first.sha256
    with scopes_disabled():
        assert Attachment.objects.count() == 2
    assert get_attachment_for(worker, first.sha256).name == "first.pdf"


def test_a_stranger_finds_neither_entries_nor_files(
    note: Note, worker: Membership, stranger: Membership, now: datetime
) -> None:
    entry = note().entry
    file = add_attachment(actor=worker, now=now, name="first.pdf", data=PDF)
    assert get_entry_for(worker, entry.uuid) == entry
    with scope(workshop=stranger.workshop):
        assert list(list_entries_for(stranger)) == []
    with pytest.raises(NotFoundError):
        get_entry_for(stranger, entry.uuid)
    with pytest.raises(NotFoundError):
        get_attachment_for(stranger, file.sha256)


def test_the_head_reads_as_people_compare_it(workshop: Workshop, note: Note) -> None:
    note(key=UUID(int=1))
    assert str(Head.objects.get()) == "{} {}".format(*get_head(workshop))
