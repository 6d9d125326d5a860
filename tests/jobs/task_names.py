"""The tests' tasks by name; importable by settings, before there are apps."""

TASKS = {
    "insert": "tests.jobs.effects.insert",
    "insert-at-once": "tests.jobs.effects.insert_at_once",
    "insert-then-fail": "tests.jobs.effects.insert_then_fail",
    "overtaken": "tests.jobs.effects.be_overtaken",
    "steps": "tests.jobs.effects.insert_in_steps",
}
