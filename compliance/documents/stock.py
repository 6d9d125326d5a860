"""Label stock as data: sheets as they lie in the printer, in millimetres."""

from collections.abc import Sequence
from typing import NamedTuple

from compliance.documents.errors import FieldError, PaperDataError
from compliance.documents.shapes import PaperSize

PAGES: dict[PaperSize, tuple[float, float]] = {"A4": (210.0, 297.0), "Letter": (215.9, 279.4)}  # ISO 216; ANSI Y14.1


class Stock(NamedTuple):
    """A sheet of equal labels: how many, how large, where they begin (mm from the left and upper edge of the page).

    `safe` is kept free of print inside each label: printers do not reach the edge, and cutters drift.
    """

    name: str
    page: PaperSize
    width: float
    height: float
    columns: int
    rows: int
    left: float
    top: float
    gap_x: float = 0.0
    gap_y: float = 0.0
    safe: float = 5.0

    @property
    def labels(self) -> int:
        """Labels on one sheet."""
        return self.columns * self.rows

    def corner(self, start: int) -> tuple[float, float]:
        """Left and upper edge (mm) of position `start`, 1 being top left, counted along the rows."""
        row, column = divmod(start - 1, self.columns)
        return self.left + column * (self.width + self.gap_x), self.top + row * (self.height + self.gap_y)


# Whole fractions of a page need no special purchase: plain sheets, cut, or self-adhesive ones of the same division.
# A6 is the size that Regulation (EC) 1272/2008, annex I, table 1.3 gives for packages of more than 50 and up to 500 L,
# A7 the one for more than 3 and up to 50 L, A5 the one above 500 L.
STOCKS: tuple[Stock, ...] = (
    Stock("4 per A4", "A4", 105.0, 148.5, 2, 2, 0.0, 0.0),
    Stock("2 per A4", "A4", 210.0, 148.5, 1, 2, 0.0, 0.0, safe=8.0),
    Stock("1 per A4", "A4", 210.0, 297.0, 1, 1, 0.0, 0.0, safe=10.0),
    Stock("8 per A4", "A4", 105.0, 74.25, 2, 4, 0.0, 0.0, safe=4.0),
    Stock("4 per Letter", "Letter", 107.95, 139.7, 2, 2, 0.0, 0.0),
    Stock("2 per Letter", "Letter", 215.9, 139.7, 1, 2, 0.0, 0.0, safe=8.0),
    Stock("1 per Letter", "Letter", 215.9, 279.4, 1, 1, 0.0, 0.0, safe=10.0),
    Stock("6 per Letter", "Letter", 101.6, 84.0, 2, 3, 4.0, 13.0, gap_x=4.7, safe=4.0),
)

# Smaller labels, for bottles and spray bottles: whole fractions of A4, and two sizes of Letter sheets that are sold
# everywhere (common practice; hold a printed sheet against the stock before the first use).
SMALL_STOCKS: tuple[Stock, ...] = (
    Stock("12 per A4", "A4", 105.0, 49.5, 2, 6, 0.0, 0.0, safe=3.0),
    Stock("24 per A4", "A4", 70.0, 37.125, 3, 8, 0.0, 0.0, safe=2.5),
    Stock("40 per A4", "A4", 52.5, 29.7, 4, 10, 0.0, 0.0, safe=2.0),
    Stock("10 per Letter", "Letter", 101.6, 50.8, 2, 5, 3.97, 12.7, gap_x=4.76, safe=3.0),
    Stock("30 per Letter", "Letter", 66.68, 25.4, 3, 10, 4.76, 12.7, gap_x=3.18, safe=1.5),
)
ALL_STOCKS = STOCKS + SMALL_STOCKS


def find_stock(name: str | None, start: int, page: PaperSize, among: Sequence[Stock] = STOCKS) -> Stock:
    """The stock of that name, or the first of the page size; `PaperDataError` if there is none or no such position."""
    fitting = [stock for stock in among if stock.page == page]
    chosen = next((stock for stock in fitting if name in (None, stock.name)), None)
    if chosen is None:
        names = ", ".join(stock.name for stock in fitting)
        raise PaperDataError([FieldError("stock", f"{name!r} is no label stock on {page}: use one of {names}")])
    if not 1 <= start <= chosen.labels:
        raise PaperDataError([FieldError("start", f"{chosen.name} has positions 1 to {chosen.labels}, not {start}")])
    return chosen
