"""Instruments, level tables, readings of every kind and how a tank is set up, as a person fills them in."""

from typing import Any
from uuid import uuid4

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from chemicals.process.inputs import ReadingInput
from chemicals.process.instruments import list_instruments_for
from chemicals.process.levels import list_level_marks
from chemicals.process.models import Instrument
from chemicals.process.selectors import get_tank_of
from chemicals.workshop.models import Membership
from compliance.web.reading_plot import draw_readings
from tests.web.conftest import Line, Say, Visitor, text_of
from tests.web.test_lists import rows_of

PNG = b"\x89PNG\r\n\x1a\n" + b"0" * 20


def enter(visit: Visitor, name: str = "Dip rod", measures: str = "level", **said: Any) -> Instrument:
    answer = visit.post("add-instrument", name=name, measures=measures, **said)
    assert answer.status_code == 302, text_of(answer)
    return list_instruments_for(visit.member).get(name=name)


class TestInstruments:
    def test_one_is_entered_shown_and_changed(self, visit: Visitor) -> None:
        row = enter(visit, sd="0.1 L", relative_sd="1 %", calibrated_on="2026-01-05", valid_until="2026-02-01")
        page = text_of(visit.get("instruments"))
        assert "0.1 L + 1 %" in page
        assert "calibration has run out" in page
        form = text_of(visit.get("change-instrument", row.uuid))
        assert 'value="0.1 L"' in form
        assert "What it measures" not in form
        visit.post("change-instrument", row.uuid, name="Old rod", sd="0.2 L", retired="on")
        row.refresh_from_db()
        assert (row.name, row.sd_typed, row.relative_typed, row.retired) == ("Old rod", "0.2 L", "", True)
        assert "retired" in text_of(visit.get("instruments"))
        assert rows_of(visit.get("instruments", query="?as=csv"))[0]["standard uncertainty"] == "0.2 L"

    def test_a_picture_is_kept_and_shown_where_it_is_chosen(self, visit: Visitor, line: Line) -> None:
        row = enter(visit, picture=SimpleUploadedFile("rod.png", PNG, "image/png"))
        assert row.picture is not None
        chosen = text_of(visit.get("record", "level-reading", query=f"?vessel={line.bath.uuid}"))
        address = visit.address("file", row.picture.sha256)
        assert f'<img src="{address}" alt="" loading="lazy"> Dip rod' in chosen
        visit.post("change-instrument", row.uuid, name="Dip rod", no_picture="on")
        row.refresh_from_db()
        assert row.picture is None

    def test_everything_wrong_is_told_under_its_field(self, visit: Visitor) -> None:
        answer = visit.post(
            "add-instrument",
            name="",
            measures="pH",
            sd="often",
            relative_sd="1 %",
            picture=SimpleUploadedFile("rod.txt", b"no picture", "text/plain"),
        )
        assert answer.status_code == 400
        assert set(answer.context["form"].errors) == {"name"}
        again = visit.post("add-instrument", name="Meter", measures="pH", sd="often", relative_sd="1 %")
        assert set(again.context["form"].errors) == {"sd", "relative_sd"}
        file = SimpleUploadedFile("rod.txt", b"no picture", "text/plain")
        third = visit.post("add-instrument", name="Meter", measures="pH", picture=file)
        assert set(third.context["form"].errors) == {"picture"}
        assert not list_instruments_for(visit.member).exists()


class TestReadings:
    def test_a_reading_is_previewed_saved_and_shown_on_the_page_of_the_tank(self, visit: Visitor, filled: Line) -> None:
        enter(visit, "Thermometer", "temperature", sd="0.5 °C")
        row = list_instruments_for(visit.member).get()
        said = {
            "vessel": filled.bath.uuid,
            "quantity": "temperature",
            "result": "75 °F",
            "instrument": row.uuid,
            "key": uuid4(),
        }
        seen = text_of(visit.post("record", "reading", **said, step="preview"))
        assert "75 °F = 23.89 °C ± 0.5 K" in seen
        saved = visit.post("record", "reading", **said, step="save")
        entry = text_of(visit.client.get(saved.url))
        assert "75 °F = 23.89 °C ± 0.5 K" in entry
        assert "Thermometer" in entry
        assert str(row.uuid) not in entry
        page = text_of(visit.get("vessel", filled.bath.uuid))
        assert "23.89 °C ± 0.5 K" in page
        assert "0 minutes ago" in page
        again = text_of(visit.get("record", "reading", query=f"?vessel={filled.bath.uuid}&quantity=temperature"))
        assert f'value="{row.uuid}" id="id_instrument_1" checked' in again

    def test_the_one_used_last_is_chosen_already(self, visit: Visitor, filled: Line, say: Say) -> None:
        row = enter(visit, "Meter", "pH")
        say(ReadingInput(vessel=filled.bath.uuid, quantity="pH", result="4", instrument=row.uuid))
        form = visit.get("record", "reading", query=f"?vessel={filled.bath.uuid}&quantity=pH").context["form"]
        assert form["instrument"].value() == str(row.uuid)
        assert form["quantity"].value() == "pH"

    def test_a_calibration_that_ran_out_is_told_before_saving(self, visit: Visitor, filled: Line) -> None:
        row = enter(visit, "Meter", "pH", valid_until="2020-01-01")
        said = {"vessel": filled.bath.uuid, "quantity": "pH", "result": "4", "instrument": row.uuid}
        page = text_of(visit.post("record", "reading", **said, key=uuid4(), step="preview"))
        assert "The calibration of Meter was valid until 2020-01-01" in page
        assert "Nothing that was recorded speaks against it." in page

    def test_all_of_them_are_listed_and_one_is_plotted(self, visit: Visitor, filled: Line, say: Say) -> None:
        for result in ("4.0", "4.2", "4 to 5"):
            say(ReadingInput(vessel=filled.bath.uuid, quantity="pH", result=result))
        say(ReadingInput(vessel=filled.bath.uuid, quantity="test strip", shows="chlorine", result="<1 mg/L"))
        page = visit.get("readings", filled.bath.uuid)
        assert "below 1 mg/L" in text_of(page)
        assert b"<svg" not in page.content
        one = visit.get("readings", filled.bath.uuid, query="?of=pH&shows=")
        assert one.content.count(b'class="measured"') == 2 * 3  # wide and narrow
        assert [row["as typed"] for row in rows_of(visit.get("readings", filled.bath.uuid, query="?of=pH&as=csv"))] == [
            "4 to 5", "4.2", "4.0",
        ]  # fmt: skip
        nothing = visit.get("readings", filled.rinse.uuid)
        assert "Nothing was read yet." in text_of(nothing)
        assert draw_readings([], width=300, height=200) is None

    @pytest.mark.parametrize("times", [1, 3])
    def test_the_list_asks_as_often_for_three_as_for_one(
        self, times: int, visit: Visitor, filled: Line, say: Say, django_assert_num_queries: Any
    ) -> None:
        for _ in range(times):
            say(ReadingInput(vessel=filled.bath.uuid, quantity="pH", result="4"))
            enter(visit, f"Meter {uuid4()}", "pH")
        with django_assert_num_queries(6):
            visit.get("readings", filled.bath.uuid, query="?of=pH")
        with django_assert_num_queries(4):
            visit.get("instruments")


TABLE = {
    "cold-0-mark": "10 cm", "cold-0-volume": "5 L", "cold-2-mark": "40 cm", "cold-2-volume": "20 L",
    "cold-3-mark": "upper mark", "cold-3-volume": "20 L", "warm-0-mark": "10 cm", "warm-0-volume": "4.9 L",
}  # fmt: skip


class TestLevelTable:
    def test_a_table_is_entered_shown_and_used(self, visit: Visitor, filled: Line) -> None:
        assert visit.post("level-table", filled.bath.uuid, **TABLE).status_code == 302
        assert [(row.mark, row.hot) for row in list_level_marks(filled.bath)] == [
            ("10 cm", False), ("upper mark", False), ("40 cm", False), ("10 cm", True),
        ]  # fmt: skip
        page = text_of(visit.get("vessel", filled.bath.uuid))
        assert "upper mark" in page
        said = {"vessel": filled.bath.uuid, "mark": "32 cm", "key": uuid4()}
        seen = text_of(visit.post("record", "level-reading", **said, step="preview"))
        assert "32 cm = 16.00 ± 0.25 L" in seen
        entry = text_of(visit.client.get(visit.post("record", "level-reading", **said, step="save").url))
        assert "32 cm = 16.00 ± 0.25 L" in entry
        assert "10 cm: 5 L, 40 cm: 20 L" in entry
        rows = rows_of(visit.get("vessel", filled.bath.uuid, query="?list=level_table&as=csv"))
        assert (rows[0]["height or mark"], rows[0]["volume at 20 C (L)"]) == ("10 cm", "5")

    def test_its_form_begins_with_what_is_there(self, visit: Visitor, filled: Line) -> None:
        visit.post("level-table", filled.bath.uuid, **TABLE)
        page = text_of(visit.get("level-table", filled.bath.uuid))
        assert 'value="4.9 L"' in page
        assert 'name="warm-0-mark" value="10 cm"' in page

    def test_what_is_wrong_is_told_in_its_row(self, visit: Visitor, filled: Line) -> None:
        wrong = {**TABLE, "cold-2-volume": "4 L", "warm-1-mark": "10 cm", "warm-1-volume": "5 L"}
        answer = visit.post("level-table", filled.bath.uuid, **wrong)
        assert answer.status_code == 400
        problems = [(problem.target, problem.message) for problem in answer.context["form"].all_problems]
        assert [target for target, _message in problems] == ["id_cold-2-volume", "id_warm-1-mark"]
        assert list_level_marks(filled.bath) == []

    def test_marks_are_asked_first_only_where_there_is_a_table(self, visit: Visitor, filled: Line) -> None:
        form = visit.get("record", "level-reading").context["form"]
        assert {"mark", "hot"} <= form.details
        visit.post("level-table", filled.bath.uuid, **TABLE)
        form = visit.get("record", "level-reading").context["form"]
        assert not {"mark", "hot"} & form.details


class TestSetUp:
    def test_a_bath_is_changed_with_a_note(self, visit: Visitor, owner: Membership, line: Line) -> None:
        form = visit.get("change-tank", line.bath.uuid).context["form"]
        begun = {name: form[name].value() for name in form.fields}
        assert (begun["mark"], begun["metal"], begun["efficiency"]) == ("20 L", "Cu", "100 %")
        said = {name: value for name, value in begun.items() if value is not None}
        answer = visit.post("change-tank", line.bath.uuid, **{**said, "efficiency": "96.5 %", "note": "test panel"})
        assert answer.status_code == 302, text_of(answer)
        tank = get_tank_of(line.bath)
        assert tank is not None
        assert (tank.efficiency, tank.mark, tank.vessel.name) == (965_000, 20 * 10**9, "Copper bath")
        page = text_of(visit.get("vessel", line.bath.uuid))
        assert "Current efficiency: 100 %, now 96.5 %" in page
        assert "test panel" in page
        rows = rows_of(visit.get("vessel", line.bath.uuid, query="?list=tank_changes&as=csv"))
        assert [(row["what"], row["after"]) for row in rows] == [("efficiency", "96.5 %")]

    def test_a_rinse_has_a_mark_alone(self, visit: Visitor, line: Line) -> None:
        assert list(visit.get("change-tank", line.rinse.uuid).context["form"].fields) == ["mark", "note"]
        wrong = visit.post("change-tank", line.rinse.uuid, mark="13 L")
        assert set(wrong.context["form"].errors) == {"mark"}
        assert visit.get("change-tank", line.tub.uuid).status_code == 404
