"""Blocks that know their height for a width and draw themselves: what papers are made of. Lengths in points."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any, Protocol

from compliance.documents import fonts
from compliance.documents.fonts import Style

MM = 72 / 25.4
_LEADING = 1.22  # line distance as a share of the size
_ASCENT = 0.92  # baseline below the top of the line, as a share of the size


class Block(Protocol):
    """A rectangle of print."""

    def height(self, width: float) -> float:
        """Height that the block takes at that width."""

    def draw(self, canvas: Any, x: float, top: float, width: float) -> None:
        """Draw with the upper left corner at (x, top)."""


@dataclass(frozen=True)
class Text:
    """Lines of one style, wrapped; `align` is 0 for left, 0.5 for centred, 1 for right, `grey` 0 for black."""

    text: str
    style: Style
    align: float = 0.0
    grey: float = 0.0

    def height(self, width: float) -> float:
        return len(fonts.wrap(self.text, self.style, width)) * self.style.size * _LEADING

    def draw(self, canvas: Any, x: float, top: float, width: float) -> None:
        canvas.setFillGray(self.grey)
        baseline = top - self.style.size * _ASCENT
        for line in fonts.wrap(self.text, self.style, width):
            indent = self.align * (width - fonts.width(line, self.style)) if self.align else 0.0
            fonts.draw(canvas, (x + indent, baseline), line, self.style)
            baseline -= self.style.size * _LEADING


@dataclass(frozen=True)
class Gap:
    """White space."""

    size: float

    def height(self, width: float) -> float:
        return self.size

    def draw(self, canvas: Any, x: float, top: float, width: float) -> None:
        """Draw nothing."""


@dataclass(frozen=True)
class Rule:
    """A line across, with white above and below it."""

    weight: float = 0.4
    above: float = 2.0
    below: float = 2.0

    def height(self, width: float) -> float:
        return self.above + self.weight + self.below

    def draw(self, canvas: Any, x: float, top: float, width: float) -> None:
        canvas.setStrokeGray(0)
        canvas.setLineWidth(self.weight)
        y = top - self.above - self.weight / 2
        canvas.line(x, y, x + width, y)


@dataclass(frozen=True)
class Picture:
    """A drawing of fixed size: `paint(canvas, x, y)` gets its lower left corner."""

    wide: float
    high: float
    paint: Callable[[Any, float, float], None]

    def height(self, width: float) -> float:
        return self.high

    def draw(self, canvas: Any, x: float, top: float, width: float) -> None:
        self.paint(canvas, x, top - self.high)


@dataclass(frozen=True)
class Stack:
    """Blocks below each other."""

    blocks: Sequence[Block]

    def height(self, width: float) -> float:
        return sum(block.height(width) for block in self.blocks)

    def draw(self, canvas: Any, x: float, top: float, width: float) -> None:
        for block in self.blocks:
            block.draw(canvas, x, top, width)
            top -= block.height(width)


@dataclass(frozen=True)
class Columns:
    """Blocks beside each other. A width above 1 is points, one up to 1 a share of what the others leave."""

    blocks: Sequence[Block]
    widths: Sequence[float]
    gap: float = 6.0

    def _rooms(self, width: float) -> list[float]:
        fixed = sum(each for each in self.widths if each > 1)
        free = width - fixed - self.gap * (len(self.widths) - 1)
        return [each if each > 1 else each * free for each in self.widths]

    def height(self, width: float) -> float:
        rooms = self._rooms(width)
        return max(block.height(room) for block, room in zip(self.blocks, rooms, strict=True))

    def draw(self, canvas: Any, x: float, top: float, width: float) -> None:
        for block, room in zip(self.blocks, self._rooms(width), strict=True):
            block.draw(canvas, x, top, room)
            x += room + self.gap


@dataclass(frozen=True)
class Framed:
    """A block inside a frame."""

    block: Block
    weight: float = 1.2
    pad: float = 4.0

    def height(self, width: float) -> float:
        return self.block.height(width - 2 * self.pad) + 2 * self.pad

    def draw(self, canvas: Any, x: float, top: float, width: float) -> None:
        high = self.height(width)
        canvas.setStrokeGray(0)
        canvas.setLineWidth(self.weight)
        canvas.setLineJoin(0)
        half = self.weight / 2
        canvas.rect(x + half, top - high + half, width - self.weight, high - self.weight)
        self.block.draw(canvas, x + self.pad, top - self.pad, width - 2 * self.pad)


@dataclass(frozen=True)
class Group:
    """Rows that belong together; `again` heads them on every further page that they run over."""

    rows: Sequence[Block]
    again: Block


def paginate(groups: Sequence[Group], width: float, room: float) -> list[list[Block]]:
    """Fill pages of height `room`; a group that fits on one page is not torn, a longer one repeats its head."""
    pages: list[list[Block]] = [[]]
    left = room
    for group in groups:
        whole = sum(row.height(width) for row in group.rows)
        if left < whole <= room:
            pages.append([])
            left = room
        for number, row in enumerate(group.rows):
            high = row.height(width)
            if high > left and pages[-1]:
                pages.append([group.again] if number else [])
                left = room - (group.again.height(width) if number else 0.0)
            pages[-1].append(row)
            left -= high
    return pages
