"""Reads of the journal."""

from collections.abc import Iterator
from uuid import UUID

from django.db.models import QuerySet
from django_scopes import scope

from chemicals.books import canonical, events, fold
from chemicals.journal.models import Attachment, Entry, Head
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership, Workshop


def list_entries_for(member: Membership) -> QuerySet[Entry]:
    """Return all entries of the member's workshop, newest record first, with their authors. One query."""
    with scope(workshop=member.workshop):
        return Entry.objects.select_related("member__user", "about").order_by("-sequence")


def get_entry_for(member: Membership, uuid: UUID) -> Entry:
    """Return one entry of the member's workshop."""
    try:
        return list_entries_for(member).get(uuid=uuid)
    except Entry.DoesNotExist as error:
        raise NotFoundError("There is no such entry in this workshop.") from error


def get_attachment_for(member: Membership, sha256: str) -> Attachment:
    """Return one file of the member's workshop."""
    with scope(workshop=member.workshop):
        attachment = Attachment.objects.filter(sha256=sha256).first()
    if attachment is None:
        raise NotFoundError("There is no such file in this workshop.")
    return attachment


def get_head(workshop: Workshop) -> tuple[int, str]:
    """Return the sequence and the hash (hex) of the chain's end: what papers print."""
    head = Head.objects.filter(workshop=workshop).first()
    return (0, canonical.GENESIS.hex()) if head is None else (head.sequence, bytes(head.hash).hex())


def read_body(entry: Entry) -> canonical.Body:
    """Return what the entry's bytes say."""
    return canonical.decode_body(bytes(entry.body))


def read_event(entry: Entry) -> events.Event:
    """Return the event that the entry records, in its current version."""
    body = read_body(entry)
    return events.decode(body.kind, body.kind_version, body.payload)


def as_fold_entry(entry: Entry) -> fold.Entry:
    """Return the entry as the fold needs it."""
    return fold.Entry(entry.uuid, entry.occurred_at, entry.sequence, read_event(entry))


def iterate_fold_entries(workshop: Workshop) -> Iterator[fold.Entry]:
    """Yield every entry of a workshop as the fold needs it, in order of recording. One query."""
    with scope(workshop=workshop):
        rows = Entry.objects.order_by("sequence").only("uuid", "occurred_at", "sequence", "body")
        for entry in rows.iterator(chunk_size=2000):
            yield as_fold_entry(entry)


def is_cancelled(entry: Entry) -> bool:
    """Say whether a later entry cancelled this one."""
    with scope(workshop=entry.workshop):
        return Entry.objects.filter(about=entry, kind=events.Cancellation.KIND).exists()
