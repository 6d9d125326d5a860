"""Proof of the books."""

from typing import Any

from django.core.management.base import BaseCommand, CommandError

from compliance.ops.verify import Verdict, count_up, describe_entry, find_loose_ends, verify_workshops

SHOWN = 20
"""How many problems of a workshop are printed."""


class Command(BaseCommand):
    """Prove every workshop's chain, bytes, files, papers and ledger again; name the first broken entry."""

    help = "Prove chain, bytes, files, papers and ledger of every workshop again. Exit status 1 if anything is wrong."

    def handle(self, *args: Any, **options: Any) -> None:
        verdicts = list(verify_workshops())
        for verdict in verdicts:
            self.report(verdict)
        loose = find_loose_ends()
        for sentence in loose:
            self.stdout.write(sentence)
        wrong = len(loose) + sum(len(verdict.problems) for verdict in verdicts)
        entries, files = sum(v.entries for v in verdicts), sum(v.files for v in verdicts)
        counted = count_up(len(verdicts), entries, files)
        if wrong:
            raise CommandError(
                f"{counted}. What is wrong: {wrong}. Stop recording, keep a copy of the data folder as it is, and "
                "restore the last backup that verifies."
            )
        self.stdout.write(f"{counted}: all is as it was recorded.")

    def report(self, verdict: Verdict) -> None:
        """Print what was found in one workshop."""
        name = verdict.workshop.name
        if not verdict.problems:
            self.stdout.write(f"{name}: nothing is wrong.")
            return
        first = verdict.first_broken
        head = (
            "No entry is broken."
            if first is None
            else f"First broken entry: {describe_entry(verdict.workshop, first)}."
        )
        self.stdout.write(f"{name}: wrong in {len(verdict.problems)} points. {head}")
        for problem in verdict.problems[:SHOWN]:
            where = "" if problem.sequence is None else f"entry {problem.sequence}: "
            self.stdout.write(f"  {where}{problem.message}")
        if len(verdict.problems) > SHOWN:
            self.stdout.write(f"  and {len(verdict.problems) - SHOWN} more")
