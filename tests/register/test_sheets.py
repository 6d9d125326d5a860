"""Safety data sheets: languages, age, and which revision relied on which."""

from datetime import date, datetime
from pathlib import Path

import pytest
from pytest_django import Settings

from chemicals.register.models import ProductRevision
from chemicals.register.selectors import list_revisions_of
from chemicals.register.services import RevisionInput, create_product, keep_sheet, revise_product
from chemicals.register.sheets import KeptSheet, is_old, list_sheets, mark_of, read_language
from chemicals.workshop.models import Membership


@pytest.mark.parametrize(
    ("typed", "tag"),
    [
        ("de", "de"), ("DE", "de"), (" fr-ch ", "fr-CH"), ("pt_BR", "pt-BR"), ("zh-hant-tw", "zh-Hant-TW"),
        ("es-419", "es-419"), ("sl-rozaj", "sl-rozaj"), ("yue", "yue"), ("de-CH-1901", "de-CH-1901"),
    ],
)  # fmt: skip
def test_a_language_tag_in_its_usual_spelling(typed: str, tag: str) -> None:
    """Examples and letter case of RFC 5646 (BCP 47), 2.1.1 and appendix A (memory)."""
    assert read_language(typed) == tag


@pytest.mark.parametrize("typed", ["German", "d", "", "de-", "de-A", "de--CH", "english (UK)"])
def test_what_is_no_language_tag(typed: str) -> None:
    assert read_language(typed) is None


@pytest.mark.parametrize(
    ("sheet_date", "today", "old"),
    [
        (date(2023, 3, 2), date(2026, 3, 2), False),
        (date(2023, 3, 2), date(2026, 3, 3), True),
        (date(2024, 2, 29), date(2027, 3, 1), False),
        (date(2024, 2, 29), date(2027, 3, 2), True),
        (date(2027, 1, 1), date(2026, 1, 1), False),
    ],
)
def test_a_sheet_is_old_after_its_third_birthday(sheet_date: date, today: date, *, old: bool) -> None:
    assert is_old(sheet_date, today, 3) is old


@pytest.fixture
def attachments(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


@pytest.mark.usefixtures("attachments")
def test_the_history_says_which_revisions_had_which_sheet(worker: Membership, now: datetime) -> None:
    one, two = (keep_sheet(actor=worker, now=now, name="s.pdf", data=f"%PDF-1.4 {n}".encode()) for n in (1, 2))
    known = [
        RevisionInput(form="solid"),
        RevisionInput(form="solid", safety_data_sheet=one, sheet_language="en", sheet_date=date(2020, 1, 1)),
        RevisionInput(form="liquid", safety_data_sheet=one, sheet_language="en", sheet_date=date(2020, 1, 1)),
        RevisionInput(form="liquid", safety_data_sheet=two, sheet_language="de"),
        RevisionInput(form="liquid"),
        RevisionInput(form="liquid", safety_data_sheet=two, sheet_language="de"),
    ]
    product = create_product(actor=worker, now=now, name="Salt", supplier="", revision=known[0]).product
    for revision in known[1:]:
        revise_product(actor=worker, now=now, product=product, revision=revision)
    revisions = list(list_revisions_of(product))
    assert list_sheets(revisions) == [
        KeptSheet(two, "de", None, 6, 6),
        KeptSheet(two, "de", None, 4, 4),
        KeptSheet(one, "en", date(2020, 1, 1), 2, 3),
    ]
    marks = [mark_of(row, date(2026, 1, 1), worker.workshop.sheet_years) for row in revisions]
    assert marks == ["undated", "none", "undated", "old", "old", "none"]
    assert mark_of(revisions[3], date(2026, 1, 1), 10) == ""


def test_a_revision_without_a_sheet_is_marked(worker: Membership, now: datetime) -> None:
    made = create_product(actor=worker, now=now, name="Salt", supplier="", revision=RevisionInput(form="solid"))
    assert isinstance(made, ProductRevision)
    assert mark_of(made, now.date(), 3) == "none"
