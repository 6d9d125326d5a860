"""The frozen data of each kind of paper: what a paper says, as plain str, int, list and dict.

Every amount is a string as it shall be read ("12.5 L", "3.4 g"); None means unknown and prints as "unknown", never
as 0. Dates and times are ISO 8601. A paper is drawn from this data and nothing else, so that label, manifest and screen
agree.
"""

from typing import Literal, NotRequired, TypedDict

PaperKind = Literal["waste-label", "manifest"]
PaperSize = Literal["A4", "Letter"]
Pictogram = Literal["GHS01", "GHS02", "GHS03", "GHS04", "GHS05", "GHS06", "GHS07", "GHS08", "GHS09"]
SignalWord = Literal["Danger", "Warning", ""]


class WorkshopData(TypedDict):
    """The premises that issues the paper, and the telephone that is answered in an emergency."""

    name: str
    address: str
    telephone: str


class HazardData(TypedDict):
    """Hazards as the user entered them; statements are whole, code first ("H314 ...")."""

    signal_word: SignalWord
    pictograms: list[Pictogram]
    statements: list[str]


class LabelContainerData(TypedDict):
    """The waste container that carries the label."""

    code: str
    name: str
    material: str
    volume: str | None


class LabelContentData(TypedDict):
    """One line of what is inside."""

    name: str
    amount: str | None
    note: str


class WasteLabelData(TypedDict):
    """Kind "waste-label". Issuing fills in the fields of `FILLED_IN`.

    `stock` names a label stock of `stock.STOCKS` (left out: the first of the paper size); `start` is the first free
    position on a used sheet, 1 being top left, counted along the rows.
    """

    workshop: WorkshopData
    number: int
    container: LabelContainerData
    stream: str
    origin: str
    contents: list[LabelContentData]
    hazards: HazardData
    first_drop: str | None
    full: str | None
    must_not_meet: list[str]
    cautions: list[str]
    url: str
    chain_head: str
    chain_sequence: int
    issued_at: str
    issued_by: str
    paper_size: NotRequired[PaperSize]
    stock: NotRequired[str]
    start: NotRequired[int]


class ReceiverData(TypedDict):
    """Who takes the waste containers; `reference` is the receiver's own number for us or for this load."""

    name: str
    address: str
    reference: str


class DropOffData(TypedDict):
    """The delivery that the manifest goes along with."""

    code: str
    date: str
    mode: Literal["brought", "picked up"]


class ManifestContentData(TypedDict):
    """One component of a container: amount with its standard uncertainty, and what the figure rests on."""

    component: str
    amount: str | None
    uncertainty: str | None
    basis: str


class ManifestContainerData(TypedDict):
    """One waste container of the load; `gross_kg` is a decimal number of kilograms as a string."""

    code: str
    stream: str
    origin: str
    contents: list[ManifestContentData]
    volume: str | None
    gross_kg: str | None
    hazards: HazardData
    codes: list[str]
    must_not_meet: list[str]


class ManifestData(TypedDict):
    """Kind "manifest". Issuing fills in the fields of `FILLED_IN`."""

    workshop: WorkshopData
    number: int
    receiver: ReceiverData
    drop_off: DropOffData
    containers: list[ManifestContainerData]
    cautions: list[str]
    url: str
    chain_head: str
    chain_sequence: int
    issued_at: str
    issued_by: str
    paper_size: NotRequired[PaperSize]


PaperData = WasteLabelData | ManifestData
SHAPES: dict[str, type[WasteLabelData] | type[ManifestData]] = {
    "waste-label": WasteLabelData,
    "manifest": ManifestData,
}
FILLED_IN = frozenset({"workshop", "number", "chain_head", "chain_sequence", "issued_at", "issued_by", "paper_size"})
"""Fields that issuing fills in; whoever asks for a paper leaves them out."""
