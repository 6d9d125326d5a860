"""What is too much for one request is left to a job: pages know up to when the books stand, and a kill loses a step."""

import sys
from datetime import timedelta
from pathlib import Path
from typing import Any

import pytest
from django.utils import timezone
from django_scopes import scope

from chemicals.jobs import services as jobs
from chemicals.jobs.due import LIMIT
from chemicals.jobs.models import Job, State
from chemicals.ledger import late, recompute
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import get_recomputed_to, read_memory
from chemicals.ledger.services import refold
from chemicals.ledger.tasks import recompute as task
from tests.jobs.processes import environment, kill, start, wait_until
from tests.process.shop import Shop

MANY = 6


@pytest.fixture
def busy(shop: Shop, monkeypatch: pytest.MonkeyPatch) -> Shop:
    """A shop with runs and readings of six days, in which four later entries are too many, two a stretch."""
    monkeypatch.setattr(late, "LATE_LIMIT", 4)
    monkeypatch.setattr(recompute, "STRETCH", 2)
    for days in range(MANY, 0, -1):
        shop.record("run", days_ago=days + 0.25, route="Plate", charge="10 Ah")
        shop.record("level-reading", days_ago=days, vessel="Copper", volume="20 L")
    return shop


def take_too_late(shop: Shop, days_ago: float = 5.5, label: str = "late") -> None:
    """Record, too late for one request, that a litre of the bath went into the rinse."""
    shop.record("move", days_ago=days_ago, label=label, source="Copper", target="Rinse", volume="1 L", happened=True)


def step(shop: Shop) -> bool:
    """Let a worker do one step; say whether there was any."""
    return jobs.run_next(now=shop.now + timedelta(days=1), worker="w1")


def finish(shop: Shop) -> int:
    """Let a worker do all there is; return the number of steps."""
    steps = 0
    while step(shop):
        steps += 1
    return steps


def rebuilt(shop: Shop) -> dict[str, Any]:
    """Return the ledger as folding everything makes it."""
    refold(shop.member.workshop)
    return shop.ledger()


def test_a_late_entry_with_too_many_later_ones_is_journalled_and_left_to_a_job(busy: Shop) -> None:
    workshop, before = busy.member.workshop, busy.ledger()
    assert get_recomputed_to(workshop) is None
    take_too_late(busy)
    assert busy.entries["late"].sequence == 2 * MANY + 3
    assert busy.ledger() == before
    behind = get_recomputed_to(workshop)
    assert behind is not None
    assert (behind.until, behind.done, behind.failed) == (busy.now - timedelta(days=5.5), 0, False)
    assert Job.objects.get(pk=behind.job).workshop == workshop
    assert finish(busy) == 6
    assert get_recomputed_to(workshop) is None
    assert Job.objects.get(pk=behind.job).state == State.DONE
    made = busy.ledger()
    assert made != before
    assert busy.is_proved()
    assert made == rebuilt(busy)


def test_a_late_entry_at_the_limit_is_folded_at_once(busy: Shop) -> None:
    for later, days_ago in ((3, 2.1), (4, 2.2)):
        busy.record("level-reading", days_ago=days_ago, vessel="Rinse", volume="10 L")
        assert get_recomputed_to(busy.member.workshop) is None, later
    busy.record("level-reading", days_ago=2.22, vessel="Rinse", volume="10 L")
    assert get_recomputed_to(busy.member.workshop) is not None


def test_each_step_says_how_far_the_books_have_come(busy: Shop) -> None:
    take_too_late(busy)
    seen = []
    while (behind := get_recomputed_to(busy.member.workshop)) is not None:
        seen.append((busy.now - behind.until, behind.done, behind.total))
        assert busy.is_proved()  # as far as the books stand
        step(busy)
    assert [(at / timedelta(days=1), done) for at, done, _ in seen] == [
        (5.5, 0), (5, 2), (4, 4), (3, 6), (2, 8), (1, 10),
    ]  # fmt: skip
    assert [total for *_, total in seen] == [0, 11, 11, 11, 11, 11]


def test_cancelling_what_lies_far_back_is_left_to_a_job_too(busy: Shop) -> None:
    before = busy.ledger()
    take_too_late(busy)
    finish(busy)
    busy.record("cancellation", entry="late", reason="the other tank")
    assert get_recomputed_to(busy.member.workshop) is not None
    finish(busy)
    assert busy.ledger() == before
    assert busy.is_proved()


def test_what_is_recorded_meanwhile_is_left_to_the_job(busy: Shop) -> None:
    take_too_late(busy)
    step(busy)
    run = busy.record("run", route="Plate", charge="10 Ah")
    assert busy.went(run, "Cu") == {}
    assert Job.objects.count() == 1
    finish(busy)
    assert busy.went(run, "Cu")["parts"] > 0
    assert busy.is_proved()


def test_a_later_place_waits_for_the_job_and_an_earlier_one_sets_it_back(busy: Shop) -> None:
    take_too_late(busy)
    step(busy)
    behind = get_recomputed_to(busy.member.workshop)
    take_too_late(busy, days_ago=3.5, label="later")
    assert get_recomputed_to(busy.member.workshop) == behind
    take_too_late(busy, days_ago=8, label="earlier")
    set_back = get_recomputed_to(busy.member.workshop)
    assert set_back is not None
    assert set_back.until == busy.now - timedelta(days=8)
    finish(busy)
    assert busy.is_proved()
    assert busy.ledger() == rebuilt(busy)


def prepare(shop: Shop) -> Any:
    """Let a worker read and fold a step; return what it is about to write."""
    effect = task({"workshop": shop.member.workshop.pk, "done": 0}, now=shop.now)
    assert effect is not None
    return effect


@pytest.mark.parametrize("days_ago", [8, 5.25], ids=["before the stretch", "within it"])
def test_a_step_is_repeated_if_something_was_recorded_before_its_end(busy: Shop, days_ago: float) -> None:
    take_too_late(busy)
    effect = prepare(busy)
    take_too_late(busy, days_ago=days_ago, label="meanwhile")
    before = busy.ledger()
    assert effect().payload == {"workshop": busy.member.workshop.pk, "done": 0}
    assert busy.ledger() == before
    finish(busy)
    assert busy.is_proved()


def test_a_step_stands_if_what_was_recorded_comes_after_it(busy: Shop) -> None:
    take_too_late(busy)
    effect = prepare(busy)
    busy.record("level-reading", days_ago=0.5, vessel="Copper", volume="20 L")
    assert effect().done == 2
    finish(busy)
    assert busy.is_proved()


def test_the_last_step_is_repeated_for_what_was_recorded_at_the_end(busy: Shop) -> None:
    take_too_late(busy)
    for _ in range(5):
        step(busy)
    effect = prepare(busy)
    busy.record("level-reading", vessel="Copper", volume="19 L")
    assert effect() is not None
    finish(busy)
    assert busy.is_proved()


def test_two_workers_with_one_step_write_it_once(busy: Shop) -> None:
    """The lease of the first ran out, the second was quicker."""
    take_too_late(busy)
    slow, quick = prepare(busy), prepare(busy)
    assert quick().done == 2
    assert slow().done == 0
    behind = get_recomputed_to(busy.member.workshop)
    assert behind is not None
    assert behind.until == busy.now - timedelta(days=5)


def test_books_that_were_folded_by_other_means_leave_the_job_nothing(busy: Shop) -> None:
    take_too_late(busy)
    effect = prepare(busy)
    refold(busy.member.workshop)
    assert effect() is None
    assert get_recomputed_to(busy.member.workshop) is None
    assert finish(busy) == 1
    assert Job.objects.get().state == State.DONE
    assert busy.is_proved()


def test_vessels_that_the_books_do_not_know_yet_are_carried_from_step_to_step(busy: Shop) -> None:
    """A vessel that is filled for the first time by an entry left to the job."""
    spare = busy.tank("Spare", "10 L")
    busy.record("move", days_ago=5.6, source="Copper", target="Spare", volume="1 L", happened=True)
    busy.record("move", days_ago=2.5, source="Spare", target="Rinse", volume="1 L", happened=True)
    finish(busy)
    assert busy.holds(spare)["volume"] == 0
    assert busy.is_proved()


def test_what_may_have_been_poured_in_is_remembered_at_once(busy: Shop) -> None:
    """Nobody waits for a job to be warned."""
    with scope(workshop=busy.member.workshop):
        rinse, bath = Vessel.objects.get(name="Rinse"), Vessel.objects.get(name="Copper")
    busy.tank("Spare", "10 L")
    busy.record("move", source="Rinse", target="Spare", label="emptied")
    assert read_memory(rinse)[1] == frozenset()
    take_too_late(busy)
    assert read_memory(rinse)[1] == read_memory(bath)[1] != frozenset()
    finish(busy)
    assert read_memory(rinse)[1] == frozenset()
    assert busy.is_proved()


def test_what_a_cancelled_emptying_left_in_is_remembered_at_once(busy: Shop) -> None:
    take_too_late(busy, days_ago=0.9)
    with scope(workshop=busy.member.workshop):
        rinse = Vessel.objects.get(name="Rinse")
    busy.tank("Spare", "10 L")
    busy.record("move", days_ago=0.8, source="Rinse", target="Spare", label="emptied", happened=True)
    for minute in range(5):
        busy.record("level-reading", days_ago=0.1 + minute / 1440, vessel="Copper", volume="19 L")
    assert read_memory(rinse)[1] == frozenset()
    busy.record("cancellation", entry="emptied", reason="it was the other one")
    assert get_recomputed_to(busy.member.workshop) is not None
    assert read_memory(rinse)[1] != frozenset()


def test_a_job_that_gave_up_is_told_and_goes_on_when_it_is_retried(busy: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    take_too_late(busy)
    with monkeypatch.context() as broken:
        broken.setattr(recompute, "fold_stretch", None)
        for day in range(1, LIMIT + 1):
            jobs.run_next(now=busy.now + timedelta(days=day), worker="w1")
    behind = get_recomputed_to(busy.member.workshop)
    assert behind is not None
    assert behind.failed
    jobs.retry_failed(now=busy.now)
    finish(busy)
    assert busy.is_proved()


def test_books_that_wait_for_a_job_that_is_done_are_reported(busy: Shop) -> None:
    take_too_late(busy)
    Job.objects.update(state=State.DONE, finished_at=busy.now)
    assert not busy.is_proved()


PROGRAM = """
import django
django.setup()
from django.core.management import call_command
from chemicals.ledger import recompute
recompute.STRETCH = 1
call_command("work")
"""


@pytest.mark.django_db(transaction=True)
def test_a_killed_worker_loses_a_step_at_most(shop: Shop, monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    monkeypatch.setattr(late, "LATE_LIMIT", 4)
    for number in range(40):
        shop.record("level-reading", days_ago=3 - number / 100, vessel="Copper", volume=f"{20 - number / 10} L")
    take_too_late(shop)
    job = Job.objects.get()
    Job.objects.update(due_at=timezone.now())
    command, variables = [sys.executable, "-c", PROGRAM], environment(tmp_path)

    def has_done(steps: int) -> bool:
        job.refresh_from_db()
        return job.progress_done >= steps or job.state == State.DONE

    for level in (5, 15):
        worker = start(command, variables)
        wait_until(lambda level=level: has_done(level))  # type: ignore[misc]
        kill(worker)
    job.refresh_from_db()
    assert 15 <= job.progress_done < 40
    reached = job.progress_done
    worker = start(command, variables)
    wait_until(lambda: has_done(1000))
    kill(worker)
    job.refresh_from_db()
    assert reached < job.progress_total <= 42
    assert (job.state, job.tries) == (State.DONE, 1)
    assert get_recomputed_to(shop.member.workshop) is None
    assert shop.is_proved()
    assert shop.ledger() == rebuilt(shop)
