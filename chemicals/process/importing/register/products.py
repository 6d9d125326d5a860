"""From what rows say of a product to its revision: what is new, what differs from the register, what cannot be."""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, field, replace
from typing import Any

from chemicals.process.importing.columns import ColumnMap
from chemicals.process.importing.reading import NEEDED
from chemicals.process.importing.register.columns import (
    CAS,
    COMPOSITION,
    EC,
    FORMULA,
    LIMITS,
    OF_PRODUCT,
    PART,
    PRODUCT,
)
from chemicals.process.importing.register.composition import Composer, TargetError
from chemicals.process.importing.register.plan import Planned
from chemicals.process.importing.register.reading import Said
from chemicals.process.importing.register.substances import Substances
from chemicals.process.importing.values import CellError
from chemicals.register.checks import Checked, check_revision
from chemicals.register.inputs import LineInput, RevisionInput, say_again
from chemicals.register.models import CompositionLine, Product, ProductRevision
from chemicals.science.quantity import show
from chemicals.workshop.models import Membership
from chemicals.workshop.rows import check_row

OF_SUBSTANCE = (COMPOSITION, CAS, EC, FORMULA)
AMOUNTS = {"density": "density", "ph_floor": "ph"}
DIFFERS = 'In the register it says "%s". Choose that rows revise what is here, or leave this empty.'

Problem = tuple[int, str, str]
"""What is wrong: row, target, message."""

Refuse = Callable[[int, str, str], None]
"""Notes a problem."""


@dataclass
class Group:
    """The rows of one product, merged: what they say, and which row said it first."""

    first: Said
    said: dict[str, Any] = field(default_factory=dict)
    rows: dict[str, Said] = field(default_factory=dict)

    def merge(self, said: Said, refuse: Refuse) -> None:
        """Take in what another row says of the product; it must not say something else."""
        for target, value in said.product.items():
            if target not in self.said:
                self.said[target], self.rows[target] = value, said
            elif self.said[target] != value:
                before = self.rows[target]
                shown = before.shown.get(target, "something else")
                message = f'Row {before.row} says "{shown}" of the same product. Make them agree, or leave one empty.'
                refuse(said.row, target, message)

    def row_of(self, target: str) -> int:
        """Return the row that said this first."""
        return self.rows.get(target, self.first).row


class Planner:
    """Plans products one by one; what is wrong is noted through ``refuse``, what is only odd through ``remark``."""

    def __init__(
        self, member: Membership, chosen: ColumnMap, substances: Substances, refuse: Refuse, remark: Refuse
    ) -> None:
        self.member, self.chosen, self.refuse, self.remark = member, chosen, refuse, remark
        self.composer = Composer(substances)
        self.substances = substances
        self._told: set[str] = set()

    def plan(self, group: Group, current: ProductRevision | None) -> Planned | None:
        """Return the product as it would stand after the import. None if something is wrong with it."""
        problems: list[Problem] = []
        lines = self._compose(group, current, problems)
        checked, errors = check_revision(_say(group, current, lines))
        wrong = [(group.row_of(target), target, message) for target, message in _by_target(group, errors)]
        if current is None:
            planned = self._begin(group, checked)
            problems += self._check_new(group, planned)
            wrong = [each for each in wrong if each[1] != "form" or "form" in group.said]
            problems += wrong
        else:
            differing = list(_find_differing(group, current, checked, said_lines=lines is not None))
            planned = _follow(group, current, checked if differing else None)
            problems += wrong if differing else ()
            if not self.chosen.revise:
                problems += [(group.row_of(target), target, DIFFERS % shown) for target, shown in differing]
        for row, target, message in problems:
            self.refuse(row, target, message)
        if problems:
            return None
        if planned.checked is not None:
            self._remark_on(group, planned)
        return planned

    def _compose(
        self, group: Group, current: ProductRevision | None, problems: list[Problem]
    ) -> tuple[LineInput, ...] | None:
        """Return the lines that rows say, None where they say nothing new of them or something is wrong."""
        try:
            return self.composer.compose(group.first.name, group.said, current)
        except CellError as error:
            target = error.target if isinstance(error, TargetError) else COMPOSITION
            problems.append((group.row_of(target), target, str(error)))
            return None

    def _begin(self, group: Group, checked: Checked) -> Planned:
        """Return a new product with its first revision."""
        first, revision = group.first, checked.revision
        revision.product = Product(workshop=self.member.workshop, name=first.name, supplier=first.supplier)
        revision.number = 1
        return Planned(first.row, "new", revision, checked.lines, checked)

    def _check_new(self, group: Group, planned: Planned) -> Iterator[Problem]:
        for error in check_row(planned.revision.product, leave_out=["workshop"]):
            yield group.first.row, PRODUCT if error.field == "name" else error.field, error.message
        if "form" not in group.said and "form" in self.chosen.used.values():
            yield group.first.row, "form", NEEDED
        elif "form" not in group.said:
            yield 0, "form", "No column says it, and new products need it. Add one with solid, liquid or gas."

    def _remark_on(self, group: Group, planned: Planned) -> None:
        """Note what a person should look at: hazards that contradict each other, substances that are new."""
        for target, message in self.composer.remarks:
            self.remark(group.row_of(target), target, message)
        for contradiction in planned.revision.contradictions:
            self.remark(group.first.row, "", contradiction.message)
        for line in planned.lines:
            remark = self.substances.remarks.get(line.substance.name)
            if remark and line.substance.name not in self._told:
                self._told.add(line.substance.name)
                self.remark(group.row_of(COMPOSITION), COMPOSITION, remark)


def _say(group: Group, current: ProductRevision | None, lines: tuple[LineInput, ...] | None) -> RevisionInput:
    """Return what the rows say over what the register says."""
    base = RevisionInput(form="", complete=False) if current is None else say_again(current)
    fields = {target: value for target, value in group.said.items() if target not in OF_SUBSTANCE}
    return replace(base, **fields, lines=base.lines if lines is None else lines)


def _follow(group: Group, current: ProductRevision, checked: Checked | None) -> Planned:
    """Return a product of the register with its next revision, or as it is."""
    if checked is None:
        return Planned(group.first.row, "here", current, tuple(current.lines.all()), None)
    checked.revision.product, checked.revision.number = current.product, current.number + 1
    return Planned(group.first.row, "revised", checked.revision, checked.lines, checked)


def _by_target(group: Group, errors: Sequence[Any]) -> Iterator[tuple[str, str]]:
    """Yield errors of a revision by what a column says: a line of the composition may have columns of its own."""
    numbers = sorted(
        int(part[1]) for target in group.first.shown if (part := PART.fullmatch(target)) and part[2] == "content"
    )
    for error in dict.fromkeys(errors):
        name, *path = error.field.split(".")
        if name == "lines":
            own = f"part {numbers[int(path[0])]} content" if path and int(path[0]) < len(numbers) else COMPOSITION
            yield own, error.message
        else:
            yield name if name in OF_PRODUCT else LIMITS, error.message


def _find_differing(
    group: Group, current: ProductRevision, checked: Checked, *, said_lines: bool
) -> Iterator[tuple[str, str]]:
    """Yield what rows say otherwise than the register, with what stands there."""
    for target in group.said:
        if target in OF_SUBSTANCE:
            continue
        if target == LIMITS:
            kept = list(current.limits.all())
            if sorted(map(_limit, kept)) != sorted(map(_limit, group.said[LIMITS])):
                yield target, "; ".join(f"{row.value} ({row.kind}; {row.source})" for row in kept)
            continue
        before, after = getattr(current, target), getattr(checked.revision, target)
        if (sorted(before) != sorted(after)) if isinstance(before, list) else before != after:
            yield target, _show(target, before)
    if said_lines:
        kept_lines = list(current.lines.all())
        if set(map(_share, kept_lines)) != set(map(_share, checked.lines)):
            target = next((target for target in OF_SUBSTANCE if target in group.said), COMPOSITION)
            yield target, "; ".join(f"{line.substance.name} {line.typed}" for line in kept_lines)


def _share(line: CompositionLine) -> tuple[str, int, int, str]:
    return str(line.substance.uuid), line.amount, line.sd, line.per


def _limit(row: Any) -> tuple[str, str, str, str]:
    return str(row.substance.uuid) if row.substance else "", row.kind, row.value, row.source


def _show(target: str, value: Any) -> str:
    if isinstance(value, list):
        return "; ".join(value)
    if isinstance(value, bool):
        return "yes" if value else "no"
    if target in AMOUNTS and value is not None:
        return show(value, AMOUNTS[target], digits=6)
    return "" if value is None else str(value)
