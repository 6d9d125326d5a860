"""`manage.py calculate NAME < in.json > out.json`: one calculation of chemicals.science, without a database."""

import json
import sys
from typing import Any, NoReturn

from django.core.management.base import BaseCommand, CommandParser

from chemicals.science.calculation import CalculationErrors, refuse
from chemicals.science.calculations import CALCULATIONS, calculate


class Command(BaseCommand):
    """Reads a JSON object from standard input; writes the results, or the errors with exit status 2, as JSON."""

    help = "Run one calculation: a JSON object of its fields on standard input, the results as JSON on standard output."
    requires_system_checks: list[str] = []  # the science needs no database and no checked project

    def add_arguments(self, parser: CommandParser) -> None:
        """The calculation's name, or --list."""
        parser.add_argument("name", nargs="?", default="", help="what to calculate, one of: " + ", ".join(CALCULATIONS))
        parser.add_argument("--list", action="store_true", help="name the calculations, one a line, and stop")

    def handle(self, *args: Any, **options: Any) -> None:
        """Exit status 0 with the results, or 2 with every error and its field."""
        if options["list"]:
            for calculation in CALCULATIONS.values():
                self.stdout.write(f"{calculation.name}\t{calculation.help}")
            return
        try:
            data = _read_input() if options["name"] in CALCULATIONS else {}
            self._write(calculate(options["name"], data))
        except CalculationErrors as refused:
            self._write({"errors": refused.errors})
            sys.exit(2)

    def _write(self, content: dict[str, Any]) -> None:
        self.stdout.write(json.dumps(content, ensure_ascii=False, allow_nan=False, indent=2))


def _read_input() -> Any:
    """The JSON value on standard input. NaN passes here and is refused later, by the name of its field."""
    try:
        return json.loads(sys.stdin.buffer.read(), object_pairs_hook=_once)
    except CalculationErrors:
        raise
    except (ValueError, RecursionError) as error:
        _refuse_json(error)


def _once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    """A JSON object in which every name stands once: of two values it would be a guess which one is meant."""
    names = [name for name, _ in pairs]
    twice = [name for name in dict.fromkeys(names) if names.count(name) > 1]
    if twice:
        raise CalculationErrors(
            [{"field": name, "message": "This field is written twice: leave one out."} for name in twice]
        )
    return dict(pairs)


def _refuse_json(error: Exception) -> NoReturn:
    raise refuse("input", f'This is no JSON ({error}): write an object such as {{"formula": "CuSO4.5H2O"}}.') from error
