"""The day sheets of a week: typed in from a paper, with a photograph of it, all or none; and the paper."""

import re
from datetime import datetime, timedelta
from typing import Any
from uuid import uuid4

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from pytest_django import Settings

from chemicals.journal.selectors import read_body
from tests.web.conftest import Line, Visitor, text_of
from tests.web.grids import charge, entries, field, loads

pytestmark = pytest.mark.django_db
PNG = b"\x89PNG\r\n\x1a\n made up"


class TestWeek:
    """The sheets of a week, and their paper."""

    def monday(self, now: datetime) -> str:
        return (now.date() - timedelta(days=now.weekday() + 7)).isoformat()

    def post(self, visit: Visitor, now: datetime, /, **said: object) -> Any:
        return visit.post("week-sheet", **{"key": uuid4(), "first": self.monday(now), **said})

    def days(self, now: datetime) -> list[str]:
        first = datetime.fromisoformat(self.monday(now)).date()
        return [(first + timedelta(days=number)).isoformat() for number in range(7)]

    def test_each_day_that_is_filled_in_becomes_a_sheet_with_the_photo(
        self, visit: Visitor, filled: Line, now: datetime, settings: Settings, tmp_path: Any
    ) -> None:
        settings.ATTACHMENTS = tmp_path
        monday, tuesday = self.days(now)[:2]
        said = {"key": uuid4(), loads(filled, f"{monday}-"): "4", charge(filled, f"{tuesday}-"): "8"}
        photo = SimpleUploadedFile("week.png", PNG, "image/png")
        preview = text_of(self.post(visit, now, **said, photo=photo, step="preview"))
        pairs = dict(re.findall(r'<input type="hidden" name="([^"]+)" value="([^"]*)">', preview))
        assert len(pairs["photo_sha256"]) == 64
        assert "week.png" in text_of(visit.post("week-sheet", **pairs, step="back"))
        assert visit.post("week-sheet", **pairs, step="save").status_code == 302
        made = entries(visit, "day sheet")
        assert [(entry.precision, entry.occurred_at.date().isoformat()) for entry in made] == [
            ("day", monday),
            ("day", tuesday),
        ]
        assert [read_body(entry).attachments for entry in made] == [(pairs["photo_sha256"],)] * 2
        visit.post("week-sheet", **pairs, step="save")
        assert len(entries(visit, "day sheet")) == 2

    def test_a_wrong_day_spoils_the_week_and_no_number_is_lost(
        self, visit: Visitor, filled: Line, now: datetime
    ) -> None:
        monday, tuesday = self.days(now)[:2]
        said = {loads(filled, f"{monday}-"): "4", charge(filled, f"{tuesday}-"): "8 L"}
        page = self.post(visit, now, **said, step="save")
        assert page.status_code == 400
        assert f'<a href="#id_{charge(filled, f"{tuesday}-")}">' in text_of(page)
        assert 'value="4"' in field(text_of(page), loads(filled, f"{monday}-"))
        assert entries(visit, "day sheet") == []

    def test_a_file_that_is_no_picture_is_refused(self, visit: Visitor, filled: Line, now: datetime) -> None:
        said = {loads(filled, f"{self.days(now)[0]}-"): "4", "photo": SimpleUploadedFile("week.txt", b"four racks")}
        page = self.post(visit, now, **said, step="save")
        assert page.status_code == 400
        assert '<a href="#id_photo">' in text_of(page)
        assert entries(visit, "day sheet") == []

    def test_days_to_come_are_not_asked_and_sheets_that_are_there_are_shown(
        self, visit: Visitor, filled: Line, now: datetime
    ) -> None:
        self.post(visit, now, **{loads(filled, f"{self.days(now)[0]}-"): "4"}, step="save")
        page = text_of(visit.get("week-sheet", query=f"?first={self.days(now)[3]}"))
        assert page.count("A day sheet is recorded already") == 1
        assert "Still to come" not in page
        to_come = 6 - now.weekday()
        assert text_of(visit.get("week-sheet")).count("Still to come") == to_come
        assert "comes on top" in text_of(
            self.post(visit, now, **{loads(filled, f"{self.days(now)[0]}-"): "1"}, step="preview")
        )

    @pytest.mark.parametrize("first", ["soon", "9999-01-01", "0001-01-01", "", "2026-99-99"])
    def test_an_address_that_is_no_week_shows_this_one(self, visit: Visitor, filled: Line, first: str) -> None:
        assert text_of(visit.get("week-sheet", query=f"?first={first}")).count("<legend>") == 7
        assert visit.get("week-paper", query=f"?first={first}").status_code == 200

    def test_the_paper_has_the_rows_of_the_sheet_and_says_that_it_is_no_record(
        self, visit: Visitor, filled: Line
    ) -> None:
        page = text_of(visit.get("week-paper"))
        assert "Copper line: Small rack" in page
        assert "Copper bath, Ah" in page
        assert "has no number and is no record" in page
