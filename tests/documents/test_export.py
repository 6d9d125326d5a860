"""The exporter: streamed, in memory that does not grow with the list, and what a file says of itself."""

import csv
import io
import json
import tracemalloc
from collections.abc import Iterable, Iterator
from decimal import Decimal
from itertools import chain
from typing import Any

import pytest
from django.utils import timezone
from openpyxl import load_workbook

from compliance.documents import export
from compliance.documents.export import Column, Table, send
from tests.conftest import NOW

COLUMNS = (
    Column("number", lambda row: row),
    Column("amount (g)", lambda row: Decimal(row) / 10**6),
    Column("text", lambda row: f"what happened as entry {row}"),
)
FEW, MANY = {"csv": 5_000, "xlsx": 1_500, "jsonl": 5_000}, {"csv": 100_000, "xlsx": 15_000, "jsonl": 100_000}
"""Rows whose peaks of memory are compared; XLSX takes fewer, for it takes its time while memory is traced."""


def file_of(rows: Iterable[Any], ending: str, **more: Any) -> bytes:
    """Return a file as it is sent."""
    return send(Table("list", more.pop("columns", COLUMNS), rows, **more), ending).getvalue()


def peak_of(ending: str, count: int) -> int:
    """Return the most memory, in bytes, that was used while a file was sent and thrown away."""
    response = send(Table("list", COLUMNS, range(count)), ending)
    tracemalloc.start()
    for _chunk in response:
        pass
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    return peak


@pytest.mark.parametrize("ending", export.FORMATS)
def test_a_long_list_needs_no_more_memory_than_a_short_one(ending: str) -> None:
    peak_of(ending, 10)  # what is imported on first use does not count
    assert peak_of(ending, MANY[ending]) < peak_of(ending, FEW[ending]) + 200_000


@pytest.mark.parametrize("ending", ["csv", "jsonl"])
def test_rows_are_read_while_the_file_is_sent(ending: str) -> None:
    read: list[int] = []

    def rows() -> Iterator[int]:
        for row in range(100_000):
            read.append(row)
            yield row

    chunks = iter(send(Table("list", COLUMNS, rows()), ending))
    sent = 0
    while sent < 1000:
        sent += len(next(chunks))
    assert 0 < len(read) < 5_000


def test_a_file_that_nobody_waits_for_any_more_reads_no_further(db: None) -> None:
    closed = []

    def rows() -> Iterator[int]:
        try:
            yield from range(100_000)
        finally:
            closed.append(True)

    def opened(rows: Iterator[int]) -> Iterator[int]:
        return chain([next(rows)], rows)

    begun, untouched = (send(Table("list", COLUMNS, opened(rows())), "jsonl") for _ in range(2))
    next(iter(begun))
    begun.close()
    untouched.close()
    assert closed == [True, True]


def test_rows_are_read_in_the_time_zone_of_the_request() -> None:
    columns = [Column("at", lambda row: row)]
    with timezone.override("America/New_York"):
        response = send(Table("list", columns, [NOW]), "csv")
    assert b"2026-03-02T10:00-05:00" in response.getvalue()


def test_json_lines_keep_every_digit_and_unknown_is_null() -> None:
    column = Column("amount", lambda row: row)
    rows = [Decimal("123456789012.345678"), Decimal("1E-9"), 10**17, None, 'a "b"\n=1', True]
    text = file_of(rows, "jsonl", columns=[column]).decode()
    assert text.split("\n")[:-1] == [
        '{"amount":123456789012.345678}',
        '{"amount":0.000000001}',
        '{"amount":100000000000000000}',
        '{"amount":null}',
        '{"amount":"a \\"b\\"\\n=1"}',
        '{"amount":true}',
    ]
    assert json.loads(text.split("\n")[0], parse_float=Decimal)["amount"] == rows[0]


def test_a_file_says_what_it_says_of_itself_before_its_rows() -> None:
    about = {"chain head": 12, "books stand": "all"}
    first, second, headings, row = file_of([7], "csv", about=about).decode("utf-8-sig").splitlines()
    assert (first, second) == ("# chain head: 12", "# books stand: all")
    assert next(csv.reader([headings])) == ["number", "amount (g)", "text"]
    assert row.startswith("7,")
    lines = [json.loads(line) for line in file_of([7], "jsonl", about=about).splitlines()]
    assert lines[0] == {"about": about}
    assert lines[1]["number"] == 7
    book = load_workbook(io.BytesIO(file_of([7], "xlsx", about=about)))
    assert book.sheetnames == ["list", "about"]
    assert [[cell.value for cell in line] for line in book["about"]] == [["chain head", "12"], ["books stand", "all"]]


def test_rows_that_a_sheet_cannot_hold_go_on_the_next_one(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(export, "XLSX_ROWS", 3)
    book = load_workbook(io.BytesIO(file_of(range(7), "xlsx")))
    assert book.sheetnames == ["list", "list 2", "list 3"]
    numbers = [[line[0].value for line in sheet] for sheet in book]
    assert numbers == [["number", 0, 1, 2], ["number", 3, 4, 5], ["number", 6]]


def test_a_text_that_a_cell_cannot_hold_is_not_cut_short() -> None:
    columns = [Column("payload", lambda row: row)]
    for length, whole in ((export.XLSX_TEXT, True), (export.XLSX_TEXT + 1, False)):
        cell = load_workbook(io.BytesIO(file_of(["x" * length], "xlsx", columns=columns))).active["A2"].value
        assert (cell == "x" * length) is whole
        assert whole or "as CSV or as JSON lines" in cell
        assert b"x" * length in file_of(["x" * length], "csv", columns=columns)
