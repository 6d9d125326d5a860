"""What a user says of a product: everything as typed, things of the register by themselves."""

from dataclasses import dataclass
from datetime import date

from chemicals.journal.models import Attachment
from chemicals.register.models import Substance


@dataclass(frozen=True)
class LineInput:
    """A substance in a product: "98 %" or "20-30 %" of the mass, or "250 g/L"."""

    substance: Substance
    content: str


@dataclass(frozen=True)
class LimitInput:
    """An exposure limit: "0.05 mg/m3" or "0.9 ppm", a kind of `LimitKind`, where it stands; of the whole product or of
    one substance.
    """

    kind: str
    value: str
    source: str
    substance: Substance | None = None


@dataclass(frozen=True, kw_only=True)
class RevisionInput:
    """What is known of a product. ``density`` and ``ph_floor`` as typed; the rest as it stands on the sheet."""

    form: str
    lines: tuple[LineInput, ...] = ()
    complete: bool = True
    density: str = ""
    ph_floor: str = ""
    reactivity: tuple[str, ...] = ()
    hazard_classes: tuple[str, ...] = ()
    signal_word: str = ""
    pictograms: tuple[str, ...] = ()
    statements: tuple[str, ...] = ()
    limits: tuple[LimitInput, ...] = ()
    gloves: str = ""
    un_number: str = ""
    shipping_name: str = ""
    transport_class: str = ""
    packing_group: str = ""
    transport_unclassified: bool = False
    supplier_telephone: str = ""
    safety_data_sheet: Attachment | None = None
    sheet_language: str = ""
    sheet_date: date | None = None
