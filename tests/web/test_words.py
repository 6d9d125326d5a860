"""Words and figures of the pages, and the exporter."""

from datetime import UTC, datetime
from decimal import Decimal

import pytest
from django.test import RequestFactory
from django.utils import timezone

from chemicals.books.events import CURRENT
from chemicals.books.fold.state import Finding, Transfer
from compliance.web import words
from compliance.web.export import Column, grams, wanted_file
from compliance.web.words import Ends, Follows

ENDS = Ends({"a": "Copper bath", "b": "Rinse"})


@pytest.mark.parametrize(
    ("base", "sd", "component", "text"),
    [
        (None, 5, "Cu", "unknown"),
        (0, 0, "Cu", "0 g"),
        (830_000_000, 0, "Cu", "830 g"),
        (604_800, 0, "Cu", "0.6048 g"),
        (60_480, 0, "Cu", "60.48 mg"),
        (604_800, 190_000, "Cu", "0.60 ± 0.19 g"),
        (830_000, 20_000, "Cu", "0.830 ± 0.020 g"),
        (763_538_490, 4_100_000, "Cu", "763.5 ± 4.1 g"),
        (0, 30_000, "Cu", "0 ± 30 mg"),
        (20 * 10**9, 16 * 10**6, "volume", "20.000 ± 0.016 L"),
        (10**7, 3 * 10**6, "volume", "10.0 ± 3.0 mL"),
        (2_500_000_000, 50_000_000, "acid", "2500 ± 50 mmol"),
        (1_200, 0, "free cyanide", "0.0012 mmol"),
        (1_500_000, 0, "Na2SO4", "1.5 g"),
    ],
)
def test_an_amount_ends_where_its_uncertainty_ends_both_in_one_unit(
    base: int | None, sd: int, component: str, text: str
) -> None:
    assert words.with_uncertainty(base, sd, component) == text


def test_one_digit_is_left_of_what_its_uncertainty_drowns() -> None:
    assert words.with_uncertainty(500, 120_000, "Cu") == "0.0005 ± 0.12 g"


def test_components_go_by_the_names_that_people_use() -> None:
    named = [words.component_name(code) for code in ("Cu", "volume", "gross mass", "", "acid", "Na2SO4")]
    assert named == ["copper", "liquid", "weight in all", "anything else", "acid", "Na2SO4"]


def test_every_kind_of_entry_has_a_name() -> None:
    assert set(words.KINDS) == set(CURRENT)


def test_what_came_and_what_left_carry_a_sign() -> None:
    assert [words.signed(base, 0, "Cu") for base in (2_000_000, -2_000_000, 0, None)] == [
        "+2 g",
        "−2 g",
        "0 g",
        "unknown",
    ]


def test_movements_are_sentences_metals_first() -> None:
    liquid = Transfer("volume", "a", "b", 10**7, 0, "assumed")
    metal = Transfer("Cu", "a", "parts", 830_000, 20_000, "computed")
    follows = Follows.of([liquid, metal], ENDS)
    assert follows.metals == ["0.830 ± 0.020 g copper goes from Copper bath to parts, computed."]
    assert follows.others == ["10 mL liquid goes from Copper bath to Rinse, assumed."]


def test_a_finding_says_where_and_of_what() -> None:
    said = words.finding(Finding("negative-content", "Cu", "a", "a"), ENDS)
    assert said.startswith("Copper bath, copper: The books hold less than nothing here")


def test_findings_that_are_the_same_at_the_same_place_are_one_sentence() -> None:
    found = [Finding("unknown-amount", code, "a", "b") for code in ("Cu", "volume")]
    found += [Finding("unknown-amount", "Cu", "b", "parts"), Finding("unknown-contents", "", "a", "b")]
    said = words.findings(found, ENDS)
    assert [sentence.partition(":")[0] for sentence in said] == [
        "Copper bath → Rinse, copper, liquid",
        "Rinse → parts, copper",
        "Copper bath → Rinse, anything else",
    ]


def test_a_day_is_shown_as_a_day() -> None:
    noon = datetime(2026, 3, 2, 11, 0, tzinfo=UTC)
    with timezone.override("Europe/Berlin"):
        assert words.moment(noon) == "2026-03-02 12:00"
        assert words.moment(noon, "day") == "2026-03-02"


def test_a_file_keeps_text_text_and_unknown_empty(rf: RequestFactory) -> None:
    rows = ['=HYPERLINK("x")', "-5", "plain, with comma", None, grams(-1_500_000), True]
    response = wanted_file(
        rf.get("/?as=csv"), about="of-today", cells=([Column("cell", lambda row: row)], lambda: rows)
    )
    assert response is not None
    assert response.headers["Content-Disposition"] == 'attachment; filename="cells-of-today.csv"'
    assert response.getvalue().decode("utf-8-sig").splitlines() == [
        "cell",
        '"\'=HYPERLINK(""x"")"',
        "'-5",
        '"plain, with comma"',
        '""',
        "-1.5",
        "True",
    ]
    assert grams(1) == Decimal("0.000001")
