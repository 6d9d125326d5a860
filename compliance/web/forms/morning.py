"""What is read in the morning: one number for each tank and each thing that is read there."""

from collections.abc import Callable, Collection, Sequence
from dataclasses import dataclass
from typing import Any

from django import forms
from django.forms.boundfield import BoundField
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import Held, list_contents_for
from chemicals.process.inputs import Input, LevelInput, ReadingInput
from chemicals.process.levels import list_marks_by_vessel
from chemicals.process.selectors import list_tanks_for
from chemicals.science.reading import PH, READ, TEMPERATURE
from chemicals.workshop.models import Membership
from compliance.clearance.together import Said
from compliance.web import words
from compliance.web.forms.fields import Text
from compliance.web.forms.grid import FigureField, GridForm, LevelField, Part, tell


@dataclass(frozen=True)
class Tank:
    """A tank as the fields need it: its level by the books, and the marks of its level table."""

    vessel: Vessel
    level: Held | None
    marks: Sequence[str]


@dataclass(frozen=True)
class Asked:
    """A number that a morning asks: of tanks of which kinds, in which field, and the record that it makes."""

    name: str
    label: Text
    kinds: Collection[str]
    make_field: Callable[[Tank], FigureField]
    make_input: Callable[[Vessel, Any], Input]
    takes: Sequence[str]
    """The fields of the record that hold what was typed."""


def _level_field(tank: Tank) -> FigureField:
    known = tank.level is not None and tank.level.amount is not None
    note = _("by the books %(level)s") % {"level": words.amount(tank.level.amount, "volume")} if known else ""  # type: ignore[union-attr]  # it is known
    return LevelField(marks=tank.marks, note=note)


def _reading(quantity: str, label: Text, unit: str) -> Asked:
    """Return what is asked of a bath that is kept as it was read."""
    dimension = READ[quantity].dimensions[0]
    return Asked(
        name=quantity.lower().replace(" ", "-"),
        label=label,
        kinds=(VesselKind.BATH,),
        make_field=lambda _tank: FigureField(dimension, unit),
        make_input=lambda vessel, said: ReadingInput(vessel=vessel.uuid, quantity=quantity, result=said),
        takes=("result",),
    )


MORNING: Sequence[Asked] = (
    Asked(
        name="level",
        label=gettext_lazy("Level"),
        kinds=(VesselKind.BATH, VesselKind.RINSE),
        make_field=_level_field,
        make_input=lambda vessel, said: LevelInput(vessel=vessel.uuid, **said),
        takes=("volume", "mark"),
    ),
    _reading(TEMPERATURE, gettext_lazy("Temperature"), "degC"),
    _reading(PH, gettext_lazy("pH"), ""),
)
"""What the page asks, in order. Another reading is another line."""


class MorningForm(GridForm):
    """What was read at the tanks just now."""

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(member, data)
        contents, marks = list_contents_for(member), list_marks_by_vessel(member)
        vessels = [tank.vessel for tank in list_tanks_for(member)]
        self.tanks = [
            Tank(vessel, contents[vessel.pk].volume if vessel.pk in contents else None, marks.get(vessel.pk, ()))
            for vessel in vessels
            if vessel.gone_at is None or any(self.data.get(_name(asked, vessel)) for asked in MORNING)
        ]
        for tank in self.tanks:
            self.fields.update(dict(self._make_fields(tank)))

    def _make_fields(self, tank: Tank) -> list[tuple[str, forms.Field]]:
        found: list[tuple[str, forms.Field]] = []
        for asked in _asked_of(tank.vessel):
            field = asked.make_field(tank)
            field.label = f"{tank.vessel}, {asked.label}"
            found.append((_name(asked, tank.vessel), field))
        return found

    def list_tanks(self) -> list[tuple[Vessel, list[tuple[Text, BoundField]]]]:
        """Return the tanks with what is asked of each."""
        return [
            (tank.vessel, [(asked.label, self[_name(asked, tank.vessel)]) for asked in _asked_of(tank.vessel)])
            for tank in self.tanks
        ]

    def to_parts(self) -> list[Part]:
        """Return a reading for each number."""
        found = []
        for tank in self.tanks:
            for asked in _asked_of(tank.vessel):
                name = _name(asked, tank.vessel)
                said = self.cleaned_data.get(name)
                if said:
                    fields = dict.fromkeys(("vessel", *asked.takes), name)
                    data = asked.make_input(tank.vessel, said)
                    typed = next(iter(said.values())) if isinstance(said, dict) else said
                    found.append(Part(str(tank.vessel), Said(data=data), [(str(asked.label), tell(typed))], fields))
        return found


def _asked_of(vessel: Vessel) -> list[Asked]:
    return [asked for asked in MORNING if vessel.kind in asked.kinds]


def _name(asked: Asked, vessel: Vessel) -> str:
    return f"{asked.name}-{vessel.uuid}"
