"""Re-hash the journal and compare it with its columns: the first broken entry is named."""

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from django.db.models import F
from django_scopes import scope

from chemicals.books import canonical, events
from chemicals.journal import files
from chemicals.journal.models import Attachment, Entry, Head
from chemicals.workshop.models import Workshop


@dataclass(frozen=True)
class Problem:
    """Something that cannot be: the place, and a sentence."""

    workshop: str
    sequence: int
    message: str


def verify_chain(workshop: Workshop) -> Iterator[Problem]:
    """Yield what is wrong with a workshop's chain, bytes, columns and files, first things first."""
    previous, expected = canonical.GENESIS, 1
    with scope(workshop=workshop):
        for entry in Entry.objects.order_by("sequence").select_related("member", "about").iterator(chunk_size=2000):
            for message in _check_entry(workshop, entry, previous, expected):
                yield Problem(workshop.name, entry.sequence, message)
            previous, expected = bytes(entry.hash), entry.sequence + 1
        head = Head.objects.filter(workshop=workshop).first()
        sequence, digest = (0, canonical.GENESIS) if head is None else (head.sequence, bytes(head.hash))
        if (sequence, digest) != (expected - 1, previous):
            yield Problem(workshop.name, expected, "The chain ends elsewhere than its head says: entries were removed.")


def _check_entry(workshop: Workshop, entry: Entry, previous: bytes, expected: int) -> Iterator[str]:
    if entry.sequence != expected:
        yield f"Entry {expected} is missing: it was removed or moved."
    if bytes(entry.previous_hash) != previous:
        yield "The hash of the entry before does not fit: an entry was removed, inserted or moved."
    if canonical.chain_hash(bytes(entry.previous_hash), bytes(entry.body)) != bytes(entry.hash):
        yield "The bytes were changed: their hash does not fit."
        return
    try:
        body = canonical.decode_body(bytes(entry.body))
        event = events.decode(body.kind, body.kind_version, body.payload)
    except (canonical.CanonicalError, ValueError) as error:
        yield f"The bytes cannot be read: {error}"
        return
    for name, column, said in _compare(workshop, entry, body, event):
        if column != said:
            yield f"The column {name} says {column}, the bytes say {said}."
    yield from _check_files(body)


def _compare(
    workshop: Workshop, entry: Entry, body: canonical.Body, event: events.Event
) -> Iterator[tuple[str, Any, Any]]:
    yield "workshop", workshop.uuid, body.workshop
    for name in ("sequence", "kind", "kind_version", "occurred_at", "precision", "recorded_at"):
        yield name, getattr(entry, name), getattr(body, name)
    yield "uuid", entry.uuid, body.entry
    yield "member", entry.member.uuid, body.member
    yield "verdict", entry.verdict, body.clearance.verdict
    yield "about", entry.about.uuid if entry.about else None, event.about()


def _check_files(body: canonical.Body) -> Iterator[str]:
    for sha256 in body.attachments:
        try:
            files.read(sha256)
        except files.DamagedFileError as error:
            yield str(error)


def count_crossings() -> dict[str, int]:
    """Return how many rows of the journal point into another workshop, by relation; all zero in a sound database."""
    from django_scopes import scopes_disabled

    with scopes_disabled():
        return {
            "entry.member": Entry.objects.exclude(member__workshop=F("workshop")).count(),
            "entry.about": Entry.objects.exclude(about=None).exclude(about__workshop=F("workshop")).count(),
            "attachment.added_by": Attachment.objects.exclude(added_by__workshop=F("workshop")).count(),
        }
