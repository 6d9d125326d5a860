"""Anything that can be recorded, for the tests that try whatever they can think of."""

import dataclasses
import types
import typing
import unicodedata
from datetime import UTC, datetime
from uuid import UUID

from hypothesis import strategies as st

from chemicals.books.canonical import type_hints
from chemicals.books.events import (
    AIR,
    EVENTS,
    GROSS_MASS,
    SAMPLE,
    SEWER,
    SPECIES,
    SPILL,
    VOLUME,
    BathCharge,
    Carbon,
    Conversion,
    Correction,
    Count,
    DaySheet,
    Deposit,
    Discharge,
    DrumOff,
    Event,
    Figure,
    Filter,
    Gauge,
    Held,
    Ingredient,
    LevelMark,
    LevelReading,
    MakeUp,
    Measured,
    Move,
    Opening,
    PeriodClosing,
    Plating,
    Racks,
    Reading,
    Resin,
    Result,
    Run,
    Sample,
    Share,
    Sludge,
    Spill,
    Strip,
    Treatment,
)
from chemicals.books.events.readings import QUANTITIES

texts = st.text(st.characters(exclude_categories=("Cc", "Cs"), include_characters="\n"), max_size=12).map(
    lambda text: unicodedata.normalize("NFC", text)
)
amounts = st.integers(0, 10**15)
species = st.sampled_from(SPECIES)
held_lists = st.lists(
    st.builds(
        Held,
        component=texts.filter(lambda name: name not in (VOLUME, GROSS_MASS)),
        amount=st.builds(Measured, typed=texts, unit=texts, base=amounts),
    ),
    max_size=3,
    unique_by=lambda held: held.component,
).map(tuple)

Values = st.SearchStrategy[typing.Any]
SCALARS: dict[object, Values] = {
    str: texts,
    int: st.integers(-(10**18), 10**18),
    bool: st.booleans(),
    UUID: st.uuids(),
    datetime: st.datetimes(datetime(1, 1, 2), datetime(9999, 12, 30), timezones=st.just(UTC)),  # noqa: DTZ001
}
FIELDS: dict[type, dict[str, Values]] = {
    Measured: {"base": amounts, "sd": st.none() | amounts},
    Figure: {"base": amounts, "sd": amounts},
    Share: {"amount": amounts, "sd": amounts, "per": st.sampled_from(["kg", "L"])},
    Deposit: {
        "molar_mass": st.decimals("0.001", "999", places=3).map(str),
        "faraday": st.just("96485.33212"),
        "valence": st.integers(1, 8),
    },
    Opening: {"held": held_lists},
    Conversion: {"species": species},
    Count: {"volume": st.none(), "mass": st.deferred(lambda: values_of(Measured))},
    Plating: {"racks": st.none(), "rack_share": st.none()},
    Racks: {"loads": st.integers(1, 1000)},
    Strip: {"weight_before": st.none(), "weight_after": st.none()},
    Move: {"mass": st.none()},
    DrumOff: {"volume": st.none()},
    Sample: {"mass": st.none(), "target": st.just(SAMPLE)},
    Spill: {"mass": st.none()},
    Discharge: {"mass": st.none(), "target": st.just(SEWER)},
    Filter: {"taken": held_lists},
    Carbon: {"taken": held_lists},
    Resin: {"taken": held_lists},
    Sludge: {"held": held_lists},
    Treatment: {
        "sludge": st.none(),
        "dissolved": st.just(()),
        "consumed": st.lists(species, unique=True).map(tuple),
    },
    Correction: {"changes": st.just(())},
    PeriodClosing: {"after": st.none()},
    Result: {"least": st.integers(0, 10**6), "most": st.none() | st.integers(10**6, 10**9), "sd": st.none() | amounts},
    Gauge: {"sd": amounts, "relative_sd": amounts},
    LevelMark: {"height": st.none() | amounts, "volume": amounts},
    Reading: {"quantity": st.sampled_from(QUANTITIES)},
    LevelReading: {"lost_to": st.sampled_from([AIR, SPILL])},
}
"""Fields that may not hold everything their type allows."""


def values_of(hint: typing.Any) -> Values:
    """Return a strategy for the values of a field's type."""
    origin, args = typing.get_origin(hint), typing.get_args(hint)
    if origin is typing.Annotated:
        return values_of(args[0])
    if origin in (types.UnionType, typing.Union):
        return st.none() | values_of(next(arg for arg in args if arg is not types.NoneType))
    if origin is tuple:
        return st.lists(values_of(args[0]), max_size=3).map(tuple)
    if dataclasses.is_dataclass(hint):
        kind = typing.cast("type", hint)
        own = FIELDS.get(kind, {})
        free = {name: values_of(inner) for name, inner in type_hints(kind).items() if name in _names(kind) - set(own)}
        return st.builds(kind, **free, **own)
    return SCALARS[hint]


def _names(kind: type) -> set[str]:
    return {field.name for field in dataclasses.fields(kind)}


def _with_as_many(kind: type[Event], **lists: Values) -> Values:
    """Return a strategy for a kind of which some lists go together."""
    free = {name: values_of(hint) for name, hint in type_hints(kind).items() if name in _names(kind) - set(lists)}
    return st.builds(kind, **free, **lists)


def _a_day_sheet(rows: int) -> Values:
    charges = [f"bath {number}" for number in range(rows)]
    return _with_as_many(
        DaySheet,
        racks=st.tuples(*[st.builds(Racks, route=st.tuples(texts), rack=texts, loads=st.integers(1, 1000))] * rows),
        drag_out=st.tuples(*[st.tuples(values_of(Figure))] * rows),
        charges=st.tuples(*(st.builds(BathCharge, bath=st.just(bath), charge=values_of(Measured)) for bath in charges)),
        platings=st.tuples(*[values_of(Plating)] * rows),
    )


def _a_make_up(rows: int) -> Values:
    ingredients, figures = values_of(Ingredient), values_of(Figure)
    return _with_as_many(MakeUp, ingredients=st.tuples(*[ingredients] * rows), dissolved=st.tuples(*[figures] * rows))


def _a_run_through(steps: list[tuple[str, Figure]]) -> Values:
    free = {name: values_of(hint) for name, hint in type_hints(Run).items() if name in _names(Run)}
    tanks, drag_out = tuple(tank for tank, _ in steps), tuple(drags for _, drags in steps)
    return st.builds(Run, **free | {"route": st.just(tanks), "drag_out": st.just(drag_out)})


EVENTS_OF: dict[type[Event], Values] = {kind: values_of(kind) for kind in EVENTS}
EVENTS_OF[DaySheet] = st.integers(0, 2).flatmap(_a_day_sheet)
EVENTS_OF[MakeUp] = st.integers(0, 2).flatmap(_a_make_up)
EVENTS_OF[Run] = st.lists(st.tuples(texts, values_of(Figure)), max_size=3).flatmap(_a_run_through)
