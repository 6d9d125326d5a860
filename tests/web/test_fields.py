"""Fields: amounts as typed, moments of a zone, text that can be recorded."""

from zoneinfo import ZoneInfo

import pytest
from django.core.exceptions import ValidationError

from compliance.web.forms.fields import AmountField, LineField, MomentField, parse_amount

BERLIN = ZoneInfo("Europe/Berlin")


def refusal(typed: str, *dimensions: str) -> str:
    with pytest.raises(ValidationError) as caught:
        parse_amount(typed, dimensions)
    return str(caught.value.messages[0])


def test_an_amount_is_taken_in_the_dimension_that_it_fits() -> None:
    assert parse_amount("2.5 gal", ["mass", "volume"]).base == 9_463_529_460
    assert parse_amount("500 g", ["mass", "volume"]).dimension == "mass"


def test_1_500_is_refused_with_both_ways_to_write_it() -> None:
    assert refusal("1,500 g", "mass") == '"1,500" is ambiguous: write 1500 or 1.5.'
    assert refusal("1,500 L", "mass", "volume") == '"1,500" is ambiguous: write 1500 or 1.5.'


def test_the_most_telling_reason_wins() -> None:
    assert "is a current" in refusal("3 A", "volume")
    assert refusal("-3 L", "mass", "volume") == '"-3 L" is negative: write zero or more.'


def test_a_unit_that_is_none_is_refused_with_those_of_every_dimension_that_fits() -> None:
    told = refusal("20 bottles", "volume", "mass")
    assert " L," in told
    assert "kg" in told


def test_what_is_too_long_is_told_how_long_it_may_be() -> None:
    with pytest.raises(ValidationError, match=r"This is too long\. Write it in at most 5 characters\."):
        LineField(max_length=5).clean("bottles")


def test_a_field_that_may_stay_empty_cleans_to_nothing() -> None:
    assert AmountField(["volume"], required=False).clean(" ") is None
    with pytest.raises(ValidationError, match=r"This is needed\."):
        AmountField(["volume"]).clean("")


def test_the_example_stands_in_the_help() -> None:
    assert AmountField(["volume"], example="20 L", help_text="Read it.").help_text == "Read it. For example 20 L."
    assert AmountField(["volume"], example="20 L", help_text="Such as 20 L.").help_text == "Such as 20 L."


def test_line_breaks_have_one_spelling_and_control_characters_none() -> None:
    assert LineField(lines=3).clean("one\r\ntwo") == "one\ntwo"
    with pytest.raises(ValidationError, match=r"U\+0007"):
        LineField().clean("bell\x07")


def moment(day: str, clock: str = "", which: str = "") -> object:
    return MomentField(BERLIN, required=False).clean([day, clock, which])


def test_a_day_alone_is_known_to_the_day() -> None:
    assert (
        str(moment("2026-03-02"))
        == "Occurred(at=datetime.datetime(2026, 3, 2, 11, 0, tzinfo=datetime.timezone.utc), precision='day')"
    )


def test_nothing_written_means_now() -> None:
    assert moment("") is None


def test_a_time_alone_is_of_today() -> None:
    assert getattr(moment("", "08:15"), "at").isoformat() == "2026-03-02T07:15:00+00:00"  # noqa: B009


def test_the_hour_that_came_twice_is_asked() -> None:
    with pytest.raises(ValidationError, match="came twice"):
        moment("2026-10-25", "02:30")
    first, second = (moment("2026-10-25", "02:30", which) for which in ("first", "second"))
    assert [getattr(each, "at").hour for each in (first, second)] == [0, 1]  # noqa: B009


def test_the_hour_that_never_was_is_refused() -> None:
    with pytest.raises(ValidationError, match="did not exist"):
        moment("2026-03-29", "02:30")


def test_the_choice_between_two_hours_is_shown_only_where_there_are_two() -> None:
    widget = MomentField(BERLIN).widget
    assert "second time" in widget.render("when", ["2026-10-25", "02:30", ""], {"id": "id_when"})
    assert "second time" not in widget.render("when", ["2026-10-25", "04:30", ""], {"id": "id_when"})
