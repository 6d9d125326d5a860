"""The calculations `rinse`, `static-rinse` and `drag-out`: water, concentrations, and what is dragged from the bath."""

from dataclasses import dataclass
from typing import Annotated, Final, Literal, cast

from chemicals.science import rinse
from chemicals.science.calculation import (
    BASIS,
    Calculation,
    Check,
    ExactlyGiven,
    Output,
    choice,
    integer,
    quantity,
    refuse,
)

_Arrangement = Literal["single", "series", "counterflow"]


@dataclass(frozen=True)
class RinseInput:
    """Rinses through which water runs, and the concentration that the last of them may have."""

    arrangement: Annotated[
        _Arrangement,
        choice(
            "Arrangement", "series: fresh water to every stage; counterflow: the water runs against the work.",
            ("single", "series", "counterflow"),
        ),
    ]  # fmt: skip
    stages: Annotated[
        int | None,
        integer("Stages", "How many rinses; a single one is 1.", "2", minimum=1, maximum=rinse.MOST_STAGES,
                optional=True),
    ]  # fmt: skip
    bath: Annotated[
        float, quantity("concentration", "g/L", "Concentration of the bath", "A bare number is in g/L.", "270 g/L")
    ]
    target: Annotated[
        float,
        quantity(
            "concentration", "g/L", "Concentration of the last rinse", "As it may be. A bare number is in g/L.",
            "40 mg/L",
        ),
    ]  # fmt: skip
    drag_out: Annotated[
        float, quantity("flow", "L/h", "Drag-out", "What comes along from the bath. A bare number is in L/h.", "1 L/h")
    ]


@dataclass(frozen=True)
class RinseOutput:
    """The water that is needed, by the strict balance and by the usual form."""

    dilution_ratio: Annotated[float, Output("Dilution ratio", "Bath over last rinse.")]
    water_L_per_h: Annotated[float, Output("Water", "Of all stages together.", "L/h")]  # noqa: N815
    water_per_drag_out: Annotated[float, Output("Water per drag-out", "Litres of all stages for each litre.")]
    stage_concentrations_g_per_L: Annotated[  # noqa: N815
        list[float], Output("Concentration of stage", "The first is the one after the bath.", "g/L")
    ]
    approximate_water_L_per_h: Annotated[  # noqa: N815
        float, Output("Water by the usual form", "Counts no drag-out from stage to stage: somewhat too much.", "L/h")
    ]
    basis: Annotated[str, BASIS]


def _rinse(given: RinseInput) -> RinseOutput:
    stages, counterflow = given.stages or 1, given.arrangement == "counterflow"
    ratio = rinse.water_per_stage(given.bath, given.target, stages, counterflow=counterflow)
    approximate = rinse.approximate_water_per_stage(given.bath, given.target, stages)
    waters = 1 if counterflow else stages  # how many stages get fresh water
    return RinseOutput(
        dilution_ratio=given.bath / given.target,
        water_L_per_h=waters * ratio * given.drag_out,
        water_per_drag_out=waters * ratio,
        stage_concentrations_g_per_L=rinse.stage_concentrations(ratio, given.target, stages, counterflow=counterflow),
        approximate_water_L_per_h=waters * approximate * given.drag_out,
        basis=rinse.COUNTERFLOW_BASIS if counterflow else rinse.SERIES_BASIS,
    )


def _has_stages(stages: int | None, arrangement: str) -> bool:
    return stages is not None or arrangement == "single"


def _is_one_if_single(stages: int | None, arrangement: str) -> bool:
    return stages in {None, 1} or arrangement != "single"


def _is_less(amount: float, bath: float) -> bool:
    return amount < bath


@dataclass(frozen=True)
class StaticRinseInput:
    """A rinse tank without flow, and either the number of dips or the concentration to reach."""

    volume: Annotated[float, quantity("volume", "L", "Volume of the rinse", "A bare number is in L.", "20 L")]
    drag_out_per_dip: Annotated[
        float,
        quantity(
            "volume", "mL", "Drag-out per dip", "What a dip brings from the bath. A bare number is in mL.", "10 mL"
        ),
    ]
    bath: Annotated[
        float,
        quantity(
            "concentration", "g/L", "Concentration of the bath", "A bare number is in g/L.", "60 g/L", above_zero=False
        ),
    ]
    start: Annotated[
        float,
        quantity(
            "concentration", "g/L", "Concentration at the start", "Of the rinse. A bare number is in g/L.", "0 g/L",
            above_zero=False, default="0 g/L",
        ),
    ]  # fmt: skip
    dips: Annotated[
        int | None,
        integer("Dips", "How many parts or loads were rinsed.", "50", minimum=0, maximum=10**9, optional=True),
    ]
    target: Annotated[
        float | None,
        quantity(
            "concentration", "g/L", "Concentration to reach", "In place of the dips. A bare number is in g/L.", "2 g/L",
            above_zero=False, optional=True,
        ),
    ]  # fmt: skip


@dataclass(frozen=True)
class StaticRinseOutput:
    """The rinse after its dips."""

    concentration_g_per_L: Annotated[float, Output("Concentration", "Of the rinse at the end.", "g/L")]  # noqa: N815
    dips: Annotated[int, Output("Dips", "As given, or the first that reaches the target.")]
    metal_g: Annotated[float, Output("In the rinse", "Concentration times volume.", "g")]
    basis: Annotated[str, BASIS]


def _static_rinse(given: StaticRinseInput) -> StaticRinseOutput:
    drag_out = given.drag_out_per_dip / 1000
    dips = given.dips
    if dips is None:
        dips = rinse.dips_to_reach(given.volume, drag_out, cast("float", given.target), given.bath, given.start)
    if dips is None:
        raise refuse("target", "No number of dips gets there: write a target between the start and the bath.")
    concentration = rinse.static_concentration(given.volume, drag_out, dips, given.bath, given.start)
    return StaticRinseOutput(concentration, dips, concentration * given.volume, rinse.STATIC_BASIS)


@dataclass(frozen=True)
class DragOutInput:
    """A static rinse that was clean, and by how much it rose after so many dips."""

    rinse_volume: Annotated[float, quantity("volume", "L", "Volume of the rinse", "A bare number is in L.", "400 L")]
    dips: Annotated[int, integer("Dips", "How many parts or loads were rinsed.", "40", minimum=1, maximum=10**9)]
    rise: Annotated[
        float,
        quantity("concentration", "g/L", "Rise of the rinse", "From clean water. A bare number is in g/L.", "0.31 g/L"),
    ]
    bath: Annotated[
        float,
        quantity(
            "concentration", "g/L", "Concentration of the bath", "Of the same substance. A bare number is in g/L.",
            "60 g/L",
        ),
    ]  # fmt: skip
    area_per_dip: Annotated[
        float | None,
        quantity(
            "area", "dm2", "Area per dip", "A bare number is in dm2. Without it there is no drag-out per area.",
            "50 dm2", optional=True,
        ),
    ]  # fmt: skip


@dataclass(frozen=True)
class DragOutOutput:
    """What a dip drags out of the bath; per area null without the area."""

    drag_out_mL_per_dip: Annotated[float, Output("Drag-out per dip", "Strict.", "mL")]  # noqa: N815
    drag_out_mL_per_m2: Annotated[  # noqa: N815
        float | None, Output("Drag-out per area", "Strict, over the area of a dip.", "mL/m²")
    ]
    simple_mL_per_dip: Annotated[  # noqa: N815
        float,
        Output("Drag-out by the usual form", "Counts no drag-out of the rinse itself: somewhat too little.", "mL"),
    ]
    basis: Annotated[str, BASIS]


def _drag_out(given: DragOutInput) -> DragOutOutput:
    strict = rinse.drag_out_per_dip(given.rinse_volume, given.dips, given.rise, given.bath) * 1000
    simple = rinse.simple_drag_out_per_dip(given.rinse_volume, given.dips, given.rise, given.bath) * 1000
    per_area = None if given.area_per_dip is None else strict / (given.area_per_dip / 100)  # 100 dm2 are 1 m2
    return DragOutOutput(strict, per_area, simple, rinse.DRAG_OUT_BASIS)


RINSE: Final = Calculation(
    "rinse", "Running rinse", "How much water rinses need to bring the last of them down to a concentration.",
    RinseInput, RinseOutput, _rinse,
    {"arrangement": "counterflow", "stages": 2, "bath": "270 g/L", "target": "40 mg/L", "drag_out": "1 L/h"},
    (
        Check(("stages", "arrangement"), _has_stages, "A series or counterflow has several: write for example 2."),
        Check(("stages", "arrangement"), _is_one_if_single, "A single rinse is 1: write 1, or series or counterflow."),
        Check(("target", "bath"), _is_less, "A rinse is weaker than its bath: write a target below the bath."),
    ),
)  # fmt: skip

STATIC_RINSE: Final = Calculation(
    "static-rinse", "Static rinse", "What a rinse without flow holds after so many dips.",
    StaticRinseInput, StaticRinseOutput, _static_rinse,
    {"volume": "20 L", "drag_out_per_dip": "10 mL", "bath": "60 g/L", "dips": 50},
    (ExactlyGiven(("dips", "target"), 1),),
)  # fmt: skip

DRAG_OUT: Final = Calculation(
    "drag-out", "Drag-out", "What a dip drags out of the bath, from the rise of a rinse without flow.",
    DragOutInput, DragOutOutput, _drag_out,
    {"rinse_volume": "400 L", "dips": 40, "rise": "0.31 g/L", "bath": "60 g/L", "area_per_dip": "50 dm2"},
    (Check(("rise", "bath"), _is_less, "No drag-out explains this: write a rise below the bath."),),
)  # fmt: skip
