"""Many people at once: one sequence without gaps, one chain, one entry per key."""

import os
import subprocess
import sys
import threading
from collections.abc import Callable
from datetime import datetime
from pathlib import Path
from uuid import uuid4

import pytest
from django.db import connection
from django_scopes import scope

from chemicals.journal import verify
from chemicals.journal.models import Entry
from chemicals.journal.services import add_attachment, append
from chemicals.journal.verify import verify_chain
from chemicals.workshop.errors import ConflictError
from chemicals.workshop.models import Membership
from tests.jobs.processes import database_url
from tests.journal.conftest import ALLOWED, Note, hand_over

ROOT = Path(__file__).resolve().parents[2]
pytestmark = pytest.mark.django_db(transaction=True)


def at_once(count: int, work: Callable[[int], None]) -> None:
    """Run the work in threads that start together; each has a connection of its own."""
    barrier = threading.Barrier(count)
    errors: list[BaseException] = []

    def run(number: int) -> None:
        try:
            barrier.wait(10)
            work(number)
        except BaseException as error:  # shown in the test's own thread
            errors.append(error)
        finally:
            connection.close()

    threads = [threading.Thread(target=run, args=(number,)) for number in range(count)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join(30)
    assert errors == []


def test_what_is_appended_during_a_proof_is_not_missing(
    note: Note, worker: Membership, monkeypatch: pytest.MonkeyPatch
) -> None:
    note()
    step = verify.Walk.step

    def while_somebody_records(walk: verify.Walk, entry: Entry) -> list[verify.Problem]:
        if entry.sequence < 3:
            file = add_attachment(actor=worker, now=entry.recorded_at, name="a.pdf", data=b"%%PDF-%d" % entry.sequence)
            note(attachments=(file.sha256,))
        return step(walk, entry)

    monkeypatch.setattr(verify.Walk, "step", while_somebody_records)
    assert verify_chain(worker.workshop) == []
    assert sequences(worker) == [1, 2, 3]


def sequences(member: Membership) -> list[int]:
    with scope(workshop=member.workshop):
        return list(Entry.objects.order_by("sequence").values_list("sequence", flat=True))


def test_threads_append_without_gaps(worker: Membership, now: datetime) -> None:
    """The first record of the workshop too, when there is no head yet."""

    def work(number: int) -> None:
        for step in range(5):
            append(
                actor=worker,
                now=now,
                key=uuid4(),
                event=hand_over(f"{number}.{step}"),
                occurred=None,
                clearance=ALLOWED,
            )

    at_once(6, work)
    assert sequences(worker) == list(range(1, 31))
    assert verify_chain(worker.workshop) == []


def test_one_key_sent_many_times_at_once_makes_one_entry(worker: Membership, now: datetime) -> None:
    key, answers = uuid4(), []

    def work(number: int) -> None:
        answers.append(append(actor=worker, now=now, key=key, event=hand_over(), occurred=None, clearance=ALLOWED))

    at_once(6, work)
    assert sequences(worker) == [1]
    assert sorted(answer.is_new for answer in answers) == [False] * 5 + [True]


def test_one_key_for_two_contents_at_once_makes_one_entry(worker: Membership, now: datetime) -> None:
    key, refused = uuid4(), []

    def work(number: int) -> None:
        try:
            append(actor=worker, now=now, key=key, event=hand_over(str(number)), occurred=None, clearance=ALLOWED)
        except ConflictError:
            refused.append(number)

    at_once(4, work)
    assert sequences(worker) == [1]
    assert len(refused) == 3


PROGRAM = """
import sys, uuid, datetime
import django
django.setup()
from chemicals.books import events
from chemicals.books.clearance import Clearance
from chemicals.journal.services import append
from chemicals.workshop.models import Membership
member = Membership.objects.select_related("workshop", "user").get(pk=sys.argv[1])
now = datetime.datetime.now(datetime.UTC)
sys.stdin.readline()
for number in range(15):
    event = events.HandOver(container=str(number), receiver=sys.argv[2], gross=None)
    append(actor=member, now=now, key=uuid.uuid4(), event=event, occurred=None, clearance=Clearance("allowed"))
"""


def test_processes_append_without_gaps(worker: Membership, tmp_path: Path) -> None:
    variables = os.environ | {
        "DJANGO_SETTINGS_MODULE": "compliance.settings",
        "DATABASE_URL": database_url(),
        "GRAMLEDGER_DATA": str(tmp_path),
    }
    processes = [
        subprocess.Popen(
            [sys.executable, "-c", PROGRAM, str(worker.pk), name], cwd=ROOT, env=variables, stdin=subprocess.PIPE
        )
        for name in ("one", "two", "three")
    ]
    for process in processes:
        assert process.stdin is not None
        process.stdin.write(b"go\n")
        process.stdin.close()
    for process in processes:
        process.wait(60)
    assert [process.returncode for process in processes] == [0, 0, 0]
    assert sequences(worker) == list(range(1, 46))
    assert verify_chain(worker.workshop) == []
