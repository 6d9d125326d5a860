"""Everything that can be proved again: chains, bytes, files, papers, the ledger, and that no row crosses workshops."""

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass

from django.apps import apps
from django.db import DEFAULT_DB_ALIAS, IntegrityError, connection, transaction
from django.db.models import F, Model, Q
from django.utils.translation import ngettext
from django_scopes import scope

from chemicals.journal import verify as journal
from chemicals.journal.models import Attachment, Entry
from chemicals.journal.triggers import check_triggers
from chemicals.journal.verify import Problem
from chemicals.ledger import verify as ledger
from chemicals.workshop.models import Workshop
from compliance.documents.verify import verify_papers
from compliance.ops.start import OUR_PACKAGES


@dataclass(frozen=True)
class Verdict:
    """What was proved of one workshop, and what is wrong with it."""

    workshop: Workshop
    entries: int
    files: int
    problems: tuple[Problem, ...]

    @property
    def first_broken(self) -> int | None:
        """Return the sequence of the first broken entry; None if no entry is."""
        return min((p.sequence for p in self.problems if p.sequence is not None), default=None)


def verify_workshops() -> Iterator[Verdict]:
    """Yield the verdict on each workshop, by name."""
    for workshop in Workshop.objects.order_by("name", "pk"):
        problems = [problem for name, check in CHECKS.items() for problem in _look(name, check, workshop)]
        with scope(workshop=workshop):
            entries, files = Entry.objects.count(), Attachment.objects.count()
        yield Verdict(workshop, entries, files, tuple(problems))


CHECKS: Mapping[str, Callable[[Workshop], list[Problem]]] = {
    "chain": journal.verify_chain,
    "files": journal.verify_files,
    "papers": verify_papers,
    "ledger": ledger.verify_projection,
}


def _look(name: str, check: Callable[[Workshop], list[Problem]], workshop: Workshop) -> list[Problem]:
    try:
        return check(workshop)
    except (ValueError, TypeError) as error:  # of an entry that the chain has named already
        return [Problem(None, f"The {name} cannot be compared: an entry cannot be read. {error}")]


def find_loose_ends() -> list[str]:
    """Return a sentence for each relation whose rows point nowhere or into another workshop, and for lost triggers."""
    crossing = {name: count for name, count in count_crossings().items() if count}
    found = [f"{name} points into another workshop in {count} rows." for name, count in crossing.items()]
    try:
        with transaction.atomic():  # PostgreSQL would refuse every later look in the caller's transaction
            connection.check_constraints()  # foreign keys: SQLite does not look at rows that another program wrote
    except IntegrityError as error:
        found.append(f"A row points nowhere: {error}")
    return found + [problem.msg for problem in check_triggers(databases=[DEFAULT_DB_ALIAS])]


def our_models() -> list[type[Model]]:
    """Return the tables of this program, those of its libraries left out."""
    return [model for model in apps.get_models() if model.__module__.startswith(OUR_PACKAGES)]


def count_crossings() -> dict[str, int]:
    """Return how many rows point into another workshop than their own, by relation; all zero in a sound database."""
    counts = {}
    for model in our_models():
        home = _home(model)
        for relation, path in _paths(model).items():
            if home is not None and path != home:
                at_home = Q(**{relation: None}) | Q(**{path: F(home)})
                counts[f"{model._meta.label}.{relation}"] = model._base_manager.exclude(at_home).count()
    return counts


def _paths(model: type[Model]) -> dict[str, str]:
    """Return each foreign key of a table that leads to a workshop, with the way there."""
    paths = {}
    for field in model._meta.concrete_fields:
        target = field.related_model
        if isinstance(target, type) and target not in (model, Workshop) and (home := _home(target)):
            paths[field.name] = f"{field.name}__{home}"
        elif target is Workshop:
            paths[field.name] = field.name
        elif target is model:
            paths[field.name] = f"{field.name}__workshop"
    return paths


def _home(model: type[Model]) -> str | None:
    """Return the way from a row to its workshop: its own column, else that of the first row it belongs to."""
    if model is Workshop:
        return None
    names = {field.name for field in model._meta.concrete_fields}
    return "workshop" if "workshop" in names else next(iter(_paths(model).values()), None)


def count_up(workshops: int, entries: int, files: int) -> str:
    """Return "1 workshop, 44 entries, 5 files"."""
    return ", ".join(
        (
            ngettext("%d workshop", "%d workshops", workshops) % workshops,
            ngettext("%d entry", "%d entries", entries) % entries,
            ngettext("%d file", "%d files", files) % files,
        )
    )


def describe_entry(workshop: Workshop, sequence: int) -> str:
    """Return an entry in words, as far as its row can be read."""
    with scope(workshop=workshop):
        rows = Entry.objects.filter(sequence=sequence).values_list("kind", "member__user__name")
        row = rows.first()
    return f"{sequence}" if row is None else f"{sequence} ({row[0]}, recorded by {row[1]})"
