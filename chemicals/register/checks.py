"""What is wrong with a product or a substance before it is written: everything at once, each under its field."""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass

from chemicals.register.hazards import check_hazards
from chemicals.register.inputs import RevisionInput
from chemicals.register.models import MOST_PH, CompositionLine, ExposureLimit, Form, ProductRevision, Substance
from chemicals.register.selectors import solute_code
from chemicals.register.sheets import read_language
from chemicals.science.content import ALL, Content, read_content
from chemicals.science.errors import TextError
from chemicals.science.formula import METALS, FormulaError, parse_formula
from chemicals.science.ghs import split_codes
from chemicals.science.identity import (
    PACKING_GROUPS,
    read_cas_number,
    read_divisions,
    read_ec_number,
    read_un_number,
)
from chemicals.science.quantity import Measure, QuantityError, measure, parse
from chemicals.science.species import moles_of
from chemicals.workshop.errors import FieldError
from chemicals.workshop.rows import check_row
from chemicals.workshop.texts import find_bad_lines, tidy

LONGEST_GLOVES, LONGEST_CONTENT = 1000, 80
LONGEST_CODE = 40
"""Characters of a component's code in the ledger."""
LONGEST_NAME, MOST_SYNONYMS = 120, 30
TRANSPORT = ("un_number", "shipping_name", "transport_class", "packing_group")
_SET_LATER = ("product", "number", "created_at", "created_by", "safety_data_sheet")


@dataclass(frozen=True)
class Checked:
    """A revision with its lines and limits, ready to be written."""

    revision: ProductRevision
    lines: tuple[CompositionLine, ...]
    limits: tuple[ExposureLimit, ...]


def check_revision(said: RevisionInput) -> tuple[Checked, list[FieldError]]:
    """Return the rows to write, and everything that is wrong with them."""
    revision = _build(said)
    lines, limits, errors = [], [], [*_check_texts(revision), *_read_figures(revision, said)]
    for number, line in enumerate(said.lines):
        try:
            lines.append((number, line.substance, read_content(line.content)))
        except TextError as error:
            errors.append(FieldError(f"lines.{number}.content", error.message))
        if len(tidy(line.content)) > LONGEST_CONTENT:
            errors.append(FieldError(f"lines.{number}.content", f"Write it in at most {LONGEST_CONTENT} characters."))
    contents = [(number, content) for number, _, content in lines]
    errors += _check_composition(said, contents)
    for number, limit in enumerate(said.limits):
        row = ExposureLimit(substance=limit.substance, kind=limit.kind, value=limit.value, source=limit.source)
        errors += [FieldError(f"limits.{number}.{each.field}", each.message) for each in _check_limit(row)]
        limits.append(row)
    made = [
        CompositionLine(substance=substance, typed=tidy(c.typed), amount=c.amount, sd=c.sd, per=c.per)
        for _, substance, c in lines
    ]
    return Checked(revision, tuple(made), tuple(limits)), errors


def _build(said: RevisionInput) -> ProductRevision:
    return ProductRevision(
        form=said.form,
        complete=said.complete,
        reactivity=sorted(set(said.reactivity)),
        hazard_classes=list(dict.fromkeys(said.hazard_classes)),
        signal_word=said.signal_word,
        pictograms=sorted(set(said.pictograms)),
        statements=[tidy(part) for line in said.statements for part in split_codes(line)],
        gloves=said.gloves.replace("\r\n", "\n"),
        un_number=said.un_number,
        shipping_name=said.shipping_name,
        transport_class=said.transport_class,
        packing_group=said.packing_group,
        transport_unclassified=said.transport_unclassified,
        supplier_telephone=said.supplier_telephone,
        safety_data_sheet=said.safety_data_sheet,
        sheet_language=said.sheet_language,
        sheet_date=said.sheet_date,
    )


def _check_texts(row: ProductRevision) -> Iterator[FieldError]:
    """Tidy the row's texts; yield what is wrong with what stands on the sheet."""
    for name, read in (("un_number", read_un_number), ("transport_class", _same_class), ("sheet_language", _language)):
        yield from _read(row, name, read)
    yield from check_row(row, leave_out=_SET_LATER)
    yield from check_hazards(
        hazard_classes=row.hazard_classes,
        signal_word=row.signal_word,
        pictograms=row.pictograms,
        statements=row.statements,
        reactivity=row.reactivity,
    )
    if len(row.gloves) > LONGEST_GLOVES:
        yield FieldError("gloves", f"This is too long. Write it in at most {LONGEST_GLOVES} characters.")
    if row.packing_group not in ("", *PACKING_GROUPS):
        yield FieldError("packing_group", "A packing group is I, II or III. Choose one, or none.")
    if row.transport_unclassified and any(getattr(row, name) for name in TRANSPORT):
        yield FieldError("transport_unclassified", "It is not classified for transport, or it has these: not both.")
    if row.safety_data_sheet is not None and row.safety_data_sheet.media_type != "application/pdf":
        yield FieldError("safety_data_sheet", "A safety data sheet is a PDF file. Choose the PDF.")


def _read(row: ProductRevision, name: str, read: Callable[[str], str]) -> Iterator[FieldError]:
    """Bring a text into its usual form; leave one that has none as it is, and say so."""
    text = getattr(row, name)
    if text:
        try:
            setattr(row, name, read(text))
        except TextError as error:
            setattr(row, name, "")
            yield FieldError(name, error.message)
        except ValueError as error:
            setattr(row, name, "")
            yield FieldError(name, str(error))


def _same_class(text: str) -> str:
    read_divisions(text)
    return text


def _language(text: str) -> str:
    found = read_language(text)
    if found is None:
        raise ValueError("Write the language by its tag: de, en or fr-CH.")
    return found


def _read_figures(row: ProductRevision, said: RevisionInput) -> Iterator[FieldError]:
    if said.density.strip():
        try:
            row.density = parse(said.density, "density", default_unit="g/mL").base
        except QuantityError as error:
            yield FieldError("density", error.message)
    if row.density == 0:
        yield FieldError("density", "A density is more than zero.")
    if said.ph_floor.strip():
        try:
            row.ph_floor = parse(said.ph_floor, "ph").base
        except QuantityError as error:
            yield FieldError("ph_floor", error.message)
    if row.ph_floor is not None and row.ph_floor > MOST_PH:
        yield FieldError("ph_floor", "Write a pH between 0 and 14.")


def _check_composition(said: RevisionInput, contents: list[tuple[int, Content]]) -> Iterator[FieldError]:
    if said.form == Form.SOLID:
        for number, content in contents:
            if content.per == "L":
                yield FieldError(f"lines.{number}.content", "A solid has no litres. Write % of its mass.")
    if len({line.substance.uuid for line in said.lines}) < len(said.lines):
        yield FieldError("lines", "A substance stands twice in the list. Add the two together.")
    if sum(content.low for _, content in contents if content.per == "kg") > ALL:
        yield FieldError("lines", "The parts add up to more than 100 %.")


def _check_limit(row: ExposureLimit) -> Iterator[FieldError]:
    yield from check_row(row, leave_out=("revision", "substance"))
    if row.value:
        try:
            if not read_limit(row.value).exact:
                yield FieldError("value", "A limit is more than zero.")
        except QuantityError as error:
            yield FieldError("value", error.message)


def read_limit(text: str) -> Measure:
    """Return an exposure limit in ng/m3, or as a fraction in ppm, unrounded. Raises QuantityError."""
    try:
        return measure(text, "air_concentration")
    except QuantityError as error:
        if error.code != "wrong_dimension":
            raise
        try:
            return measure(text, "fraction")
        except QuantityError:
            raise error from None


def check_substance(substance: Substance, cas_number: str, ec_number: str, synonyms: Sequence[str]) -> list[FieldError]:
    """Put numbers and synonyms into a row in their usual form; return everything that is wrong with the row."""
    substance.cas_number, substance.ec_number = cas_number, ec_number
    substance.synonyms = list(dict.fromkeys(name for text in synonyms if (name := tidy(text))))
    errors = check_row(substance, leave_out=["workshop"])
    for field, read in (("cas_number", read_cas_number), ("ec_number", read_ec_number)):
        number = getattr(substance, field)
        if number and not any(error.field == field for error in errors):
            try:
                setattr(substance, field, read(number))
            except TextError as error:
                errors.append(FieldError(field, error.message))
    return [*errors, *_check_formula(substance), *_check_synonyms(substance.synonyms)]


def _check_synonyms(synonyms: Sequence[str]) -> Iterator[FieldError]:
    if len(synonyms) > MOST_SYNONYMS:
        yield FieldError("synonyms", f"These are more than {MOST_SYNONYMS} names. Leave some out.")
    for name in synonyms:
        yield from find_bad_lines(synonyms=name)
        if len(name) > LONGEST_NAME:
            yield FieldError("synonyms", f'"{name[:20]}…" is too long. Write it in at most {LONGEST_NAME} characters.')


def _check_formula(substance: Substance) -> Iterator[FieldError]:
    if substance.formula:
        try:
            parse_formula(substance.formula)
        except FormulaError as error:
            yield FieldError("formula", str(error))
            return
    if not substance.inert:
        return
    code = solute_code(substance.formula)
    if not code:
        yield FieldError("formula", "What is inert is balanced by its formula. Write the formula.")
    elif code in METALS:
        yield FieldError("inert", "A metal is balanced in any case. Leave this out.")
    elif moles_of(substance.formula):
        kinds = ", ".join(moles_of(substance.formula))
        yield FieldError("inert", f"This brings {kinds}, which reacts. Leave this out.")
    elif len(code) > LONGEST_CODE:
        yield FieldError("formula", f"The formula of what is inert has at most {LONGEST_CODE} characters.")
