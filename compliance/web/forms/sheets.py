"""The day sheet as a grid: of one day, and of seven."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from datetime import date, timedelta
from typing import Any
from uuid import UUID

from django import forms
from django.forms.boundfield import BoundField
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.books.occurred import Occurred
from chemicals.journal.models import Entry
from chemicals.process.build.plating import MOST_LOADS
from chemicals.process.day_sheets import DayGrid, Loads, list_sheets_of_days, read_day_grid
from chemicals.process.inputs import ChargeRow, DaySheetInput, RacksRow
from chemicals.workshop.models import Membership
from compliance.clearance.together import Said
from compliance.web.forms.fields import NO_CHOICE, DayField
from compliance.web.forms.grid import GridForm, LoadsField, Part, QuantityField, tell

DAYS = 7
LOST = gettext_lazy(
    "A row of this sheet is not there any more; %(typed)s stood in it. Write it into another row, or leave it out."
)


@dataclass(frozen=True)
class SheetDay:
    """The part of a form that is the sheet of one day; ``before`` begins the names of its fields."""

    grid: DayGrid
    before: str = ""

    def load_name(self, row: Loads) -> str:
        """Return the name of the field of a row."""
        return f"{self.before}loads-{row.route.uuid}-{row.rack.uuid}"

    def charge_name(self, bath: UUID) -> str:
        """Return the name of the field of a bath."""
        return f"{self.before}charge-{bath}"

    def make_fields(self) -> dict[str, forms.Field]:
        """Return a field for each row and each bath."""
        loads = {self.load_name(row): LoadsField(MOST_LOADS, label=str(row)) for row in self.grid.loads}
        baths = {
            self.charge_name(bath.uuid): QuantityField(
                "charge", "Ah", label=_("%(bath)s, ampere-hours") % {"bath": bath}
            )
            for bath in self.grid.baths
        }
        return {**loads, **baths}

    def list_last(self) -> dict[str, object]:
        """Return what the last sheet said, by field."""
        loads = {self.load_name(row): self.grid.last_loads.get(row.key) for row in self.grid.loads}
        charges = {self.charge_name(uuid): typed for uuid, typed in self.grid.last_charges.items()}
        return {name: value for name, value in {**loads, **charges}.items() if value}

    def to_part(
        self, title: str, said: Mapping[str, Any], *, when: Occurred | None, files: Sequence[str]
    ) -> Part | None:
        """Return the record of the day; None if nothing is written in it."""
        rows = [(row, name, said[name]) for row in self.grid.loads if said[name := self.load_name(row)]]
        baths = [
            (bath, name, said[name])
            for bath in self.grid.baths
            if said[name := self.charge_name(bath.uuid)] is not None
        ]
        if not rows and not baths:
            return None
        data = DaySheetInput(
            racks=tuple(RacksRow(route=row.route.uuid, rack=row.rack.uuid, loads=loads) for row, _name, loads in rows),
            charges=tuple(ChargeRow(bath=bath.uuid, charge=charge) for bath, _name, charge in baths),
        )
        fields = {f"racks.{number}.loads": name for number, (_row, name, _loads) in enumerate(rows)}
        fields |= {f"racks.{number}.route": name for number, (_row, name, _loads) in enumerate(rows)}
        for number, (_bath, name, _charge) in enumerate(baths):
            fields |= {f"charges.{number}.{field}": name for field in ("bath", "charge")}
        understood = [*((str(row), tell(loads)) for row, _name, loads in rows)]
        understood += [(str(bath), tell(charge)) for bath, _name, charge in baths]
        return Part(title, Said(data=data, occurred=when, attachments=tuple(files)), understood, fields)


class SheetForm(GridForm):
    """What the sheets of a day and of a week share."""

    def __init__(self, member: Membership, today: date, data: Any = None, **kwargs: Any) -> None:
        super().__init__(member, data, **kwargs)
        self.today, self.grid = today, read_day_grid(member)

    def clean(self) -> dict[str, Any]:
        """Refuse what was typed into a row that is gone since the sheet was opened: it must not be lost."""
        said: dict[str, Any] = super().clean() or self.cleaned_data
        for name, typed in self.data.items():
            if name not in self.fields and typed.strip() and ("loads-" in name or "charge-" in name):
                self.add_error(None, LOST % {"typed": typed.strip()[:40]})
        return said

    def note(self, sheets: Sequence[Entry]) -> list[str]:
        """Return a warning where the day has a sheet already."""
        text = _("A day sheet of this day is recorded already. This one comes on top of it.")
        return [text] if sheets else []


class DayForm(SheetForm):
    """The sheet of one day."""

    def __init__(self, member: Membership, today: date, data: Any = None, *, again: bool = False) -> None:
        super().__init__(member, today, data)
        yesterday = today - timedelta(days=1)
        self.fields["day"] = forms.ChoiceField(
            label=_("Day"),
            choices=[
                (today.isoformat(), _("Today, %(day)s") % {"day": today}),
                (yesterday.isoformat(), _("Yesterday, %(day)s") % {"day": yesterday}),
            ],
            initial=today.isoformat(),
            widget=forms.RadioSelect,
            error_messages={"required": NO_CHOICE, "invalid_choice": NO_CHOICE},
        )
        self.fields["other_day"] = DayField(label=_("Or another day"), required=False)
        self.sheet = SheetDay(self.grid)
        self.fields.update(self.sheet.make_fields())
        if again:
            self.initial.update(self.sheet.list_last())

    @property
    def loads(self) -> list[BoundField]:
        """Return the fields of the rows."""
        return [self[self.sheet.load_name(row)] for row in self.grid.loads]

    @property
    def charges(self) -> list[BoundField]:
        """Return the fields of the baths."""
        return [self[self.sheet.charge_name(bath.uuid)] for bath in self.grid.baths]

    def to_parts(self) -> list[Part]:
        """Return the one record, or none. Today's is dated now: what was read before it was read before."""
        said = self.cleaned_data
        day = said["other_day"] or date.fromisoformat(said["day"])
        when = None if day == self.today else Occurred.on_day(day, self.member.workshop.zone)
        part = self.sheet.to_part(day.isoformat(), said, when=when, files=())
        if part is None:
            return []
        sheets = list_sheets_of_days(self.member, day, day).get(day, [])
        fields = {**part.fields, "occurred_at": "other_day"}
        return [replace(part, fields=fields, notes=self.note(sheets))]


@dataclass(frozen=True)
class ShownDay:
    """A day of the week's form: its fields with their labels (none if it is to come), the sheets that it has."""

    day: date
    fields: Sequence[tuple[Any, BoundField]]
    sheets: Sequence[Entry]
    is_to_come: bool


class WeekForm(SheetForm):
    """The sheets of seven days from ``first`` on, as they stand on a paper, with a photograph of it."""

    first = forms.DateField(widget=forms.HiddenInput)
    photo_sha256 = forms.CharField(required=False, max_length=64, widget=forms.HiddenInput)
    photo = forms.FileField(
        required=False,
        label=gettext_lazy("Photo or scan of the paper"),
        help_text=gettext_lazy("PNG, JPEG or PDF. It goes along with each of the days."),
        widget=forms.FileInput(attrs={"accept": "image/png,image/jpeg,application/pdf"}),
    )

    def __init__(self, member: Membership, today: date, first: date, data: Any = None) -> None:
        super().__init__(member, today, data)
        self.initial["first"] = first
        self.days = [first + timedelta(days=number) for number in range(DAYS)]
        self.sheets = {day: SheetDay(self.grid, f"{day}-") for day in self.days if day <= today}
        self.recorded = list_sheets_of_days(member, self.days[0], self.days[-1])
        for day, sheet in self.sheets.items():
            fields = sheet.make_fields()
            for field in fields.values():
                field.label = f"{day} {field.label}"
            self.fields.update(fields)

    def list_days(self) -> Iterator[ShownDay]:
        """Yield the days as the page shows them."""
        for day in self.days:
            made = self.sheets[day].make_fields() if day in self.sheets else {}
            fields = [(field.label, self[name]) for name, field in made.items()]
            yield ShownDay(day, fields, self.recorded.get(day, []), is_to_come=day > self.today)

    def to_parts(self) -> list[Part]:
        """Return a record for each day in which something is written; of each the day alone is known."""
        said, zone = self.cleaned_data, self.member.workshop.zone
        files = [said["photo_sha256"]] if said["photo_sha256"] else []
        found = []
        for day, sheet in self.sheets.items():
            part = sheet.to_part(day.isoformat(), said, when=Occurred.on_day(day, zone), files=files)
            if part is not None:
                notes = self.note(self.recorded.get(day, []))
                found.append(replace(part, notes=notes))
        return found
