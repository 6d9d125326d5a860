"""The flow picture of a balance: where a metal came from and went, the width of a line by its amount.

Two drawings of the same flows: columns from left to right for a wide page, one list with arcs for a phone. A drawing is
plain geometry; a template writes it as SVG.
"""

from collections import defaultdict
from dataclasses import dataclass
from textwrap import wrap

from chemicals.balance.selectors import BookBalance, Flow, FlowEnd
from chemicals.ledger.models import Vessel, VesselKind
from compliance.web.words import amount, end_name

COLUMN = {
    VesselKind.STOCK: 1, VesselKind.ANODE: 1, VesselKind.BATH: 2, VesselKind.RINSE: 3, VesselKind.FILTER: 3,
    VesselKind.CARBON: 3, VesselKind.RESIN: 3, VesselKind.RECOVERY_CELL: 3, VesselKind.RACKS: 3, VesselKind.SLUDGE: 4,
    VesselKind.WASTE: 4,
}  # fmt: skip
"""Where each kind of vessel stands, from the left."""
LAST_COLUMN = 5
BOX_WIDTH, BOX_HEIGHT, GAP, ROW = 150, 40, 70, 64
LIST_WIDTH, LIST_BOX, LIST_ROW = 350, 170, 52
THICKEST, THINNEST, LANE = 26.0, 1.5, 8.0
LONGEST_LINE, TEXT_LINE = 20, 16


@dataclass(frozen=True)
class Node:
    """A place in the picture: a vessel, or a boundary on its left or right edge."""

    name: str
    column: int
    is_boundary: bool


@dataclass(frozen=True)
class Box:
    """A drawn place; texts stand in its middle."""

    node: Node
    x: int
    y: int
    width: int
    height: int

    @property
    def label(self) -> list[tuple[int, str]]:
        """Return the name as lines, (height of the base line, text); what does not fit in two is cut."""
        texts = wrap(self.node.name, LONGEST_LINE, max_lines=2, placeholder="…")
        first = self.y + self.height // 2 + 5 - TEXT_LINE * (len(texts) - 1) // 2
        return [(first + number * TEXT_LINE, text) for number, text in enumerate(texts)]

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
    """Return the picture in columns: sources, stock, baths, rinses, waste, where it went.

    A flow that skips a column runs below all boxes, in a lane of its own: it must not seem to pass through a vessel.
    """
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
    lines, lane = [], float(high)
    for one, other, flow in pairs:
        width, start, end = _thickness(flow, pairs), boxes[one], boxes[other]
        if start.x == end.x:
            lines.append(_arc(start, end, flow, width, GAP * 0.8))
        elif end.x - start.x == BOX_WIDTH + GAP:
            lines.append(_across(start, end, flow, width))
        else:
            lane += width / 2 + LANE
            lines.append(_below(start, end, flow, width, lane))
            lane += width / 2
    wide = max(0, len(columns) * (BOX_WIDTH + GAP) - GAP)
    return Drawing(wide, int(lane + LANE), tuple(boxes.values()), tuple(lines))


def draw_narrow(balance: BookBalance) -> Drawing:
    """Return the picture as a list with arcs at its right side."""
    pairs = _pairs(balance)
    nodes = _nodes(pairs)
    boxes = {node: Box(node, 0, row * LIST_ROW + 6, LIST_BOX, BOX_HEIGHT) for row, node in enumerate(nodes)}
    lines = [_list_arc(boxes[one], boxes[other], flow, _thickness(flow, pairs) / 2) for one, other, flow in pairs]
    return Drawing(LIST_WIDTH, len(nodes) * LIST_ROW, tuple(boxes.values()), tuple(lines))


def _pairs(balance: BookBalance) -> Pairs:
    return [(_node(flow.source, 0), _node(flow.target, LAST_COLUMN), flow) for flow in balance.flows]


def _node(end: FlowEnd, edge: int) -> Node:
    if isinstance(end, Vessel):
        return Node(end.name, COLUMN[VesselKind(end.kind)], is_boundary=False)
    return Node(end_name(end), edge, is_boundary=True)


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
    """Draw from the right side of a box to the left side of one in the next column."""
    x1, y1, x2, y2, head = _ends(one, other, width)
    bend = (x2 - x1) / 2
    path = f"M{x1} {y1:.1f}C{x1 + bend:.1f} {y1:.1f} {x2 - bend:.1f} {y2:.1f} {x2:.1f} {y2:.1f}"
    return _line(path, _head(other.x, x2, y2, head), flow, width)


def _below(one: Box, other: Box, flow: Flow, width: float, lane: float) -> Line:
    """Draw down beside the first box, along a lane below all boxes, and up before the second."""
    x1, y1, x2, y2, head = _ends(one, other, width)
    turn = GAP / 2
    path = (
        f"M{x1} {y1:.1f}C{x1 + turn:.1f} {y1:.1f} {x1 + turn / 2:.1f} {lane:.1f} {x1 + turn:.1f} {lane:.1f}"
        f"L{x2 - turn:.1f} {lane:.1f}C{x2 - turn / 2:.1f} {lane:.1f} {x2 - turn:.1f} {y2:.1f} {x2:.1f} {y2:.1f}"
    )
    return _line(path, _head(other.x, x2, y2, head), flow, width)


def _ends(one: Box, other: Box, width: float) -> tuple[int, float, float, float, float]:
    head = max(7.0, width / 2 + 3)
    return one.x + one.width, one.y + one.height / 2, other.x - head, other.y + other.height / 2, head


def _list_arc(one: Box, other: Box, flow: Flow, width: float) -> Line:
    reach = min(LIST_WIDTH - LIST_BOX - width, 40 + abs(other.y - one.y) * 0.45)
    return _arc(one, other, flow, width, reach)


def _arc(one: Box, other: Box, flow: Flow, width: float, reach: float) -> Line:
    """Draw from the right side of a box to the right side of another one above or below."""
    head = max(6.0, width / 2 + 3)
    down = other.y > one.y
    x, y1 = one.x + one.width, one.y + one.height * (0.7 if down else 0.3)
    y2 = other.y + other.height * (0.3 if down else 0.7)
    bend = x + reach * 4 / 3  # a curve reaches three quarters of the way to its handles
    path = f"M{x} {y1:.1f}C{bend:.1f} {y1:.1f} {bend:.1f} {y2:.1f} {x + head:.1f} {y2:.1f}"
    return _line(path, _head(x, x + head, y2, head), flow, width)


def _head(tip: int, base: float, y: float, size: float) -> str:
    return f"M{tip} {y:.1f}L{base:.1f} {y - size:.1f}V{y + size:.1f}Z"


def _line(path: str, head: str, flow: Flow, width: float) -> Line:
    says = f"{end_name(flow.source)} → {end_name(flow.target)}: {amount(flow.amount.value, 'mass')}"
    return Line(path, f"{width:.1f}", head, says, flow.amount.value is None)
