"""The frozen data of each kind of paper: what a paper says, as plain str, int, list and dict.

Every amount is a string as it shall be read ("12.5 L", "3.4 g"); None means unknown and prints as "unknown", never
as 0. Dates and times are ISO 8601. A paper is drawn from this data and nothing else, so that label, manifest and screen
agree.
"""

from typing import Literal, NotRequired, TypedDict

PaperKind = Literal["waste-label", "manifest", "labels", "emergency", "register"]
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
    """One container of the load; `gross_kg` is a decimal number of kilograms as a string.

    ``stream`` of a stock container is its product, and ``note`` says that it is one: empty, or as bought.
    """

    code: str
    stream: str
    origin: str
    contents: list[ManifestContentData]
    volume: str | None
    gross_kg: str | None
    hazards: HazardData
    codes: list[str]
    must_not_meet: list[str]
    note: NotRequired[str]


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


LabelSort = Literal["tank", "bottle", "secondary container"]
Fact = Literal[
    "note", "revision", "lot", "received", "opened", "keeps until", "decanted", "decanted by", "mark", "place",
    "supplier", "supplier's telephone",
]  # fmt: skip


class FactData(TypedDict):
    """One line of a label; a value of None prints as "unknown"."""

    what: Fact
    value: str | None


class AvoidData(TypedDict):
    """What must never be met, and what comes of it; empty where nothing can be named."""

    what: str
    gives: str


class VesselLabelData(TypedDict):
    """One label of a vessel. ``contents`` says in words what is inside; None prints as "unknown".

    ``hazards`` are merged from everything poured in; ``not_entered`` names what was poured in without any; the
    precautions are the P statements and the gloves as typed, ``must_not_meet`` follows from what the contents may
    react as.
    """

    sort: LabelSort
    name: str
    contents: str | None
    code: str
    url: str
    facts: list[FactData]
    hazards: HazardData
    precautions: list[str]
    not_entered: list[str]
    must_not_meet: list[AvoidData]
    cautions: list[str]


class LabelsData(TypedDict):
    """Kind "labels": labels of vessels on sheets of one stock, the first one at position ``start``.

    Issuing fills in the fields of `FILLED_IN`.
    """

    workshop: WorkshopData
    number: int
    labels: list[VesselLabelData]
    stock: str
    start: int
    chain_head: str
    chain_sequence: int
    issued_at: str
    issued_by: str
    paper_size: NotRequired[PaperSize]


class CallData(TypedDict):
    """Whom to call in an emergency, as the workshop entered it."""

    label: str
    call: str


class EmergencyThingData(TypedDict):
    """One vessel on the emergency sheet. ``amount`` None prints as "unknown", ``doubt`` None as "not stated"."""

    name: str
    code: str
    kind: str
    contents: str | None
    amount: str | None
    doubt: str | None
    hazards: HazardData
    not_entered: list[str]
    un_numbers: list[str]
    must_not_meet: list[AvoidData]
    with_water: list[str]
    with_acid: list[str]


class EmergencyPlaceData(TypedDict):
    """A place with what stands there; ``name`` None: nobody said where it stands."""

    name: str | None
    bund: str
    exhaust_duct: str
    things: list[EmergencyThingData]
    together: list[str]


class SharedData(TypedDict):
    """A bund or an exhaust duct with the places that share it, and what stands over it that must never meet."""

    sort: Literal["bund", "exhaust duct"]
    name: str
    places: list[str]
    together: list[str]


class HazardTotalData(TypedDict):
    """How much of one hazard class stands here in all: litres of liquids, kilograms of solids, unknown amounts."""

    hazard: str
    volume: str | None
    volume_doubt: str | None
    mass: str | None
    mass_doubt: str | None
    vessels: int
    unknown: int


class EmergencyData(TypedDict):
    """Kind "emergency". ``left_out`` vessels hold nothing by the books. Issuing fills in `FILLED_IN`."""

    workshop: WorkshopData
    number: int
    calls: list[CallData]
    totals: list[HazardTotalData]
    shared: list[SharedData]
    places: list[EmergencyPlaceData]
    left_out: int
    cautions: list[str]
    url: str
    chain_head: str
    chain_sequence: int
    issued_at: str
    issued_by: str
    paper_size: NotRequired[PaperSize]


ListColumn = Literal["name", "classification", "quantities", "areas", "sheet"]


class ListRuleData(TypedDict):
    """The line of a rule after which the workshop chose the columns, and what the workshop said of it."""

    provision: str
    asks_for: str
    source: str
    edition: str
    citation: str
    checked_on: str
    chosen_by: str


class ListRowData(TypedDict):
    """One product of the list; each cell holds its lines."""

    name: list[str]
    classification: list[str]
    quantities: list[str]
    areas: list[str]
    sheet: list[str]


class RegisterData(TypedDict):
    """Kind "register": the list of chemicals with the columns of the chosen rule. Issuing fills in `FILLED_IN`."""

    workshop: WorkshopData
    number: int
    rule: ListRuleData
    columns: list[ListColumn]
    rows: list[ListRowData]
    left_out: int
    cautions: list[str]
    url: str
    chain_head: str
    chain_sequence: int
    issued_at: str
    issued_by: str
    paper_size: NotRequired[PaperSize]


SHAPES: dict[str, type] = {
    "waste-label": WasteLabelData,
    "manifest": ManifestData,
    "labels": LabelsData,
    "emergency": EmergencyData,
    "register": RegisterData,
}
FILLED_IN = frozenset({"workshop", "number", "chain_head", "chain_sequence", "issued_at", "issued_by", "paper_size"})
"""Fields that issuing fills in; whoever asks for a paper leaves them out."""
