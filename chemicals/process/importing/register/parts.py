"""The composition in one cell: "CuSO4.5H2O 98 %; NaCl < 2 %", or the content alone where a number names the substance.

Where the name ends and the content begins is found by what is known: a name of the register, and a content that can be
read. What could be read in two ways is refused.
"""

import re
from collections.abc import Callable, Iterator
from dataclasses import dataclass

from chemicals.process.importing.table import Cell
from chemicals.process.importing.values import CellError, read_figure
from chemicals.science.content import read_content
from chemicals.science.errors import TextError

EXAMPLE = "CuSO4.5H2O 98 %; NaCl < 2 %"
_GAP = re.compile(r"\s+|(?=[<>≤≥])|(?<=[:=])")
_CONTENT = re.compile(r"[<>≤≥=]*\s*\.?\d")
"""How a content begins."""
_UNFINISHED = re.compile(r"(?:[<>≤≥=‐‑‒–—−-]|\.\.|\bto)$")
"""What begins a range, or an end of one: no name ends so."""


@dataclass(frozen=True)
class Part:
    """A substance by what it was called ("": it was not), and how much of it there is."""

    name: str
    content: str


def split_parts(text: str, decimal: str, is_known: Callable[[str], bool]) -> list[Part]:
    """Return the parts of a composition. Raises CellError."""
    return [_split(part.strip(), decimal, is_known) for part in re.split(r"[;\n]", text) if part.strip()]


def _split(text: str, decimal: str, is_known: Callable[[str], bool]) -> Part:
    if _CONTENT.match(text):
        whole = _read(text, decimal)
        if isinstance(whole, str):
            return Part("", whole)
    pairs = list(dict.fromkeys(_list_pairs(text)))
    read = [(name, _read(content, decimal)) for name, content in pairs]
    found = [Part(name, content) for name, content in read if isinstance(content, str)]
    named = [part for part in found if is_known(part.name)]
    found = [part for part in found if "%" not in part.name]  # two parts without a semicolon between them
    chosen = named or found
    if len(chosen) == 1:
        return chosen[0]
    if chosen:
        ways = " or ".join(f'{part.content} of "{part.name}"' for part in chosen)
        raise CellError(f'"{text}" can be read in two ways: {ways}. Write a colon between substance and content.')
    if is_known(text):
        raise CellError(f'How much of "{text}" is in it? Write it behind the name: {EXAMPLE}.')
    reason = next((f" ({error})" for _, error in read), "")
    raise CellError(f'"{text}" is no substance with its content{reason}. Write them like {EXAMPLE}.')


def _list_pairs(text: str) -> Iterator[tuple[str, str]]:
    """Yield every way to cut a text into a name and the rest; of a colon only that one."""
    name, colon, rest = text.rpartition(":")
    if colon and name.strip():
        yield name.strip(), rest.strip()
        return
    for gap in _GAP.finditer(text):
        name, rest = text[: gap.start()].rstrip(" ="), text[gap.end() :].strip()
        if name and _CONTENT.match(rest) and not _UNFINISHED.search(name):
            yield name, rest


def read_share(cell: Cell, unit: str, decimal: str) -> str:
    """Return a content as it is kept. Raises CellError."""
    figure = read_figure(cell, unit, decimal)
    try:
        read_content(figure)
    except TextError as error:
        raise CellError(error.message) from error
    return figure


def _read(text: str, decimal: str) -> str | CellError:
    """Return a content, or why it is none."""
    try:
        return read_share(text, "", decimal)
    except CellError as error:
        return error
