"""Several records as one act: a morning's readings, the day sheets of a week. All of them, or none."""

from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field
from datetime import datetime
from typing import TypeVar
from uuid import UUID, uuid5

from django.db import transaction
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.journal.selectors import list_entries_for
from chemicals.journal.services import Appended, lock_chain
from chemicals.process.inputs import Input
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.clearance.selectors import Preview, preview
from compliance.clearance.services import RefusedError, record

MOST_TOGETHER = 120
"""Records of one act: each late one folds the books again from its day on."""
T = TypeVar("T")


@dataclass(frozen=True, kw_only=True)
class Said:
    """One of several records, as ``clearance.services.record`` takes it; ``occurred`` None is now."""

    data: Input
    occurred: Occurred | None = None
    already_happened: bool = False
    attachments: tuple[str, ...] = ()


@dataclass
class _Complaints:
    """What speaks against the records of an act, collected so that everything is said at once."""

    errors: list[FieldError] = field(default_factory=list)
    reasons: list[str] = field(default_factory=list)

    @contextmanager
    def of(self, number: int) -> Iterator[None]:
        """Note what is wrong with a record under its number."""
        try:
            yield
        except InvalidInputError as error:
            self.errors += [FieldError(f"records.{number}.{each.field}", each.message) for each in error.errors]
        except RefusedError as error:
            self.reasons += error.reasons

    def finish(self) -> None:
        """Raise what was noted: errors first, for nobody can answer what is not understood."""
        if self.errors:
            raise InvalidInputError(self.errors)
        if self.reasons:
            raise RefusedError(list(dict.fromkeys(self.reasons)))


def record_all(*, actor: Membership, now: datetime, key: UUID, said: Sequence[Said]) -> list[Appended]:
    """Record several things that happened, in this order, all of them or none; each is asked as if it came alone.

    Each finds the books as those before it have left them. The same ``key`` with the same records returns the first
    entries; with others it raises ConflictError. Raises InvalidInputError with everything that is wrong, each under
    ``records.NUMBER.``, and RefusedError with all reasons.
    """
    require_writer(actor)
    _require_some(said)
    with transaction.atomic(), scope(workshop=actor.workshop):
        lock_chain(actor)
        keys = [uuid5(key, f"{actor.workshop.uuid} record {number}") for number in range(MOST_TOGETHER)]
        _require_same_number(actor, keys, said)
        return _each(
            said,
            lambda number, each: record(
                actor=actor,
                now=now,
                key=keys[number],
                data=each.data,
                occurred=each.occurred,
                already_happened=each.already_happened,
                attachments=each.attachments,
            ),
        )


def preview_all(member: Membership, now: datetime, said: Sequence[Said]) -> list[Preview]:
    """Return the verdict on each of several records, and what would follow from it on the books as they stand.

    Writes nothing. Raises InvalidInputError as ``record_all`` does.
    """
    _require_some(said)
    return _each(said, lambda _number, each: preview(member, now, each.data, each.occurred))


def _each(said: Sequence[Said], act: Callable[[int, Said], T]) -> list[T]:
    """Return what is done with each record; raise what is wrong with any of them, all at once."""
    done, complaints = [], _Complaints()
    for number, each in enumerate(said):
        with complaints.of(number):
            done.append(act(number, each))
    complaints.finish()
    return done


def _require_some(said: Sequence[Said]) -> None:
    if not said:
        raise InvalidInputError.of("records", "Nothing is written yet. Write at least one figure.")
    if len(said) > MOST_TOGETHER:
        raise InvalidInputError.of("records", f"At most {MOST_TOGETHER} are recorded at once. Send them in parts.")


def _require_same_number(actor: Membership, keys: Sequence[UUID], said: Sequence[Said]) -> None:
    """Refuse a key that stands for more or fewer records; each record then compares what it says itself."""
    there = list_entries_for(actor).filter(uuid__in=keys).count()
    if there not in (0, len(said)):
        raise ConflictError("This key was used for other records. Open a fresh form and record again.")
