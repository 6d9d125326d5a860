"""Files of past records for tests: CSV texts and XLSX sheets with whatever stands in their cells."""

import io
import zipfile
from collections.abc import Iterable, Sequence
from typing import Any

from openpyxl import Workbook


def xlsx(rows: Iterable[Sequence[Any]], *, formats: dict[str, str] | None = None, others: Sequence[str] = ()) -> bytes:
    """Return a workbook with one sheet of rows; ``formats`` by the cell's name, ``others`` further empty sheets."""
    book = Workbook()
    sheet = book.active
    assert sheet is not None
    for row in rows:
        sheet.append(list(row))
    for name, number_format in (formats or {}).items():
        sheet[name].number_format = number_format
    for title in others:
        book.create_sheet(title)
    file = io.BytesIO()
    book.save(file)
    return file.getvalue()


def lines(*rows: str) -> bytes:
    """Return a CSV file."""
    return "\r\n".join(rows).encode()


def with_part(data: bytes, name: str, change: Any) -> bytes:
    """Return an XLSX file of which one part was changed."""
    file = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(data)) as old, zipfile.ZipFile(file, "w", zipfile.ZIP_DEFLATED) as new:
        for part in old.infolist():
            body = old.read(part)
            new.writestr(part.filename, change(body) if part.filename == name else body)
    return file.getvalue()
