"""What a user says of a product: everything as typed, things of the register by themselves."""

from dataclasses import dataclass
from datetime import date
from decimal import Decimal

from chemicals.journal.models import Attachment
from chemicals.register.models import ProductRevision, Substance


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


def say_again(revision: ProductRevision) -> RevisionInput:
    """Return what was said of a product, so that the next revision can say something else of a part of it."""
    return RevisionInput(
        form=revision.form,
        lines=tuple(LineInput(line.substance, line.typed) for line in revision.lines.all()),
        complete=revision.complete,
        density="" if revision.density is None else f"{Decimal(revision.density).scaleb(-6):f} g/mL",
        ph_floor="" if revision.ph_floor is None else f"{Decimal(revision.ph_floor).scaleb(-3):f}",
        reactivity=tuple(revision.reactivity),
        hazard_classes=tuple(revision.hazard_classes),
        signal_word=revision.signal_word,
        pictograms=tuple(revision.pictograms),
        statements=tuple(revision.statements),
        limits=tuple(LimitInput(row.kind, row.value, row.source, row.substance) for row in revision.limits.all()),
        gloves=revision.gloves,
        un_number=revision.un_number,
        shipping_name=revision.shipping_name,
        transport_class=revision.transport_class,
        packing_group=revision.packing_group,
        transport_unclassified=revision.transport_unclassified,
        supplier_telephone=revision.supplier_telephone,
        safety_data_sheet=revision.safety_data_sheet,
        sheet_language=revision.sheet_language,
        sheet_date=revision.sheet_date,
    )
