"""The flow picture of a balance: where a metal came from and went, the width of a line by its amount.

Two drawings of the same flows: columns from left to right for a wide page, one list with arcs for a phone. A drawing is
plain geometry; a template writes it as SVG.
"""

from collections import defaultdict
from dataclasses import dataclass

from chemicals.balance.selectors import BookBalance, Flow
from chemicals.ledger.models import VesselKind
from compliance.web.words import BOUNDARIES, amount

COLUMN = {VesselKind.STOCK: 1, VesselKind.ANODE: 1, VesselKind.BATH: 2, VesselKind.RINSE: 3, VesselKind.WASTE: 4}
LAST_COLUMN = 5
BOX_WIDTH, BOX_HEIGHT, GAP, ROW = 150, 40, 70, 64
LIST_WIDTH, LIST_BOX, LIST_ROW = 350, 170, 52
THICKEST, THINNEST = 26.0, 1.5
LONGEST_NAME = 20


@dataclass(frozen=True)
class Node:
    """A place in the picture: a vessel, or a boundary on its left or right edge."""

    name: str
    column: int
    is_boundary: bool


@dataclass(frozen=True)
class Box:
    """A drawn place; texts stand at ``text_x``."""

    node: Node
    x: int
    y: int
    width: int
    height: int

    @property
    def middle(self) -> int:
        """Return the height of the text's base line."""
        return self.y + self.height // 2 + 5

    @property
    def label(self) -> str:
        """Return the name, cut if it is long."""
        name = self.node.name
        return name if len(name) <= LONGEST_NAME else name[: LONGEST_NAME - 1] + "…"

    @property
    def centre(self) -> int:
        """Return the middle across."""
        return self.x + self.width // 2


@dataclass(frozen=True)
class Line:
    """A drawn flow: path, width, arrow head, and what it says."""

    path: str
    width: str
    head: str
    says: str
    unknown: bool


@dataclass(frozen=True)
class Drawing:
    """A picture, ready for the template."""

    width: int
    height: int
    boxes: tuple[Box, ...]
    lines: tuple[Line, ...]


Pairs = list[tuple[Node, Node, Flow]]


def draw_wide(balance: BookBalance) -> Drawing:
    """Return the picture in columns: sources, stock, baths, rinses, waste, where it went."""
    pairs = _pairs(balance)
    columns: dict[int, list[Node]] = defaultdict(list)
    for node in _nodes(pairs):
        columns[node.column].append(node)
    high = max((len(column) for column in columns.values()), default=0) * ROW
    boxes: dict[Node, Box] = {}
    for number, key in enumerate(sorted(columns)):
        top = (high - len(columns[key]) * ROW) // 2 + (ROW - BOX_HEIGHT) // 2
        for row, node in enumerate(columns[key]):
            boxes[node] = Box(node, number * (BOX_WIDTH + GAP), top + row * ROW, BOX_WIDTH, BOX_HEIGHT)
    lines = [_across(boxes[one], boxes[other], flow, _thickness(flow, pairs)) for one, other, flow in pairs]
    return Drawing(max(0, len(columns) * (BOX_WIDTH + GAP) - GAP), high, tuple(boxes.values()), tuple(lines))


def draw_narrow(balance: BookBalance) -> Drawing:
    """Return the picture as a list with arcs at its right side."""
    pairs = _pairs(balance)
    nodes = _nodes(pairs)
    boxes = {node: Box(node, 0, row * LIST_ROW + 6, LIST_BOX, BOX_HEIGHT) for row, node in enumerate(nodes)}
    lines = [_arc(boxes[one], boxes[other], flow, _thickness(flow, pairs) / 2) for one, other, flow in pairs]
    return Drawing(LIST_WIDTH, len(nodes) * LIST_ROW, tuple(boxes.values()), tuple(lines))


def _pairs(balance: BookBalance) -> Pairs:
    kinds = {row.vessel.name: VesselKind(row.vessel.kind) for row in balance.vessels}

    def end(name: str, between_vessels: bool, column: int) -> Node:  # noqa: FBT001  (a fact of the flow)
        if name in kinds and (between_vessels or name not in BOUNDARIES):
            return Node(name, COLUMN[kinds[name]], is_boundary=False)
        return Node(str(BOUNDARIES.get(name, name)), column, is_boundary=True)

    return [
        (end(flow.source, flow.between_vessels, 0), end(flow.target, flow.between_vessels, LAST_COLUMN), flow)
        for flow in balance.flows
    ]


def _nodes(pairs: Pairs) -> list[Node]:
    """Return every place once, column by column, the largest first."""
    weight: dict[Node, int] = defaultdict(int)
    for one, other, flow in pairs:
        weight[one] += flow.amount.value or 0
        weight[other] += flow.amount.value or 0
    return sorted(weight, key=lambda node: (node.column, -weight[node], node.name))


def _thickness(flow: Flow, pairs: Pairs) -> float:
    most = max((each.amount.value or 0 for _, _, each in pairs), default=0)
    share = (flow.amount.value or 0) / most if most else 0
    return max(THINNEST, THICKEST * share)


def _across(one: Box, other: Box, flow: Flow, width: float) -> Line:
    """Draw from the right side of a box to the left side of another; backwards it bends out and in."""
    head = max(7.0, width / 2 + 3)
    x1, y1 = one.x + one.width, one.y + one.height / 2
    x2, y2 = other.x - head, other.y + other.height / 2
    bend = max(GAP / 2, (x2 - x1) / 2) if x2 > x1 else GAP
    path = f"M{x1} {y1:.1f}C{x1 + bend:.1f} {y1:.1f} {x2 - bend:.1f} {y2:.1f} {x2:.1f} {y2:.1f}"
    return _line(path, f"M{other.x} {y2:.1f}L{x2:.1f} {y2 - head:.1f}V{y2 + head:.1f}Z", flow, width)


def _arc(one: Box, other: Box, flow: Flow, width: float) -> Line:
    """Draw from the right side of a box to the right side of another, the farther the wider."""
    head = max(6.0, width / 2 + 3)
    down = other.y > one.y
    x, y1 = one.x + one.width, one.y + one.height * (0.7 if down else 0.3)
    y2 = other.y + other.height * (0.3 if down else 0.7)
    reach = min(LIST_WIDTH - LIST_BOX - width, 40 + abs(y2 - y1) * 0.45) * 4 / 3
    path = f"M{x} {y1:.1f}C{x + reach:.1f} {y1:.1f} {x + reach:.1f} {y2:.1f} {x + head:.1f} {y2:.1f}"
    return _line(path, f"M{x} {y2:.1f}L{x + head:.1f} {y2 - head:.1f}V{y2 + head:.1f}Z", flow, width)


def _line(path: str, head: str, flow: Flow, width: float) -> Line:
    ends = (str(BOUNDARIES.get(end, end)) for end in (flow.source, flow.target))
    says = f"{' → '.join(ends)}: {amount(flow.amount.value, 'mass')}"
    return Line(path, f"{width:.1f}", head, says, flow.amount.value is None)
