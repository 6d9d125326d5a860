"""The nine hazard pictograms of the GHS (UN ST/SG/AC.10/30, annex 1): a black symbol on white in a red diamond.

Drawn here from the standard's description of each symbol. A symbol is a list of parts in a box of 100 x 100 with y
downwards; its path language is the part of SVG's that has absolute M, L, C and Z, so that the same text draws in a PDF
and in a page.
"""

import math
import re
from collections.abc import Iterator, Sequence
from typing import Any, Literal, NamedTuple

from compliance.documents.flow import Picture
from compliance.documents.shapes import Pictogram

Ink = Literal["black", "white", "red"]
INKS: dict[Ink, str] = {"black": "#000000", "white": "#ffffff", "red": "#e1001a"}


class Part(NamedTuple):
    """A filled outline, or (with `stroke`, the line's width) a line with round ends and joins."""

    path: str
    ink: Ink = "black"
    stroke: float = 0.0


def _circle(x: float, y: float, rx: float, ry: float | None = None) -> str:
    """A circle or ellipse as four curves; 0.5523 puts the curve's middle on the circle."""
    ry = rx if ry is None else ry
    kx, ky = 0.5523 * rx, 0.5523 * ry
    return (
        f"M {x - rx:.2f} {y:.2f} C {x - rx:.2f} {y - ky:.2f} {x - kx:.2f} {y - ry:.2f} {x:.2f} {y - ry:.2f} "
        f"C {x + kx:.2f} {y - ry:.2f} {x + rx:.2f} {y - ky:.2f} {x + rx:.2f} {y:.2f} "
        f"C {x + rx:.2f} {y + ky:.2f} {x + kx:.2f} {y + ry:.2f} {x:.2f} {y + ry:.2f} "
        f"C {x - kx:.2f} {y + ry:.2f} {x - rx:.2f} {y + ky:.2f} {x - rx:.2f} {y:.2f} Z"
    )


def _star(x: float, y: float, radii: list[float], turn: float = 0.0) -> str:
    """A closed star: one corner per radius, at equal angles from the top, clockwise."""
    step = 2 * math.pi / len(radii)
    angles = (math.radians(turn) + index * step for index in range(len(radii)))
    corners = (f"{x + r * math.sin(a):.2f} {y - r * math.cos(a):.2f}" for a, r in zip(angles, radii, strict=True))
    return "M " + " L ".join(corners) + " Z"


def _placed(path: str, x: float, y: float, degrees: float, mirror: int = 1) -> str:
    """Turn a path about its origin (clockwise on paper), mirror it left to right if asked, and move it to (x, y)."""
    cos, sin = math.cos(math.radians(degrees)), math.sin(math.radians(degrees))
    words = []
    for command, numbers in commands(path):
        words.append(command)
        for px, py in zip(numbers[::2], numbers[1::2], strict=True):
            words.append(f"{x + mirror * (px * cos - py * sin):.2f} {y + px * sin + py * cos:.2f}")
    return " ".join(words)


def commands(path: str) -> Iterator[tuple[str, list[float]]]:
    """The path's commands with their numbers."""
    for command, numbers in re.findall(r"([MLCZ])([^MLCZ]*)", path):
        yield command, [float(number) for number in numbers.split()]


_FRAME = (
    Part("M 50 1 L 99 50 L 50 99 L 1 50 Z", "red"),
    Part("M 50 7.5 L 92.5 50 L 50 92.5 L 7.5 50 Z", "white"),
)
_ACROSS = 98  # the frame's diagonal in the box of 100


def diagonal_of(side: float) -> float:
    """The side of the box, which is what the drawing takes as diagonal, of a diamond whose own sides are `side`."""
    return float(side * 2**0.5 * 100 / _ACROSS)


def _spike(degrees: float, inner: float, outer: float, half: float) -> str:
    """A thin ray that flies away from the bomb's break, widest near it."""
    path = f"M {-half} {-inner} L 0 {-outer} L {half} {-inner} L 0 {-inner + 1.5} Z"
    return _placed(path, 48, 54, degrees)


_BOMB = (
    Part(_circle(42, 60, 15)),
    Part("M 62 62 L 52 56 L 50 61 L 45 54 L 39 57 L 40 49 L 33 40 L 60 36 Z", "white"),
    Part("M 47 51 L 43 40 L 49 46 L 51 34 L 54 45 L 62 37 L 58 48 L 68 47 L 59 53 L 66 58 L 56 56 L 52 51 Z"),
    *(
        Part(_spike(*ray))
        for ray in (
            (-62, 22, 30, 1.3),
            (-38, 21, 31, 1.5),
            (-16, 22, 35, 1.6),
            (6, 24, 33, 1.3),
            (28, 22, 35, 1.7),
            (50, 24, 34, 1.4),
            (72, 22, 35, 1.7),
            (94, 22, 31, 1.3),
            (116, 20, 29, 1.4),
        )
    ),
    Part("M 55 24 L 58.5 22.5 L 60 26.5 L 56.5 28 Z"),
    Part("M 73 38.6 L 76 38.2 L 76.2 41.4 L 73.2 41.2 Z"),
    Part("M 65.5 67.5 L 69.5 66.5 L 70 70.5 L 66.5 71 Z"),
)

_FLAME = (
    Part(
        "M 50 66 C 39 66 32 60 32 50.5 C 32 43 37.5 40 36.5 31 C 40.5 33.5 42.5 37 43 41 C 46.5 35 51 27 48.5 15 "
        "C 56.5 20 60 28 59.5 37 C 61.5 35.5 62.8 33.5 63 30 C 67 35 68.5 43 67.5 51 C 66.5 60.5 60 66 50 66 Z"
    ),
    Part(
        "M 50 62.5 C 45 62.5 41.5 59.5 41.5 55.5 C 41.5 50 46.5 48 47.5 42 C 50.5 45 51.5 48.5 51.5 51.5 "
        "C 53 50.5 54 49 54 46.5 C 57 49 58.5 52.5 58 56 C 57.5 60 54.5 62.5 50 62.5 Z",
        "white",
    ),
)

_FLAME_OVER_CIRCLE = (
    Part(
        "M 40 57.5 C 34.5 53 32 47 33.5 41.5 C 34.5 37 38.8 35 38.3 29 C 41 31 42.5 34 43 37.5 "
        "C 46 32.5 50.5 24.5 48.5 13 "
        "C 55.5 18 58.5 24.5 58 32 C 59.7 31 60.7 29.5 61 26.5 C 65.5 32 68.5 40 66.5 47.5 C 65.5 51.5 63 55 60 57.5 Z"
    ),
    Part(
        "M 45.5 48 C 43.5 42.5 47.2 41 47.5 34.5 C 50.4 37.5 51.4 40.5 51.2 43.2 C 52.6 42.2 53.3 40.7 53.3 38.7 "
        "C 56 41.5 57 44.5 55.5 48 Z",
        "white",
    ),
    Part(_circle(50, 57, 13.8), "white"),
    Part(_circle(50, 57, 12)),
    Part(_circle(50, 57, 7.6), "white"),
    Part("M 37 72 L 63 72 L 63 75.5 L 37 75.5 Z"),
)

_CYLINDER = (
    Part(
        _placed(
            "M -26 -8 L 9 -8 C 15 -8 17 -3.2 20 -3.2 L 22 -3.2 L 22 -4.8 L 28 -4.8 L 28 4.8 L 22 4.8 "
            "L 22 3.2 L 20 3.2 C 17 3.2 15 8 9 8 L -26 8 C -30 8 -30 -8 -26 -8 Z",
            50.5,
            50.5,
            -25,
        )
    ),
)


def _tube(mirror: int) -> tuple[Part, ...]:
    """A test tube, mouth down and outwards, with liquid at its lower side and three drops that fall from it."""
    x, y, turn = 50 - mirror * 19.5, 41.5, 42.0
    glass = "M -5 0 L -5 -18 C -5 -25.5 5 -25.5 5 -18 L 5 0"
    liquid = "M -5 0 L -5 -6 L 5 -16 L 5 0 Z"
    drop = "M 0 -3.8 C 1.5 -1 2.2 0.2 2.2 1.5 C 2.2 4.3 -2.2 4.3 -2.2 1.5 C -2.2 0.2 -1.5 -1 0 -3.8 Z"
    fall = 50 - mirror * 22.0
    return (
        Part(_placed(liquid, x, y, turn, mirror)),
        Part(_placed(glass, x, y, turn, mirror), stroke=2),
        Part(_placed("M -6.6 0.4 L 6.6 0.4", x, y, turn, mirror), stroke=2.2),
        Part(_placed(drop, fall - mirror * 0.5, 51, 0)),
        Part(_placed(drop, fall - mirror * 2.6, 57.2, 0)),
        Part(_placed(drop, fall + mirror * 3.2, 60, 0)),
    )


_CORROSION = (
    *_tube(1),
    *_tube(-1),
    Part(
        "M 21.5 62.5 L 23.5 62.5 C 23.5 66.5 27 64.5 28 67 "
        "C 29 64.7 33.5 66.8 33.5 62.5 L 47.5 62.5 L 47.5 69.5 L 28.5 69.5 Z"
    ),
    Part("M 34.5 59.5 L 36.5 56.5 M 37.5 61 L 40.5 59.5", stroke=1.5),
    Part(
        "M 78.5 62 L 76.5 62.5 C 76.5 66.5 73 64.5 72 67 C 71 64.7 66.5 66.8 66.5 62.5 L 64.8 61.8 L 61.2 57.8 "
        "C 59.4 56.2 57.2 58.2 58.7 60.2 L 60.6 62.9 L 52.8 62.9 C 50 62.9 50 66.5 52.8 66.5 L 54 66.5 "
        "C 51.4 67 51.9 70 54.4 70 L 56 70 C 54.2 70.8 55 73 57.2 73 L 65 73 C 68 73 70.5 70 78.5 62 Z"
    ),
    Part("M 52.5 66.5 L 60.5 66.5 M 54 70 L 60.5 70", "white", 0.9),
    Part("M 65.3 59.2 L 63.8 56.4", stroke=1.5),
)

_CRANIUM = (
    "M 50 18 C 61 18 66.5 25.5 66.5 34.5 C 66.5 40 64.8 44 61.5 47 L 61.5 54.5 "
    "C 61.5 57.5 59.5 59.5 56.5 59.5 L 43.5 59.5 "
    "C 40.5 59.5 38.5 57.5 38.5 54.5 L 38.5 47 C 35.2 44 33.5 40 33.5 34.5 C 33.5 25.5 39 18 50 18 Z"
)

_SKULL = (
    Part("M 30 58 L 62 71.5 M 70 58 L 38 71.5", stroke=4.6),
    *(
        Part(_circle(x, y, 3))
        for x, y in (
            (28.6, 59.8),
            (30.2, 55.4),
            (71.4, 59.8),
            (69.8, 55.4),
            (61.6, 73.8),
            (63.6, 69.8),
            (38.4, 73.8),
            (36.4, 69.8),
        )
    ),
    Part(_CRANIUM, "white", 3),
    Part(_CRANIUM),
    Part(
        "M 36.5 37 C 36.5 32.5 39.5 31.5 42.5 32 C 46 32.6 47.5 35 47 38 C 46.5 41 44 42.5 41 42.5 "
        "C 38 42.5 36.5 40.5 36.5 37 Z",
        "white",
    ),
    Part(
        "M 63.5 37 C 63.5 32.5 60.5 31.5 57.5 32 C 54 32.6 52.5 35 53 38 C 53.5 41 56 42.5 59 42.5 "
        "C 62 42.5 63.5 40.5 63.5 37 Z",
        "white",
    ),
    Part("M 50 41 L 53.2 48 L 50.8 47.2 L 50 48.4 L 49.2 47.2 L 46.8 48 Z", "white"),
    Part("M 43 52.5 L 43 60 M 46.5 53 L 46.5 60 M 50 53.2 L 50 60 M 53.5 53 L 53.5 60 M 57 52.5 L 57 60", "white", 1.1),
)

_BUST = (
    Part(
        "M 50 15 C 56.5 15 59.5 20 59 26 C 58.7 30.5 57 34 54.8 36 L 54.8 39 C 60 42.5 68 42.5 71.8 48 "
        "C 73.5 51 72.5 58 70.5 63 L 65 72 L 65 73.5 L 35 73.5 L 35 72 "
        "L 29.5 63 C 27.5 58 26.5 51 28.2 48 C 32 42.5 40 42.5 45.2 39 L 45.2 36 "
        "C 43 34 41.3 30.5 41 26 C 40.5 20 43.5 15 50 15 Z"
    ),
    Part(_star(50, 56.5, [15.5, 4, 10, 4, 15.5, 4, 10, 4, 15.5, 4, 10, 4, 15.5, 4, 10, 4]), "white"),
)

_FISH = (
    "M 17 0.5 C 13 -5.5 3 -7.5 -8 -1.8 L -16 -6.5 L -13.8 0 L -16.5 6 L -8 2 C -4 4.2 -1 5.2 2 5.8 L 1 9 L 8 6 "
    "C 12 5 15 3 17 0.5 Z"
)
_ENVIRONMENT = (
    Part("M 34.5 58 C 37 50 37.5 42 37 34 L 38 34 C 39 42 40 51 42.5 58 Z"),
    Part("M 37.5 44 L 37.5 23", stroke=2.2),
    Part("M 38 46 L 48 35 L 49 25 M 47.8 35.2 L 56 31", stroke=2),
    Part("M 37.5 48 L 28 40 L 22.5 42 M 28 40 L 26.5 34.5 M 37.5 35 L 32 28.5 M 37.5 31 L 43 24.5", stroke=1.7),
    Part("M 18.5 57.5 L 47 57.5 C 43 60 47.5 63 43.5 65.5 C 40.5 68 46 70.5 43 74 L 35.5 74 Z"),
    Part(_placed(_FISH, 62, 57.5, 12), "white", 3),
    Part(_placed(_FISH, 62, 57.5, 12)),
    Part(_placed("M 10 1 L 13 4 M 13 1 L 10 4", 62, 57.5, 12), "white", 0.9),
    Part(_placed("M 7 -5 C 5.5 -2 5.5 2 7 5", 62, 57.5, 12), "white", 0.9),
    Part("M 49 69.5 C 51 67.5 53 67.5 55 69.5 C 57 71.5 59 71.5 61 69.5 C 63 67.5 65 67.5 67 69.5", stroke=1.8),
    Part("M 48.5 75 C 50 73.3 52 73.3 53.5 75 C 55 76.7 57 76.7 58.5 75", stroke=1.8),
)

_EXCLAMATION = (
    Part(
        "M 50 20 C 56 20 57.8 24 57.3 30 L 54.4 58 C 54 62 52.3 63.5 50 63.5 C 47.7 63.5 46 62 45.6 58 L 42.7 30 "
        "C 42.2 24 44 20 50 20 Z"
    ),
    Part(_circle(50, 73, 5.8)),
)

SYMBOLS: dict[Pictogram, tuple[Part, ...]] = {
    "GHS01": _BOMB,
    "GHS02": (*_FLAME, Part("M 34 70 L 66 70 L 66 74 L 34 74 Z")),
    "GHS03": _FLAME_OVER_CIRCLE,
    "GHS04": _CYLINDER,
    "GHS05": _CORROSION,
    "GHS06": _SKULL,
    "GHS07": _EXCLAMATION,
    "GHS08": _BUST,
    "GHS09": _ENVIRONMENT,
}


def parts(code: Pictogram) -> tuple[Part, ...]:
    """Frame and symbol in drawing order."""
    return _FRAME + SYMBOLS[code]


def draw_pictogram(canvas: Any, code: Pictogram, at: tuple[float, float], diagonal: float) -> None:
    """Draw the diamond in a square of `diagonal` points whose lower left corner is `at`.

    A document holds each symbol once; every further one is a reference to it.
    """
    if not canvas.hasForm(code):
        canvas.beginForm(code, 0, 0, 100, 100)
        _draw_parts(canvas, code)
        canvas.endForm()
    scale = diagonal / 100
    canvas.saveState()
    canvas.transform(scale, 0, 0, scale, *at)
    canvas.doForm(code)
    canvas.restoreState()


def _draw_parts(canvas: Any, code: Pictogram) -> None:
    """Draw in a box of 100 x 100 with y upwards, as PDF counts."""
    canvas.transform(1, 0, 0, -1, 0, 100)
    canvas.setLineCap(1)
    canvas.setLineJoin(1)
    for part in parts(code):
        canvas.setFillColor(INKS[part.ink])
        canvas.setStrokeColor(INKS[part.ink])
        canvas.setLineWidth(part.stroke)
        canvas.drawPath(
            _pdf_path(canvas, part.path), stroke=int(part.stroke > 0), fill=int(not part.stroke), fillMode=1
        )


def _pdf_path(canvas: Any, path: str) -> Any:
    drawn = canvas.beginPath()
    verbs = {"M": drawn.moveTo, "L": drawn.lineTo, "C": drawn.curveTo, "Z": drawn.close}
    for command, numbers in commands(path):
        verbs[command](*numbers)
    return drawn


def pictogram_rows(codes: Sequence[Pictogram], diagonal: float, per_row: int) -> list[Picture]:
    """The diamonds side by side, in as few rows as `per_row` allows and those of equal length."""
    rows = math.ceil(len(codes) / max(1, per_row))
    length = math.ceil(len(codes) / max(1, rows))
    return [_row(codes[start : start + length], diagonal) for start in range(0, len(codes), max(1, length))]


def _row(codes: Sequence[Pictogram], diagonal: float) -> Picture:
    def paint(canvas: Any, x: float, y: float) -> None:
        for number, code in enumerate(codes):
            draw_pictogram(canvas, code, (x + number * diagonal, y), diagonal)

    return Picture(diagonal * len(codes), diagonal, paint)
