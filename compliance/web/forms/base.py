"""What every form can do: numbered rows, errors of the domain under their fields, one summary of all errors."""

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any
from uuid import uuid4

from django import forms
from django.forms.boundfield import BoundField
from django.forms.utils import ErrorDict
from django.utils.datastructures import MultiValueDict

from chemicals.workshop.errors import InvalidInputError
from compliance.web.forms.fields import Text

MOST_ROWS = 60
Make = Callable[..., "Row"]


class Quiet(forms.Form):
    """A form that can be shown without being judged."""

    def hush(self) -> None:
        """Show what was written without judging it: another row was asked for, or a step back."""
        self._errors = ErrorDict()


class Row(Quiet):
    """One of several groups of fields; a group left empty does not count."""

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(**kwargs, empty_permitted=True, use_required_attribute=False)


@dataclass
class Rows:
    """Numbered groups of fields in a form."""

    name: str
    label: Text
    help: Text
    make: Make
    blank: int = 3
    forms: list[Row] = field(default_factory=list)

    def fill(self, data: Mapping[str, Any] | None, initial: Sequence[Mapping[str, Any]]) -> None:
        """Build the groups: as many as were sent, or those there are and a few blank ones."""
        if data is None:
            starts: list[Mapping[str, Any]] = [*initial, *({} for _ in range(self.blank))]
            self.forms = [
                self.make(prefix=f"{self.name}-{number}", initial=start) for number, start in enumerate(starts)
            ]
            return
        count = min(self._count(data) + (self.blank if data.get("more") == self.name else 0), MOST_ROWS)
        self.forms = [self.make(data=data, prefix=f"{self.name}-{number}") for number in range(count)]

    def _count(self, data: Mapping[str, Any]) -> int:
        """Return how many groups the sent data has, at least the blank ones."""
        numbers = [key.split("-")[1] for key in data if key.startswith(f"{self.name}-") and key.count("-") == 2]
        return max([self.blank, *(int(number) + 1 for number in numbers if number.isdecimal() and len(number) < 4)])

    @property
    def filled(self) -> list[Row]:
        """Return the groups in which something was written."""
        return [form for form in self.forms if form.has_changed()]


@dataclass(frozen=True)
class Problem:
    """A line of the error summary: the id of the field to jump to, its label, what is wrong."""

    target: str
    label: Text
    message: str


@dataclass(frozen=True)
class Group:
    """Parts of a long form that belong together, under a name; ``folded`` away until something stands in them."""

    name: str
    label: Text
    parts: Sequence[str]
    folded: bool = False
    help: Text = ""


@dataclass(frozen=True)
class ShownGroup:
    """A group with its parts, as a page shows it."""

    group: Group
    parts: Sequence[BoundField | Rows]
    asked: str = ""
    """The name of the rows of which more were asked for."""

    @property
    def is_open(self) -> bool:
        """Say whether its parts show at once."""
        return not self.group.folded or self.asked in self.group.parts or any(map(_is_written, self.parts))


def _is_written(part: BoundField | Rows) -> bool:
    if isinstance(part, Rows):
        return any(form.initial or (form.is_bound and form.has_changed()) for form in part.forms)
    return bool(part.value() or part.errors)


class Shown(Quiet):
    """What the templates ask of a form: its parts in order, and all errors in one list."""

    rows: Mapping[str, Rows] = {}
    order: Sequence[str] = ()
    groups: Sequence[Group] = ()
    details: frozenset[str] = frozenset()
    """Names of the parts for those who know more than is needed: shown last, folded away."""

    @property
    def all_parts(self) -> Iterator[BoundField | Rows]:
        """Yield visible fields and rows in the order in which they were added."""
        names = [*self.order, *(name for name in self.fields if name not in self.order)]
        for name in names:
            if name in self.rows:
                yield self.rows[name]
            elif not self[name].is_hidden:
                yield self[name]

    @property
    def main_parts(self) -> list[BoundField | Rows]:
        """Return what everybody is asked, outside of groups."""
        apart = self.details.union(*(group.parts for group in self.groups))
        return [part for part in self.all_parts if part.name not in apart]

    @property
    def all_groups(self) -> list[ShownGroup]:
        """Return the groups with those of their parts that this form has."""
        parts = {part.name: part for part in self.all_parts}
        asked = self.data.get("more", "")
        return [
            ShownGroup(group, [parts[name] for name in group.parts if name in parts], asked) for group in self.groups
        ]

    @property
    def detail_parts(self) -> list[BoundField | Rows]:
        """Return the details."""
        return [part for part in self.all_parts if part.name in self.details]

    @property
    def shows_details(self) -> bool:
        """Say whether something is written, or wrong, among the details: then they are unfolded."""
        parts = self.detail_parts
        fields = [part for part in parts if not isinstance(part, Rows)]
        written = any(part.filled for part in parts if isinstance(part, Rows)) or any(part.value() for part in fields)
        return written or any(part.errors for part in fields)

    @property
    def all_problems(self) -> list[Problem]:
        """Return every error with the field to jump to."""
        if not self.is_bound:
            return []
        found = [Problem("main", "", str(message)) for message in self.non_field_errors()]
        for bound in self.hidden_fields():
            found += [Problem("main", bound.label, str(message)) for message in bound.errors]
        for part in self.all_parts:
            if isinstance(part, Rows):
                for number, form in enumerate(part.forms, 1):
                    found += _problems(form, f"{part.label} {number}: ")
            else:
                found += _problems_of(part, "")
        return found


class WebForm(Shown):
    """A form whose errors come all at once, those of the domain beside those of the fields."""

    def __init__(self, data: Any = None, files: Any = None, **kwargs: Any) -> None:
        self.initial_rows: Mapping[str, Sequence[Mapping[str, Any]]] = kwargs.pop("initial_rows", {})
        super().__init__(data, files, **kwargs)
        self.rows: dict[str, Rows] = {}
        self.order: list[str] = []

    def add_rows(self, rows: Rows) -> None:
        """Add numbered groups of fields after the fields so far."""
        rows.fill(self.data if self.is_bound else None, self.initial_rows.get(rows.name, ()))
        self.rows[rows.name] = rows
        self.order = [*self.order, *(name for name in self.fields if name not in self.order), rows.name]

    def is_valid(self) -> bool:
        """Check fields and rows, all of them."""
        rows_are = [form.is_valid() for rows in self.rows.values() for form in rows.forms]
        return super().is_valid() and all(rows_are)

    def hush(self) -> None:
        super().hush()
        for rows in self.rows.values():
            for form in rows.forms:
                form.hush()

    def add_domain_errors(self, error: InvalidInputError) -> None:
        """Put each error of the domain under its field: "held.0.amount" is the amount of the first filled row."""
        for each in error.errors:
            name, *path = each.field.replace("occurred_at", "occurred").split(".")
            if name in self.rows and len(path) == 2 and path[0].isdecimal():
                filled = self.rows[name].filled
                if int(path[0]) < len(filled) and path[1] in filled[int(path[0])].fields:
                    filled[int(path[0])].add_error(path[1], each.message)
                    continue
            self.add_error(next((known for known in (each.field, name) if known in self.fields), None), each.message)


class KeyForm(WebForm):
    """A form with a key: a second press of its button is harmless."""

    key = forms.UUIDField(widget=forms.HiddenInput)

    def __init__(self, data: Any = None) -> None:
        super().__init__(data, initial={"key": uuid4()})


def _problems(form: forms.Form, before: str) -> list[Problem]:
    return [problem for name in form.fields for problem in _problems_of(form[name], before)]


def _problems_of(bound: BoundField, before: str) -> list[Problem]:
    target = bound.id_for_label or bound.auto_id
    return [Problem(str(target), f"{before}{bound.label}", str(message)) for message in bound.errors]


def hidden_pairs(data: MultiValueDict[str, Any], without: Sequence[str]) -> list[tuple[str, str]]:
    """Return what was sent as pairs for hidden inputs, so that nothing typed is lost."""
    return [(name, value) for name, values in data.lists() if name not in without for value in values]
