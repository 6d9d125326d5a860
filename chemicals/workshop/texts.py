"""Names and remarks as people type them: what the journal could not keep is refused where it is typed."""

import unicodedata
from collections.abc import Iterator
from typing import Any

from chemicals.books.canonical import CanonicalError, check_text
from chemicals.workshop.errors import FieldError


def tidy(text: str) -> str:
    """Return a text as it is kept: in one spelling (NFC), without blanks around."""
    return unicodedata.normalize("NFC", text.strip())


def searchable(*texts: str) -> str:
    """Return texts as they are searched: without case and accents, a line each, so that no word spans two of them."""
    lines = (" ".join(unicodedata.normalize("NFKD", text).casefold().split()) for text in texts)
    return "\n".join("".join(char for char in line if not unicodedata.combining(char)) for line in lines if line)


def find_unwritable(value: Any, field: str = "") -> Iterator[FieldError]:
    """Yield an error for every text with control characters, by the path of its field ("held.0.amount")."""
    if isinstance(value, str):
        try:
            check_text(value)
        except CanonicalError as error:
            yield FieldError(field, str(error))
    elif isinstance(value, dict | list | tuple):
        pairs = value.items() if isinstance(value, dict) else enumerate(value)
        for name, part in pairs:
            yield from find_unwritable(part, f"{field}.{name}" if field else str(name))


def find_bad_lines(**lines: str) -> list[FieldError]:
    """Return what is wrong with texts of one line, by field: control characters, line breaks."""
    breaks = [
        FieldError(f, "This holds a line break. Write it in one line.")
        for f, text in lines.items()
        if "\n" in text.strip()
    ]
    return [*find_unwritable(lines), *breaks]
