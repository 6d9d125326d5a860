"""One rich entry of every kind, and the golden files that keep its bytes.

``python -m tests.books.examples`` writes the golden files that are missing and never touches one that is there: a new
version of a kind gets a file beside the old one.
"""

import json
from collections.abc import Mapping
from datetime import UTC, datetime
from pathlib import Path
from uuid import UUID, uuid5

from chemicals.books import canonical
from chemicals.books.canonical import GENESIS, Body
from chemicals.books.clearance import ALLOWED, INCIDENT, Clearance
from chemicals.books.events import (
    AIR,
    Acceptance,
    Analysis,
    BathCharge,
    Cancellation,
    Carbon,
    Change,
    CleanOut,
    Conversion,
    Correction,
    Count,
    DaySheet,
    DensityReading,
    Deposit,
    Discharge,
    Dissolved,
    DrumOff,
    Dummy,
    Event,
    Figure,
    Filter,
    Gauge,
    HandOver,
    Held,
    Ingredient,
    LevelMark,
    LevelReading,
    MakeUp,
    Measured,
    Move,
    Opening,
    Paper,
    PeriodClosing,
    PeriodReopening,
    Plating,
    Racks,
    Reading,
    Receipt,
    Recipe,
    Resin,
    Result,
    Run,
    Sample,
    Share,
    Sludge,
    Spill,
    Strip,
    TopUp,
    Treatment,
    WeightReading,
    encode,
)

GOLDEN = Path(__file__).parent / "golden"
WORKSHOP = UUID("0b6f7c1e-3f57-4c1d-9d0a-7f5b2f3c9a10")
WATER = Figure(998_200, 100, "water at 20 °C")
BATH, RINSE, STOCK, ANODES, DRUM, RACKS, SLUDGE = (
    str(uuid5(WORKSHOP, name)) for name in ("bath", "rinse", "stock", "anodes", "drum", "racks", "sludge")
)
SPENT = (Held("Cu", Measured("3.1", "g", 3_100_000, 400_000)),)
RECIPE = Recipe(
    uuid5(WORKSHOP, "copper sulfate"),
    3,
    "Kupfersulfat, “blau” – 25 kg\nSäurefrei",
    solid=True,
    complete=False,
    shares=(Share("Cu", 254_500_000, 500_000, "kg"), Share("Fe", 0, 1_000, "kg")),
    density=None,
)

PLATING = Plating(
    Deposit("Cu", "63.546", 2, "96485.33212", Figure(980_000, 20_000, "as entered")),
    ANODES,
    RACKS,
    Figure(30_000, 15_000, "assumed for uncoated tips"),
    (Conversion("acid", Figure(10_364_270, 100_000, "oxygen at an inert anode"), made=True),),
)

EXAMPLES: Mapping[str, Event] = {
    event.KIND: event
    for event in (
        Opening(
            BATH,
            complete=False,
            volume=Measured("2.5", "gal", 9_463_529_460, 100_000_000),
            mass=None,
            held=(Held("Cu", Measured("473", "g", 473_000_000, 9_000_000)), Held("Zn", Measured("0", "g", 0))),
            density=Figure(1_180_000, 5_000, "hydrometer"),
            poured=("an older bath", RECIPE.key),
        ),
        Receipt(STOCK, Measured("25", "kg", 25_000_000_000, 10_000_000), None, "LOT 7/ä", RECIPE),
        MakeUp(
            BATH,
            (
                Ingredient(STOCK, Measured("2", "kg", 2_000_000_000, 1_000_000), None),
                Ingredient(DRUM, None, Measured("100", "mL", 100_000_000)),
            ),
            Measured("10", "L", 10_000_000_000, 50_000_000),
            WATER,
            (Figure(400_000_000, 200_000_000, "assumed"), Figure(0, 0, "a liquid")),
        ),
        TopUp(BATH, "water supply", None, Measured("10", "L", 10_000_000_000, 50_000_000), WATER),
        Run(
            "12 knobs, Ø 8 mm",
            (BATH, RINSE),
            None,
            Measured("0.44", "A", 440_000, 4_000),
            Measured("4", "h", 14_400_000, 60_000),
            Measured("5.6", "g", 5_600_000, 50_000),
            Measured("7.7", "g", 7_700_000, 50_000),
            PLATING,
            "rack type 2",
            (Figure(5_000_000, 1_500_000, "rack type 2"), Figure(5_000_000, 1_500_000, "r2")),
            uuid5(WORKSHOP, "balance"),
            Gauge("Balance, 0.01 g", 50_000, 0, "2026-01-31"),
        ),
        Count(STOCK, None, Measured("17.25", "kg", 17_250_000_000, 10_000_000)),
        DaySheet(
            (Racks((BATH, RINSE), "rack type 2", 14),),
            (BathCharge(BATH, Measured("31.5", "Ah", 113_400_000_000, 1_000_000_000)),),
            ((Figure(5_000_000, 1_500_000, "rack type 2"), Figure(5_000_000, 1_500_000, "r2")),),
            (PLATING,),
        ),
        Dummy(BATH, RACKS, Measured("2", "Ah", 7_200_000_000), None, None, None, None, PLATING),
        Strip(RACKS, RINSE, "Cu", Measured("85.0", "g", 85_000_000), Measured("80.2", "g", 80_200_000)),
        Move(BATH, RINSE, Measured("1", "L", 1_000_000_000)),
        DrumOff(RINSE, DRUM, mass=Measured("2.2", "kg", 2_200_000_000, 50_000_000)),
        Sample(BATH, "sample", Measured("20", "mL", 20_000_000)),
        Spill(RINSE, DRUM, Measured("0.5", "L", 500_000_000, 200_000_000)),
        Discharge(RINSE, "sewer", Measured("3", "L", 3_000_000_000)),
        WeightReading(
            DRUM,
            Measured("39.9", "kg", 39_900_000_000, 50_000_000),
            uuid5(WORKSHOP, "floor scale"),
            Gauge("Floor scale", 50_000_000, 0, ""),
        ),
        DensityReading(
            BATH,
            Measured("32 °Bé", "degBe", 1_281_923, 3_000),
            uuid5(WORKSHOP, "spindle"),
            Gauge("Spindle", 2_000, 1_000, "2025-11-03"),
        ),
        Reading(
            RINSE,
            "test strip",
            "free cyanide",
            Result("below 1 mg/L", "mg/L", None, 1_000, 500),
            "held for 30 s",
            uuid5(WORKSHOP, "strips"),
            Gauge("Strips, lot 9", 0, 500_000, ""),
        ),
        Filter(BATH, DRUM, None, None, (), Figure(250_000_000, 125_000_000, "assumed"), Figure(0, 0, "assumed")),
        Carbon(
            BATH,
            DRUM,
            Measured("60", "g", 60_000_000),
            None,
            SPENT,
            Figure(120_000_000, 60_000_000, "2 L for each kilogram, assumed"),
            Figure(0, 0, "assumed"),
        ),
        Resin(
            RINSE,
            DRUM,
            None,
            Measured("40", "L", 40_000_000_000),
            (),
            Figure(0, 0, "drained"),
            Figure(990_000, 10_000, "as the supplier says"),
        ),
        Sludge(RINSE, SLUDGE, Measured("1.5", "kg", 1_500_000_000), SPENT),
        CleanOut(RINSE, DRUM, Measured("2", "L", 2_000_000_000), WATER),
        Treatment(
            DRUM,
            (Ingredient(STOCK, Measured("200", "g", 200_000_000), None),),
            RINSE,
            SLUDGE,
            Measured("18", "L", 18_000_000_000, 200_000_000),
            Measured("3", "kg", 3_000_000_000),
            (Dissolved("Cu", Measured("1.8", "mg/L", 1_800, 300)),),
            ("free cyanide",),
        ),
        LevelReading(
            BATH,
            Measured("32 cm", "nL", 9_200_000_000, 50_000_000),
            AIR,
            WATER,
            hot=True,
            marks=(
                LevelMark("30 cm", 300_000_000, 8_600_000_000),
                LevelMark("upper mark", 400_000_000, 11_600_000_000),
            ),
            instrument=uuid5(WORKSHOP, "dip rod"),
            gauge=Gauge("Dip rod", 20_000_000, 0, "2026-02-01"),
        ),
        Analysis(
            BATH,
            "Cu",
            Measured("196", "g/L", 196_000_000, 2_000_000),
            "CuSO4.5H2O",
            datetime(2026, 3, 4, 16, 5, 6, 7, tzinfo=UTC),
            Figure(49_882_000, 509_000, "titration"),
            uuid5(WORKSHOP, "titration"),
            Gauge("Titration with EDTA", 0, 10_000, ""),
        ),
        Acceptance(uuid5(WORKSHOP, "analysis"), BATH, "Cu", Figure(49_882_000, 509_000, "titration")),
        HandOver(DRUM, "collection point, gate 3", Measured("41.5", "kg", 41_500_000_000)),
        Cancellation(uuid5(WORKSHOP, "a mistake"), "the wrong tank"),
        Correction(
            uuid5(WORKSHOP, "an old mistake"),
            BATH,
            (Change("Cu", Measured("12", "g", 12_000_000, 500_000), found=False),),
            "a receipt was written twice",
        ),
        PeriodClosing(None, datetime(2026, 4, 1, tzinfo=UTC), 41, 2, "1a" * 32, "2b" * 32),
        PeriodReopening(uuid5(WORKSHOP, "March"), "the meter was read wrongly"),
        Paper("manifest", 17, "ab" * 32, "cd" * 32),
    )
}


def body_of(event: Event) -> Body:
    """Return an entry around an event."""
    return Body(
        format=1,
        workshop=WORKSHOP,
        sequence=42,
        entry=uuid5(WORKSHOP, event.KIND),
        kind=event.KIND,
        kind_version=event.VERSION,
        occurred_at=datetime(2026, 3, 2, 11, tzinfo=UTC),
        precision="day",
        recorded_at=datetime(2026, 3, 2, 17, 30, 15, 123456, tzinfo=UTC),
        member=uuid5(WORKSHOP, "olga"),
        clearance=Clearance(INCIDENT, ("pH unknown",)) if isinstance(event, Move) else Clearance(ALLOWED),
        payload=encode(event),
        attachments=("0f" * 32, "f0" * 32),
    )


def golden_file(kind: str, version: int) -> Path:
    """Return where the bytes of a kind version are kept."""
    return GOLDEN / f"{kind.replace(' ', '-')}-v{version}.json"


def write_missing() -> None:
    """Write the golden files that are not there yet."""
    for event in EXAMPLES.values():
        path = golden_file(event.KIND, event.VERSION)
        if not path.exists():
            data = canonical.encode_body(body_of(event))
            kept = {"body": data.decode(), "hash": canonical.chain_hash(GENESIS, data).hex()}
            path.write_text(json.dumps(kept, ensure_ascii=False, indent=1) + "\n", encoding="utf-8")


if __name__ == "__main__":
    write_missing()
