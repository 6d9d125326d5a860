"""Safety data sheets: their language, their age, and which revisions of a product relied on which."""

import re
from collections.abc import Iterable
from dataclasses import dataclass
from datetime import date, timedelta
from typing import Literal

from chemicals.journal.models import Attachment
from chemicals.register.models import ProductRevision

Mark = Literal["", "none", "undated", "old"]
"""What is to be said of a sheet: nothing; there is none; its date is not known; it is older than the workshop likes."""

_LANGUAGE = re.compile(
    r"(?P<language>[a-z]{2,3}(?:-[a-z]{3})?)(?:-(?P<script>[a-z]{4}))?(?:-(?P<region>[a-z]{2}|[0-9]{3}))?"
    r"(?P<variants>(?:-(?:[a-z0-9]{5,8}|[0-9][a-z0-9]{3}))*)",
    re.IGNORECASE,
)
"""The parts of BCP 47 (RFC 5646, 2.1) that name a language as it is written somewhere; extensions are left out."""


def read_language(text: str) -> str | None:
    """Return a language tag in its usual spelling (RFC 5646, 2.1.1): de, fr-CH, zh-Hant. None if it is no tag."""
    found = _LANGUAGE.fullmatch(text.strip().replace("_", "-"))
    if found is None:
        return None
    script, region = (found["script"] or "").title(), (found["region"] or "").upper()
    variants = found["variants"].lower().strip("-")
    return "-".join(part for part in (found["language"].lower(), script, region, variants) if part)


def is_old(sheet_date: date, today: date, years: int) -> bool:
    """Say whether a sheet is older than so many years; one of a 29 February turns old after a 1 March."""
    try:
        return today > sheet_date.replace(year=sheet_date.year + years)
    except ValueError:
        return today > date(sheet_date.year + years, 3, 1)


def first_fine_day(today: date, years: int) -> date:
    """Return the earliest date of a sheet that is not older than so many years: what is older, `is_old` says so."""
    earliest = date(today.year - years, today.month, min(today.day, 28))
    return next(day for day in (earliest + timedelta(days=n) for n in range(-2, 5)) if not is_old(day, today, years))


def mark_of(revision: ProductRevision, today: date, years: int) -> Mark:
    """Return what is to be said of a revision's sheet on a day; ``years`` is the workshop's own figure."""
    if revision.safety_data_sheet_id is None:
        return "none"
    if revision.sheet_date is None:
        return "undated"
    return "old" if is_old(revision.sheet_date, today, years) else ""


@dataclass(frozen=True)
class KeptSheet:
    """A sheet with the first and the last of the revisions in a row that relied on it."""

    sheet: Attachment
    language: str
    day: date | None
    first: int
    last: int


def list_sheets(revisions: Iterable[ProductRevision]) -> list[KeptSheet]:
    """Return which sheet stood behind which revisions, the newest first; ``revisions`` likewise."""
    found: list[KeptSheet] = []
    for row in revisions:
        if row.safety_data_sheet is None:
            continue
        last = found[-1] if found else None
        said = (row.safety_data_sheet, row.sheet_language, row.sheet_date)
        if last and last.first == row.number + 1 and (last.sheet, last.language, last.day) == said:
            found[-1] = KeptSheet(*said, first=row.number, last=last.last)
        else:
            found.append(KeptSheet(*said, first=row.number, last=row.number))
    return found
