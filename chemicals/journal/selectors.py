"""Reads of the journal."""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING, TypedDict
from uuid import UUID

from django.db.backends.base.base import BaseDatabaseWrapper
from django.db.models import BinaryField, Exists, Func, IntegerField, OuterRef, Q, QuerySet, Value
from django.db.models.sql.compiler import SQLCompiler
from django_scopes import scope, scopes_disabled

from chemicals.books import canonical, events, fold
from chemicals.books.clearance import INCIDENT
from chemicals.journal.models import Attachment, Entry, Head
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership, Workshop

if TYPE_CHECKING:
    from django_stubs_ext import WithAnnotations


def list_entries_for(member: Membership) -> QuerySet[Entry]:
    """Return all entries of the member's workshop, newest record first, with their authors. One query."""
    with scope(workshop=member.workshop):
        return Entry.objects.select_related("member__user", "about").order_by("-sequence")


class Position(Func):
    """Where bytes stand in bytes, counted from 1; 0 if they do not stand there."""

    function = "INSTR"
    output_field = IntegerField()

    def as_postgresql(self, compiler: SQLCompiler, connection: BaseDatabaseWrapper) -> tuple[str, list[object]]:
        turned = self.copy()
        turned.set_source_expressions(self.get_source_expressions()[::-1])
        sql, params = turned.as_sql(compiler, connection, template="POSITION(%(expressions)s)", arg_joiner=" IN ")
        return sql, list(params)


def list_entries_naming(member: Membership, uuid: UUID) -> QuerySet[Entry]:
    """Return the entries that name a vessel, by its uuid: cancelled ones and analyses too, newest first. One query."""
    wanted = Value(str(uuid).encode(), output_field=BinaryField())
    return list_entries_for(member).alias(position=Position("body", wanted)).filter(position__gt=0)


def list_incidents_for(member: Membership) -> QuerySet[Entry]:
    """Return the entries that were recorded as incidents and not cancelled, newest first. One query."""
    return list_entries_for(member).filter(~_cancelled(), verdict=INCIDENT)


def list_unanswered_for(member: Membership, kind: str, *answers: str) -> QuerySet[Entry]:
    """Return the entries of a kind, not cancelled, of which no standing entry of the ``answers`` speaks. One query."""
    with scope(workshop=member.workshop):
        answered = Entry.objects.filter(~_cancelled(), about=OuterRef("pk"), kind__in=answers)
        return list_entries_for(member).filter(~_cancelled(), ~Exists(answered), kind=kind)


def _cancelled() -> Exists:
    with scopes_disabled():
        return Exists(Entry.objects.filter(about=OuterRef("pk"), kind=events.Cancellation.KIND))


class Standing(TypedDict):
    """What ``mark_standing`` gives an entry."""

    stands: bool


def mark_standing(entries: QuerySet[Entry]) -> "QuerySet[WithAnnotations[Entry, Standing]]":
    """Give each entry ``stands``: it is not cancelled, and is no acceptance of a cancelled analysis."""
    with scopes_disabled():
        subject = Exists(Entry.objects.filter(about=OuterRef("about"), kind=events.Cancellation.KIND))
    return entries.annotate(stands=~_cancelled() & ~(Q(kind=events.Acceptance.KIND) & subject))


def list_related_to(member: Membership, entry: Entry) -> QuerySet[Entry]:
    """Return the entry that this one speaks of, and the later ones that speak of it, as recorded. One query."""
    return list_entries_for(member).filter(Q(pk=entry.about_id) | Q(about=entry)).order_by("sequence")


@dataclass(frozen=True)
class Neighbours:
    """The entries beside one: in the chain, and in the order in which they happened."""

    recorded_before: Entry | None
    recorded_after: Entry | None
    happened_before: Entry | None
    happened_after: Entry | None


def find_neighbours(entry: Entry) -> Neighbours:
    """Return the entries beside this one. Four queries."""
    before = Q(occurred_at__lt=entry.occurred_at) | Q(occurred_at=entry.occurred_at, sequence__lt=entry.sequence)
    after = Q(occurred_at__gt=entry.occurred_at) | Q(occurred_at=entry.occurred_at, sequence__gt=entry.sequence)
    with scope(workshop=entry.workshop):
        entries = Entry.objects.defer("body")
        return Neighbours(
            recorded_before=entries.filter(sequence=entry.sequence - 1).first(),
            recorded_after=entries.filter(sequence=entry.sequence + 1).first(),
            # the first condition repeats a part of the second in a form that an index answers
            happened_before=entries.filter(before, occurred_at__lte=entry.occurred_at)
            .order_by("-occurred_at", "-sequence")
            .first(),
            happened_after=entries.filter(after, occurred_at__gte=entry.occurred_at)
            .order_by("occurred_at", "sequence")
            .first(),
        )


def list_attachments_of(entry: Entry, hashes: Iterable[str]) -> list[Attachment]:
    """Return the files that an entry names by SHA-256, by name. One query."""
    with scope(workshop=entry.workshop):
        return list(Attachment.objects.filter(sha256__in=list(hashes)).order_by("name", "sha256"))


def find_cancelled(entries: Iterable[Entry]) -> set[int]:
    """Return the primary keys of those entries of one workshop that a later entry cancelled. One query."""
    rows = list(entries)
    if not rows:
        return set()
    with scope(workshop=rows[0].workshop):
        mine = Entry.objects.filter(about__in=rows, kind=events.Cancellation.KIND)
        return {pk for pk in mine.values_list("about_id", flat=True) if pk is not None}


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
    """Return the entry as the fold needs it: what happened, and when, is read from its bytes."""
    body = read_body(entry)
    event = events.decode(body.kind, body.kind_version, body.payload)
    return fold.Entry(entry.uuid, body.occurred_at, entry.sequence, event)


def iterate_fold_entries(workshop: Workshop) -> Iterator[fold.Entry]:
    """Yield every entry of a workshop as the fold needs it, in order of recording. One query."""
    with scope(workshop=workshop):
        for entry in Entry.objects.order_by("sequence").only("uuid", "sequence", "body").iterator(chunk_size=2000):
            yield as_fold_entry(entry)


def is_cancelled(entry: Entry) -> bool:
    """Say whether a later entry cancelled this one."""
    with scope(workshop=entry.workshop):
        return Entry.objects.filter(about=entry, kind=events.Cancellation.KIND).exists()
