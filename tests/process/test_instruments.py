"""Instruments: what they measure, how sure they are, and what a reading is worth that was made with one."""

from datetime import date
from typing import Any

import pytest
from django_scopes import scope

from chemicals.books.events import Gauge
from chemicals.journal.services import add_attachment
from chemicals.ledger.models import Vessel
from chemicals.process.instruments import (
    InstrumentInput,
    change_instrument,
    create_instrument,
    find_last_instrument,
    get_instrument_for,
    list_instruments_for,
)
from chemicals.process.models import Instrument
from chemicals.workshop.errors import InvalidInputError, NotFoundError
from chemicals.workshop.models import Membership
from compliance.clearance.selectors import preview
from tests.process.shop import G, L, Shop

PNG = b"\x89PNG\r\n\x1a\n" + b"0" * 20
DAY = {"calibrated_on": date(2026, 1, 5), "valid_until": date(2027, 1, 5)}


def enter(shop: Shop, name: str, measures: str, **said: Any) -> Instrument:
    data = InstrumentInput(name=name, measures=measures, **said)
    return create_instrument(actor=shop.member, now=shop.now, instrument=data)


def test_an_instrument_is_kept_as_typed_and_in_base_units(shop: Shop) -> None:
    row = enter(shop, "Sight glass", "level", sd="0.1 L", relative_sd="1 %", **DAY)
    assert (row.sd_typed, row.sd, row.relative_typed, row.relative_sd) == ("0.1 L", L // 10, "1 %", 10_000)
    assert (row.changed_at, row.changed_by) == (shop.now, shop.member)
    thermometer = enter(shop, "Glass thermometer", "temperature", sd="0.9 °F")
    assert thermometer.sd == 500  # a difference, in mK


WRONG: list[tuple[dict[str, Any], dict[str, str]]] = [
    ({"name": ""}, {"name": "cannot stay empty"}),
    ({"name": "Balance"}, {"name": "one of this name already"}),
    ({"measures": "luck"}, {"measures": "not in the list"}),
    ({"sd": "0.1 g", "relative_sd": "much"}, {"sd": "a volume is needed", "relative_sd": "cannot be read"}),
    ({"sd": "-0.1 L"}, {"sd": "is negative"}),
    ({"measures": "analysis", "sd": "1 g/L"}, {"sd": "as a share, such as 2 %"}),
    ({"measures": "temperature", "relative_sd": "1 %"}, {"relative_sd": "means nothing"}),
    ({"calibrated_on": date(2026, 2, 1), "valid_until": date(2026, 1, 1)}, {"valid_until": "before the calibration"}),
]


@pytest.mark.parametrize(("said", "told"), WRONG)
def test_everything_wrong_with_an_instrument_is_said_at_once(
    shop: Shop, said: dict[str, Any], told: dict[str, str]
) -> None:
    enter(shop, "Balance", "weight")
    with pytest.raises(InvalidInputError) as caught:
        enter(shop, **{"name": "Rod", "measures": "level", **said})
    found = {error.field: error.message for error in caught.value.errors}
    assert set(found) == set(told)
    assert {field: words for field, words in told.items() if words not in found[field]} == {}
    assert list_instruments_for(shop.member).count() == 1


def test_a_picture_is_a_picture(shop: Shop) -> None:
    kept = add_attachment(actor=shop.member, now=shop.now, name="rod.png", data=PNG)
    assert enter(shop, "Rod", "level", picture=kept).picture == kept
    sheet = add_attachment(actor=shop.member, now=shop.now, name="rod.pdf", data=b"%PDF-1.7")
    with pytest.raises(InvalidInputError, match="Choose a PNG or JPEG file"):
        enter(shop, "Other rod", "level", picture=sheet)


def test_a_changed_instrument_leaves_what_was_read_before(shop: Shop) -> None:
    row = enter(shop, "Rod", "level", sd="0.1 L")
    entry = shop.record("level-reading", days_ago=1, vessel="Copper", volume="19.2 L", instrument="Rod")
    said = InstrumentInput(name="Rod", measures="level", sd="0.3 L", retired=True)
    change_instrument(actor=shop.member, now=shop.now, row=row, instrument=said)
    assert shop.went(entry, "volume")
    assert (row.sd, row.retired) == (3 * L // 10, True)
    assert list(list_instruments_for(shop.member, "level", retired=False)) == []
    other = InstrumentInput(name="Rod", measures="weight")
    with pytest.raises(InvalidInputError, match="What it measures stays"):
        change_instrument(actor=shop.member, now=shop.now, row=row, instrument=other)


def test_a_stranger_sees_no_instrument(shop: Shop, stranger: Membership) -> None:
    row = enter(shop, "Rod", "level")
    with pytest.raises(NotFoundError):
        get_instrument_for(stranger, row.uuid)
    assert list(list_instruments_for(stranger)) == []


@pytest.mark.parametrize(
    ("measures", "doubt", "verb", "said", "sd"),
    [
        ("level", {"sd": "0.1 L"}, "level-reading", {"vessel": "Copper", "volume": "19 L"}, L // 10),
        (
            "level",
            {"sd": "0.03 L", "relative_sd": "0.2 %"},
            "level-reading",
            {"vessel": "Copper", "volume": "20 L"},
            50 * 10**6,
        ),
        ("level", {"sd": "0.1 L"}, "level-reading", {"vessel": "Copper", "volume": "19 L", "sd": "1 L"}, L),
        ("weight", {"sd": "2 g"}, "weight-reading", {"vessel": "Jar", "mass": "1 kg"}, 2 * G),
        ("density", {"sd": "0.002 g/mL"}, "density-reading", {"vessel": "Copper", "density": "32 °Bé"}, 2_000),
        ("pH", {"sd": "0.05"}, "reading", {"vessel": "Copper", "quantity": "pH", "result": "1.2"}, 50),
        ("analysis", {"relative_sd": "2 %"}, "analysis", {"vessel": "Copper", "metal": "Cu", "result": "50 g/L"}, G),
        ("level", {}, "level-reading", {"vessel": "Copper", "volume": "19 L"}, None),
    ],
)
def test_its_uncertainty_counts_where_nobody_says_one(
    shop: Shop, *, measures: str, doubt: dict[str, str], verb: str, said: dict[str, str], sd: int | None
) -> None:
    row = enter(shop, "The one", measures, calibrated_on=date(2026, 1, 5), **doubt)
    event = shop.event(verb, instrument="The one", **said)
    assert event.instrument == row.uuid
    assert event.gauge == Gauge("The one", row.sd or 0, row.relative_sd or 0, "2026-01-05")
    figure = next(getattr(event, name) for name in ("result", "volume", "mass", "density") if hasattr(event, name))
    assert figure.sd == sd


def test_both_weights_of_a_run_are_as_sure_as_the_balance(shop: Shop) -> None:
    row = enter(shop, "Balance", "weight", sd="0.01 g")
    said = {"route": "Plate", "charge": "1.8 Ah", "instrument": "Balance"}
    event = shop.event("run", weight_before="5.6 g", weight_after="7.7 g", **said)
    assert (event.weight_before.sd, event.weight_after.sd, event.instrument) == (G // 100, G // 100, row.uuid)
    nothing_weighed = shop.event("run", **said)
    assert (nothing_weighed.instrument, nothing_weighed.gauge) == (None, None)


def test_an_instrument_for_something_else_is_refused(shop: Shop) -> None:
    enter(shop, "Balance", "weight")
    told = shop.wrong("level-reading", vessel="Copper", volume="19 L", instrument="Balance")
    assert "Balance is for weight" in told["instrument"]
    told = shop.wrong("reading", vessel="Copper", quantity="pH", result="4", instrument="Balance")
    assert set(told) == {"instrument"}


def test_the_one_used_last_is_found(shop: Shop) -> None:
    first, second = enter(shop, "pH meter", "pH"), enter(shop, "Thermometer", "temperature")
    shop.record("reading", vessel="Copper", quantity="pH", result="1.2", instrument="pH meter")
    shop.record("reading", vessel="Copper", quantity="temperature", result="24 °C", instrument="Thermometer")
    with scope(workshop=shop.member.workshop):
        copper, rinse = (Vessel.objects.get(name=name) for name in ("Copper", "First rinse"))
    assert find_last_instrument(shop.member, copper, "reading", "pH") == first.uuid
    assert find_last_instrument(shop.member, copper, "reading") == second.uuid
    assert find_last_instrument(shop.member, rinse, "reading") is None


def test_a_calibration_that_ran_out_is_a_caution_and_no_refusal(shop: Shop) -> None:
    enter(shop, "Rod", "level", calibrated_on=date(2020, 1, 1), valid_until=date(2021, 1, 1))
    data = shop.read("level-reading", vessel="Copper", volume="19 L", instrument="Rod")
    answer = preview(shop.member, shop.now, data, None).answer
    assert answer.allowed
    assert "Rod" in answer.cautions[0]
    assert "2021-01-01" in answer.cautions[0]
    enter(shop, "New rod", "level", **DAY)
    data = shop.read("level-reading", vessel="Copper", volume="19 L", instrument="New rod")
    assert preview(shop.member, shop.now, data, None).answer.cautions == ()
