"""The embedded font, its coverage, and text drawn with it.

Source Sans Pro (SIL Open Font License 1.1) has Greek, Cyrillic, umlauts, subscript and superscript figures, and figures
of equal width in every weight that is used here. It lacks the raised and lowered signs of ions and two typographic
spaces and hyphens; those are drawn from characters it has (`_STAND_INS`). Any other character that it cannot draw is
refused.
"""

import unicodedata
from collections.abc import Iterator
from functools import cache, lru_cache
from pathlib import Path
from typing import Any, NamedTuple

import font_source_sans_pro
from reportlab.pdfbase import pdfmetrics
from reportlab.pdfbase.ttfonts import TTFont

from compliance.documents.errors import FieldError, MissingGlyphError

REGULAR, SEMIBOLD, BOLD = "SourceSansPro", "SourceSansProSemibold", "SourceSansProBold"


class Style(NamedTuple):
    """A weight at a size in points."""

    font: str
    size: float


class Run(NamedTuple):
    """A stretch of text of one size; `rise` is the height above the baseline, both as a share of the font size."""

    text: str
    scale: float
    rise: float


# character -> the character drawn in its place, its share of the font size, its rise
_STAND_INS = {
    "⁺": ("+", 0.62, 0.33),
    "⁻": ("−", 0.62, 0.33),
    "₊": ("+", 0.62, -0.14),
    "₋": ("−", 0.62, -0.14),
    "\u2009": ("\u202f", 1.0, 0.0),
    "\u2011": ("-", 1.0, 0.0),
}


@cache
def register() -> None:
    """Make the three weights known to reportlab, once per process."""
    for name in (REGULAR, SEMIBOLD, BOLD):
        pdfmetrics.registerFont(TTFont(name, str(Path(font_source_sans_pro.font_files_ttf[name]))))


@cache
def _covered() -> frozenset[str]:
    """Characters that every weight can draw."""
    register()
    maps = (pdfmetrics.getFont(name).face.charToGlyph for name in (REGULAR, SEMIBOLD, BOLD))
    shared = frozenset.intersection(*(frozenset(code for code, glyph in each.items() if glyph) for each in maps))
    visible = (chr(code) for code in shared if unicodedata.category(chr(code)) not in {"Cc", "Cf", "Cn", "Co"})
    return frozenset(visible) | _STAND_INS.keys()


def check_glyphs(data: object) -> None:
    """Raise `MissingGlyphError` naming each character that cannot be drawn, with its field; line breaks are allowed."""
    problems = [
        FieldError(path, f"the paper's font cannot draw {_name(char)}: write it in another way")
        for path, text in _strings(data, "")
        for char in dict.fromkeys(text)
        if char != "\n" and char not in _covered()
    ]
    if problems:
        raise MissingGlyphError(problems)


def _name(char: str) -> str:
    shown = f"{char!r} " if char.isprintable() else ""
    return f"{shown}(U+{ord(char):04X} {unicodedata.name(char, 'control character')})"


def _strings(value: object, path: str) -> Iterator[tuple[str, str]]:
    if isinstance(value, str):
        yield path, value
    elif isinstance(value, dict):
        for key, item in value.items():
            yield from _strings(item, f"{path}.{key}" if path else str(key))
    elif isinstance(value, list):
        for index, item in enumerate(value):
            yield from _strings(item, f"{path}[{index}]")


def runs(text: str) -> Iterator[Run]:
    """Split text where a stand-in changes size or rise."""
    plain = ""
    for char in text:
        if char not in _STAND_INS:
            plain += char
            continue
        if plain:
            yield Run(plain, 1.0, 0.0)
            plain = ""
        yield Run(*_STAND_INS[char])
    if plain:
        yield Run(plain, 1.0, 0.0)


def width(text: str, style: Style) -> float:
    """Width of text in points."""
    register()
    return sum(float(pdfmetrics.stringWidth(run.text, style.font, style.size * run.scale)) for run in runs(text))


def draw(canvas: Any, at: tuple[float, float], text: str, style: Style) -> None:
    """Draw one line with the left end of its baseline at `at` (points)."""
    line = canvas.beginText(*at)
    for run in runs(text):
        line.setFont(style.font, style.size * run.scale)
        line.setRise(style.size * run.rise)
        line.textOut(run.text)
    canvas.drawText(line)


@lru_cache(maxsize=8192)  # the same text is measured several times before it is drawn
def wrap(text: str, style: Style, room: float) -> tuple[str, ...]:
    """Break text into lines no wider than `room` points: at spaces, and inside a word only if it alone is wider."""
    lines: list[str] = []
    for paragraph in text.split("\n"):
        line = ""
        for word in paragraph.split():
            joined = f"{line} {word}" if line else word
            if width(joined, style) <= room:
                line = joined
                continue
            if line:
                lines.append(line)
            *full, line = _pieces(word, style, room)
            lines.extend(full)
        lines.append(line)
    return tuple(lines)


def _pieces(word: str, style: Style, room: float) -> list[str]:
    """Cut a word that is wider than the room."""
    pieces = [""]
    for char in word:
        if pieces[-1] and width(pieces[-1] + char, style) > room:
            pieces.append("")
        pieces[-1] += char
    return pieces
