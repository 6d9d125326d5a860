"""Writes to the journal: append an entry, add an attachment. Nothing here changes or removes."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from uuid import UUID

from django.db import transaction
from django_scopes import scope, scopes_disabled

from chemicals.books import canonical, events
from chemicals.books.clearance import VERDICTS, Clearance
from chemicals.books.occurred import DAY, Occurred
from chemicals.journal import files
from chemicals.journal.models import Attachment, Entry, Head
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Workshop
from chemicals.workshop.permissions import require_writer
from chemicals.workshop.texts import find_bad_lines, find_unwritable, tidy

CLOCK_TOLERANCE = timedelta(minutes=5)
"""How far ahead a device's clock may run before its time is refused as lying in the future."""

FUTURE = "This lies in the future. Write when it happened."

BATCH = 500
"""How many entries are written, or looked for, at once."""

MAGIC = {b"%PDF-": "application/pdf", b"\x89PNG\r\n\x1a\n": "image/png", b"\xff\xd8\xff": "image/jpeg"}
"""First bytes of the kinds of file that may be attached."""


@dataclass(frozen=True)
class Fact:
    """What is appended together with others: its key, what happened and when, whether it might, its files."""

    key: UUID
    event: events.Event
    occurred: Occurred
    clearance: Clearance
    attachments: tuple[str, ...] = ()


@dataclass(frozen=True)
class Appended:
    """An entry, and whether this call wrote it (False: it was there already under the same key)."""

    entry: Entry
    is_new: bool


def append(
    *,
    actor: Membership,
    now: datetime,
    key: UUID,
    event: events.Event,
    occurred: Occurred | None,
    clearance: Clearance,
    attachments: Sequence[str] = (),
) -> Appended:
    """Append an entry at the end of the workshop's chain; call it inside the transaction of the whole record.

    ``key`` comes from the form or the Idempotency-Key: the same key and content returns the first entry, another
    content raises ConflictError. ``occurred`` None means now.
    """
    require_writer(actor)
    attachments = sorted(set(attachments))
    fact = Fact(key, event, occurred or Occurred(now), clearance, tuple(attachments))
    _require_sound(actor, now, fact)
    _require_writable(fact)
    with transaction.atomic(), scope(workshop=actor.workshop):
        head = lock_chain(actor)
        first = Entry.objects.filter(uuid=key).select_related("member__user").first()
        if first is not None:
            return Appended(_same(first, event, occurred, attachments), is_new=False)
        _require_free_keys([key])
        _require_files(actor, attachments)
        entry = _chain(actor, now, head, fact)
        about = event.about()
        entry.about = None if about is None else Entry.objects.get(uuid=about)
        entry.save(force_insert=True)
        head.save(update_fields=["sequence", "hash"])
        return Appended(entry, is_new=True)


def append_all(*, actor: Membership, now: datetime, facts: Sequence[Fact]) -> list[Entry]:
    """Append entries one after the other at the end of the workshop's chain, as ``append`` does, but in bulk.

    Call it inside the transaction of the whole record: all are there, or none. What an entry speaks of may be appended
    with it. Raises ConflictError if one of the keys was used before.
    """
    require_writer(actor)
    for fact in facts:
        _require_sound(actor, now, fact)
    with transaction.atomic(), scope(workshop=actor.workshop):
        head = lock_chain(actor)
        _require_free_keys([fact.key for fact in facts])
        _require_files(actor, sorted({sha256 for fact in facts for sha256 in fact.attachments}))
        entries = [_chain(actor, now, head, fact) for fact in facts]
        speaking = [(entry, about) for entry, fact in zip(entries, facts, strict=True) if (about := fact.event.about())]
        spoken_of = {entry.uuid for entry, _ in speaking}
        Entry.objects.bulk_create((entry for entry in entries if entry.uuid not in spoken_of), batch_size=BATCH)
        _fill_in_subjects(speaking)
        Entry.objects.bulk_create((entry for entry, _ in speaking), batch_size=BATCH)
        head.save(update_fields=["sequence", "hash"])
        return entries


def _fill_in_subjects(speaking: Sequence[tuple[Entry, UUID]]) -> None:
    found = {
        uuid: pk
        for batch in _batches([about for _, about in speaking])
        for uuid, pk in Entry.objects.filter(uuid__in=batch).values_list("uuid", "pk")
    }
    for entry, about in speaking:
        entry.about_id = found[about]


def _batches(keys: Sequence[UUID]) -> Iterator[Sequence[UUID]]:
    return (keys[first : first + BATCH] for first in range(0, len(keys), BATCH))


def _require_sound(actor: Membership, now: datetime, fact: Fact) -> None:
    """Refuse what the journal cannot keep, whatever else stands in it."""
    if fact.clearance.verdict not in VERDICTS:
        raise ValueError(f"unknown verdict {fact.clearance.verdict}")
    if lies_ahead(actor.workshop, now, fact.occurred):
        raise InvalidInputError.of("occurred_at", FUTURE)


def lies_ahead(workshop: Workshop, now: datetime, when: Occurred) -> bool:
    """Say whether a time has not come yet.

    A day has come from its first hour on, in the workshop's zone, though it stands for its noon.
    """
    zone = workshop.zone
    if when.precision == DAY:
        return when.at.astimezone(zone).date() > now.astimezone(zone).date()
    return when.at > now + CLOCK_TOLERANCE


def _require_writable(fact: Fact) -> None:
    """Refuse texts that have no canonical bytes, all at once and by field."""
    errors = [*find_unwritable(canonical.to_plain(fact.event)), *find_unwritable(fact.clearance.reasons, "reasons")]
    if errors:
        raise InvalidInputError(sorted(errors, key=lambda error: error.field))


def _encode(body: canonical.Body, fact: Fact) -> bytes:
    try:
        return canonical.encode_body(body)
    except canonical.CanonicalError:
        _require_writable(fact)
        raise


def lock_chain(actor: Membership) -> Head:
    """Lock the end of the workshop's chain until the transaction ends: records of a workshop wait for each other."""
    return lock_head(actor.workshop)


def lock_head(workshop: Workshop) -> Head:
    """Lock the end of a workshop's chain for who is no member: a job."""
    heads = Head.objects.select_for_update().filter(workshop=workshop)
    head = heads.first()
    if head is None:  # the workshop's first record; two at once meet at the primary key
        Head.objects.get_or_create(workshop=workshop, defaults={"hash": canonical.GENESIS})
        head = heads.get()
    return head


def _chain(actor: Membership, now: datetime, head: Head, fact: Fact) -> Entry:
    """Return the next entry of the chain, not saved yet, and move the head on to it."""
    body = canonical.Body(
        format=canonical.FORMAT,
        workshop=actor.workshop.uuid,
        sequence=head.sequence + 1,
        entry=fact.key,
        kind=fact.event.KIND,
        kind_version=fact.event.VERSION,
        occurred_at=fact.occurred.at.astimezone(UTC),
        precision=fact.occurred.precision,
        recorded_at=now.astimezone(UTC),
        member=actor.uuid,
        clearance=fact.clearance,
        payload=events.encode(fact.event),
        attachments=fact.attachments,
    )
    data, previous = _encode(body, fact), bytes(head.hash)
    entry = Entry(
        workshop=actor.workshop,
        sequence=body.sequence,
        uuid=body.entry,
        kind=body.kind,
        kind_version=body.kind_version,
        occurred_at=body.occurred_at,
        precision=body.precision,
        recorded_at=body.recorded_at,
        member=actor,
        verdict=body.clearance.verdict,
        body=data,
        previous_hash=previous,
        hash=canonical.chain_hash(previous, data),
    )
    head.sequence, head.hash = entry.sequence, entry.hash
    return entry


def _same(first: Entry, event: events.Event, occurred: Occurred | None, attachments: Sequence[str]) -> Entry:
    """Return the first entry if the new one says the same was observed. Figures used may have changed meanwhile."""
    body = canonical.decode_body(bytes(first.body))
    fresh = canonical.load(canonical.dump(events.encode(event)))
    same = (
        (body.kind, body.kind_version) == (event.KIND, event.VERSION)
        and body.payload["observed"] == fresh["observed"]
        and (occurred is None or (body.occurred_at, body.precision) == (occurred.at, occurred.precision))
        and body.attachments == tuple(attachments)
    )
    if not same:
        raise ConflictError("This key was used for another record. Open a fresh form and record again.")
    return first


def _require_free_keys(keys: Sequence[UUID]) -> None:
    with scopes_disabled():
        used = any(Entry.objects.filter(uuid__in=batch).exists() for batch in _batches(keys))
        if used or len(set(keys)) < len(keys):
            raise ConflictError("This key was used before. Open a fresh form and record again.")


def _require_files(actor: Membership, attachments: Sequence[str]) -> None:
    known = set(Attachment.objects.filter(sha256__in=attachments).values_list("sha256", flat=True))
    missing = sorted(set(attachments) - known)
    if missing:
        raise InvalidInputError.of(
            "attachments", f"No such file in this workshop: {', '.join(missing)}. Upload it first."
        )


def add_attachment(*, actor: Membership, now: datetime, name: str, data: bytes) -> Attachment:
    """Keep a PDF, PNG or JPEG file (told by its content); the same bytes are kept once."""
    require_writer(actor)
    media_type = next((kind for magic, kind in MAGIC.items() if data.startswith(magic)), None)
    errors = [FieldError("file", error.message) for error in find_bad_lines(name=name)]
    if media_type is None:
        errors.append(FieldError("file", "Only PDF, PNG and JPEG files are kept. Choose one of these."))
    if errors or media_type is None:
        raise InvalidInputError(errors)
    return keep_file(actor=actor, now=now, name=name, data=data, media_type=media_type)


def keep_file(*, actor: Membership, now: datetime, name: str, data: bytes, media_type: str) -> Attachment:
    """Keep a file of which the caller knows what it is; the same bytes are kept once."""
    require_writer(actor)
    errors = find_bad_lines(name=name)
    if errors:
        raise InvalidInputError([FieldError("file", error.message) for error in errors])
    sha256 = files.keep(data)
    with scope(workshop=actor.workshop):
        attachment, _ = Attachment.objects.get_or_create(
            workshop=actor.workshop,
            sha256=sha256,
            defaults={
                "name": tidy(name)[:200] or "file",
                "media_type": media_type,
                "size": len(data),
                "added_at": now,
                "added_by": actor,
            },
        )
    return attachment
