"""Runs the machine, on the engine of the suite."""

from collections import Counter

import pytest
from hypothesis import settings
from hypothesis.stateful import run_state_machine_as_test

from chemicals.process.inputs import INPUTS
from tests.process.machine.machine import Machine
from tests.process.machine.people import Line

pytestmark = pytest.mark.django_db(transaction=True)


def test_whatever_two_people_and_kill_9_do_the_books_are_what_was_acknowledged(
    line: Line, monkeypatch: pytest.MonkeyPatch
) -> None:
    done: Counter[str] = Counter()
    monkeypatch.setattr(Machine, "line", line, raising=False)
    monkeypatch.setattr(Machine, "done", done, raising=False)
    run_state_machine_as_test(Machine, settings=settings(max_examples=6, stateful_step_count=20))
    assert done["steps"] > 50
    assert done["killed"] > 0
    assert len(done.keys() & INPUTS.keys()) > 5
