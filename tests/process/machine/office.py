"""What people do in a workshop, and what they must be told."""

from collections import Counter
from collections.abc import Callable, Collection
from dataclasses import dataclass, fields
from datetime import datetime, timedelta
from typing import Any, TypeVar
from uuid import UUID

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope

from chemicals.books import fold
from chemicals.books.occurred import Occurred
from chemicals.jobs import services as jobs
from chemicals.jobs.models import Job, State
from chemicals.journal.models import Entry
from chemicals.ledger.followed import as_kept, read_followed
from chemicals.ledger.periods import BooksBehindError, close_period, reopen_period
from chemicals.ledger.projection import Names, load_state
from chemicals.ledger.selectors import get_period_for, get_recomputed_to
from chemicals.process.inputs import AcceptanceInput, CancellationInput, CorrectionInput, Input
from chemicals.workshop.errors import ConflictError, DomainError, InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership, Role
from compliance.clearance.selectors import Preview, preview
from compliance.clearance.services import RefusedError, record
from tests.conftest import NOW
from tests.process.machine.acting import WRITES, Act
from tests.process.machine.books import Acknowledged, all_rows
from tests.process.machine.people import Line, open_workshop

T = TypeVar("T")
FOLDING = {kind.KIND for kind in fold.FOLDS}
PAST_A_LEASE = timedelta(minutes=2)


class KilledError(Exception):
    """Nobody answered: the process was killed."""


@dataclass(frozen=True)
class Said:
    """What somebody sets out to record."""

    actor: Membership
    key: UUID
    data: Input
    occurred: Occurred | None = None
    already_happened: bool = False

    def arguments(self, now: datetime) -> dict[str, Any]:
        """Return what the service is called with."""
        return {"now": now} | {field.name: getattr(self, field.name) for field in fields(self)}


class Office:
    """One workshop and its people, with what they have been told."""

    def __init__(self, line: Line, limits: dict[str, int], done: Counter[str]) -> None:
        self.line, self.limits, self.done = line, limits, done
        self.now = NOW
        self.shop, self.owner, self.worker = open_workshop(NOW)
        self.workshop = self.shop.member.workshop
        self.books = Acknowledged(self.workshop)
        self.shop.entries = self.books.rows
        self.said: dict[UUID, Said] = {}
        self.unanswered: dict[UUID, Callable[[], object]] = {}
        """What to do again, by key."""

    @property
    def stands(self) -> bool:
        """Say whether no job is at the books."""
        return get_recomputed_to(self.workshop) is None

    @property
    def rows(self) -> Collection[Entry]:
        """Return the entries that somebody was told of."""
        return self.books.rows.values()

    def call(self, service: Callable[..., T], killed_at: int, **said: Any) -> T:
        """Call a service, in a process that may be killed if so wished; what is refused is refused here too."""
        if killed_at:
            (answer,) = self.line.act(Act(service, said, killed_at, self.limits))
            if answer is None:
                self.done["killed"] += 1
                raise KilledError
            if not answer.refusal:
                value: T = answer.value
                return value
        return service(**said)

    def record(self, said: Said, killed_at: int = 0) -> Entry | None:
        """Record something; None if it was refused, or nobody answered."""
        before = all_rows(self.workshop)
        known = said.key in self.books.hashes
        try:
            appended = self.call(record, killed_at, **said.arguments(self.now))
        except KilledError:
            self.leave_unanswered(said.key, lambda: self.record(said))
            return None
        except DomainError as refusal:
            assert not known
            assert all_rows(self.workshop) == before
            self.expect_refusal(said, refusal)
            self.forget(said.key)
            return None
        entry = appended.entry
        assert appended.is_new != known
        if known:
            assert bytes(entry.hash) == self.books.hashes[said.key]
            assert all_rows(self.workshop) == before
        self.forget(said.key)
        self.books.add(entry)
        self.said[said.key] = said
        self.expect_entry(said, entry)
        return entry

    def leave_unanswered(self, key: UUID, act: Callable[[], object]) -> None:
        """Note what somebody will do again, who does not know whether it is recorded."""
        self.unanswered[key] = act
        self.books.doubtful.add(key)

    def forget(self, key: UUID) -> None:
        """Note that somebody was answered."""
        self.unanswered.pop(key, None)
        self.books.doubtful.discard(key)

    def expect_refusal(self, said: Said, refusal: DomainError) -> None:
        """Fail if something was refused without a reason that its form can show."""
        self.done[type(refusal).__name__] += 1
        if isinstance(refusal, InvalidInputError):
            named = {error.field.partition(".")[0] for error in refusal.errors}
            assert named <= {field.name for field in fields(said.data)} | {"occurred_at"}  # type: ignore[arg-type]
            if any("books are closed" in error.message for error in refusal.errors):
                assert self.books.closed
        elif isinstance(refusal, RefusedError):
            assert not said.already_happened
            assert refusal.reasons
        else:
            assert isinstance(refusal, ConflictError)
            assert isinstance(said.data, AcceptanceInput | CancellationInput | CorrectionInput)

    def expect_entry(self, said: Said, entry: Entry) -> None:
        """Fail if the entry is not what was said, or its period was closed."""
        self.done[said.data.verb] += 1
        assert entry.uuid == said.key
        if said.occurred is not None and not isinstance(said.data, AcceptanceInput):
            assert (entry.occurred_at, entry.precision) == (said.occurred.at, said.occurred.precision)
        closed, until = self.books.closed, self.books.closed_until
        if closed is not None and until is not None and entry.kind in FOLDING and entry.sequence > closed.sequence:
            assert entry.occurred_at >= until

    def record_again(self, said: Said) -> None:
        """Press the button once more: the first entry is the answer."""
        assert self.record(said) is not None
        self.done["again"] += 1

    def record_under_used_key(self, said: Said, key: UUID) -> None:
        """Something else is not recorded under a key that was used."""
        before = all_rows(self.workshop)
        with pytest.raises(ConflictError, match="This key was used"):
            record(actor=said.actor, now=self.now, key=key, data=said.data, already_happened=True)
        assert all_rows(self.workshop) == before

    def look(self, said: Said) -> Preview | None:
        """Ask before; nothing is written, whatever the answer is. None: it cannot be."""
        with CaptureQueriesContext(connection) as asked:
            try:
                told = preview(said.actor, self.now, said.data, said.occurred)
            except InvalidInputError:
                told = None
        assert [query["sql"] for query in asked if query["sql"].startswith(WRITES)] == []
        return told

    def record_as_shown(self, said: Said) -> None:
        """Look first: what is recorded is what was shown, if nothing is dated later: the day that is noon to come."""
        before, told = self.now, self.look(said)
        entry = self.record(said)
        assert self.now == before
        if told is None or (told.answer.reasons and not said.already_happened):
            assert entry is None
        elif entry is not None and self.stands and entry.occurred_at == max(row.occurred_at for row in self.rows):
            self.done["as shown"] += 1
            assert self.followed(entry) == as_kept(told.trial.folded)

    def followed(self, entry: Entry) -> object:
        """Return what the tables keep of an entry."""
        with scope(workshop=self.workshop):
            return read_followed([entry], Names(self.workshop, ()))[entry.pk]

    def record_by_mistake(self, said: Said, cancellation: UUID) -> None:
        """Record something and cancel it: the books are what they were."""
        before, stood = self.tell(), self.stands
        entry = self.record(said)
        if entry is None or entry.kind == "cancellation":
            return
        cancelled = self.record(Said(said.actor, cancellation, CancellationInput(entry=entry.uuid, reason="a mistake")))
        assert cancelled is not None
        if stood and self.stands:
            self.done["mistake"] += 1
            assert self.tell() == before

    def tell(self) -> object:
        """Return everything that the ledger says."""
        with scope(workshop=self.workshop):
            return load_state(self.workshop), self.shop.ledger()

    def close(self, actor: Membership, key: UUID, until: datetime, killed_at: int = 0) -> None:
        """Close a period, which only the owner may, on a day that can be its end, while no job is at the books."""
        try:
            period = self.call(close_period, killed_at, actor=actor, now=self.now, key=key, until=until)
        except KilledError:
            self.leave_unanswered(key, lambda: self.close(actor, key, until))
            return
        except NotPermittedError:
            assert actor.role != Role.OWNER
        except InvalidInputError:
            closed_until = self.books.closed_until
            assert until > self.now or (closed_until is not None and until <= closed_until)
        except BooksBehindError:
            assert not self.stands
        else:
            self.done["closed"] += 1
            self.books.add(period.closing)
        self.forget(key)

    def reopen(self, actor: Membership, key: UUID, killed_at: int = 0) -> None:
        """Open the last period again, which only the owner may."""
        closed = self.books.closed
        assert closed is not None
        last = get_period_for(actor, closed.uuid)
        self.reopen_named({"actor": actor, "key": key, "period": last, "reason": "a drum was forgotten"}, killed_at)

    def reopen_named(self, said: dict[str, Any], killed_at: int = 0) -> None:
        """Open a period again, or press the button once more."""
        try:
            period = self.call(reopen_period, killed_at, now=self.now, **said)
        except KilledError:
            self.leave_unanswered(said["key"], lambda: self.reopen_named(said))
            return
        except NotPermittedError:
            assert said["actor"].role != Role.OWNER
        except InvalidInputError:  # it was not opened, and a later period was closed meanwhile
            assert said["key"] not in self.books.entries
            assert self.books.closed is None or self.books.closed.uuid != said["period"].closing.uuid
        else:
            assert period.reopening is not None
            self.done["reopened"] += 1
            self.books.add(period.reopening)
        self.forget(said["key"])

    def try_again(self, key: UUID) -> None:
        """Do again what nobody was told about."""
        self.unanswered[key]()
        assert key not in self.unanswered
        self.done["tried again"] += 1

    def work(self, killed_at: int = 0) -> bool:
        """Let the worker do a step of this workshop's jobs; say whether there was any."""
        self.now += PAST_A_LEASE
        for job in Job.objects.filter(workshop=self.workshop).exclude(state=State.DONE):
            jobs.retry_failed(now=self.now)
            try:
                done = self.call(jobs.run, killed_at, job_id=job.pk, now=self.now, worker="w1")
            except KilledError:
                return True
            self.done["step"] += done
            return True
        return False

    def finish(self) -> None:
        """Let the worker do all there is."""
        while self.work():
            pass
        assert self.stands
