"""Re-hash the journal and compare it with its columns and files: the first broken entry is named."""

from collections.abc import Generator, Iterator
from dataclasses import dataclass
from typing import Any

from django_scopes import scope

from chemicals.books import canonical, events
from chemicals.journal import files
from chemicals.journal.models import Attachment, Entry, Head
from chemicals.workshop.models import Workshop


@dataclass(frozen=True)
class Problem:
    """Something that cannot be: a sentence, and the entry that it concerns (None: no single one)."""

    sequence: int | None
    message: str


STRETCHES = 5
"""How often the walk goes on because the chain grew meanwhile."""


def verify_chain(workshop: Workshop) -> list[Problem]:
    """Return what is wrong with a workshop's entries and their head, in order of the chain.

    The head is read after the entries: where it has moved on, so does the walk.
    """
    with scope(workshop=workshop):
        walk = Walk(workshop)
        found = []
        rows = Entry.objects.order_by("sequence").select_related("member", "about")
        try:
            for _stretch in range(STRETCHES):
                begun = walk.sequence
                for entry in rows.filter(sequence__gt=begun).iterator(chunk_size=2000):
                    found += walk.step(entry)
                head = Head.objects.filter(workshop=workshop).first()
                if walk.sequence == begun or head is None or head.sequence <= walk.sequence:
                    break
        except (ValueError, TypeError) as error:  # a column that holds what its type cannot
            return [*found, Problem(walk.sequence + 1, f"The row cannot be read: {error}")]
        return [*found, *walk.end(head)]


class Walk:
    """Goes along the chain, entry by entry."""

    def __init__(self, workshop: Workshop) -> None:
        self.workshop = workshop
        self.listed = frozenset(Attachment.objects.values_list("sha256", flat=True))
        self.checked: dict[str, str | None] = {}
        """What is wrong with each file that an entry named so far: many entries may name the same one."""
        self.sequence = 0
        self.hash = canonical.GENESIS

    def step(self, entry: Entry) -> list[Problem]:
        """Return what is wrong with the next entry."""
        found = []
        if entry.sequence != self.sequence + 1:
            found.append(Problem(self.sequence + 1, "The entry is missing: it was removed or moved."))
        elif bytes(entry.previous_hash) != self.hash:
            found.append(Problem(entry.sequence, "The hash before does not fit: an entry was changed or moved."))
        found += [Problem(entry.sequence, message) for message in self._check(entry)]
        self.sequence, self.hash = entry.sequence, bytes(entry.hash)
        return found

    def _check(self, entry: Entry) -> Iterator[str]:
        body = yield from _check_entry(self.workshop, entry)
        for sha256 in () if body is None else body.attachments:
            if sha256 not in self.checked:
                listed = sha256 in self.listed or Attachment.objects.filter(sha256=sha256).exists()  # added meanwhile
                gone = f"The file {sha256} is not listed any more."
                self.checked[sha256] = _check_file(sha256) if listed else gone
            message = self.checked[sha256]
            if message:
                yield message

    def end(self, head: Head | None) -> list[Problem]:
        """Return what is wrong with the end of the chain."""
        sequence, digest = (0, canonical.GENESIS) if head is None else (head.sequence, bytes(head.hash))
        if sequence > self.sequence:
            return [Problem(self.sequence + 1, f"The entry is missing: the chain ends at {sequence}.")]
        if sequence < self.sequence:
            return [Problem(sequence + 1, f"The entry is surplus: the chain ends at {sequence}.")]
        return [] if digest == self.hash else [Problem(sequence, "The hash at the end of the chain does not fit.")]


def _check_entry(workshop: Workshop, entry: Entry) -> Generator[str, None, canonical.Body | None]:
    """Yield what is wrong with an entry by itself; return what its bytes say, if they can be read."""
    if canonical.chain_hash(bytes(entry.previous_hash), bytes(entry.body)) != bytes(entry.hash):
        yield "The bytes were changed: their hash does not fit."
        return None
    try:
        body = canonical.decode_body(bytes(entry.body))
        event = events.decode(body.kind, body.kind_version, body.payload)
    except ValueError as error:
        yield f"The bytes cannot be read: {error}"
        return None
    for name, column, said in _compare(workshop, entry, body, event):
        if column != said:
            yield f"The column {name} says {column}, the bytes say {said}."
    return body


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


def _check_file(sha256: str) -> str | None:
    try:
        files.read(sha256)
    except files.DamagedFileError as error:
        return str(error)
    return None


def verify_files(workshop: Workshop) -> list[Problem]:
    """Return the files of a workshop that are missing or were changed, whether an entry names them or not."""
    with scope(workshop=workshop):
        rows = list(Attachment.objects.order_by("pk").values_list("sha256", "name"))
    messages = ((name, _check_file(sha256)) for sha256, name in rows)
    return [Problem(None, f"{name}: {message}") for name, message in messages if message]
