"""Writes of the catalogue: substances, products, revisions."""

import re
from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date, datetime

from django.db import transaction
from django_scopes import scope

from chemicals.journal import services as journal
from chemicals.journal.models import Attachment
from chemicals.register.hazards import check_hazards
from chemicals.register.models import CompositionLine, Form, Per, Product, ProductRevision, Substance
from chemicals.register.selectors import solute_code
from chemicals.science.formula import METALS, FormulaError, parse_formula
from chemicals.science.quantity import QuantityError, parse
from chemicals.science.species import moles_of
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.rows import check_row
from chemicals.workshop.texts import tidy

CAS_NUMBER = re.compile(r"(\d{2,7})-(\d{2})-(\d)")
LONGEST_CODE = 40
"""Characters of a component's code in the ledger."""


def check_cas_number(text: str) -> None:
    """Refuse a CAS number whose check digit does not fit (digits weighted 1, 2, 3 ... from the right, modulo 10)."""
    match = CAS_NUMBER.fullmatch(text)
    if match is None:
        raise InvalidInputError.of("cas_number", "A CAS number looks like 7758-99-8.")
    digits = (match[1] + match[2])[::-1]
    if sum(weight * int(digit) for weight, digit in enumerate(digits, 1)) % 10 != int(match[3]):
        raise InvalidInputError.of("cas_number", f"The check digit of {text} does not fit: read it again.")


def create_substance(
    *, actor: Membership, name: str, cas_number: str = "", formula: str = "", inert: bool = False
) -> Substance:
    """Create a substance; its CAS number and formula are checked if given. An inert one is balanced by its formula."""
    require_writer(actor)
    substance = Substance(workshop=actor.workshop, name=name, cas_number=cas_number, formula=formula, inert=inert)
    errors = check_row(substance)
    if substance.cas_number:
        try:
            check_cas_number(substance.cas_number)
        except InvalidInputError as error:
            errors.extend(error.errors)
    errors.extend(_check_formula(substance))
    with transaction.atomic(), scope(workshop=actor.workshop):
        if Substance.objects.filter(name=substance.name).exists():
            errors.append(FieldError("name", "This substance is in the register already."))
        if errors:
            raise InvalidInputError(errors)
        substance.save()
        return substance


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


@dataclass(frozen=True)
class LineInput:
    """A substance in a product: "98 %" of the mass, or "250 g/L"."""

    substance: Substance
    content: str


@dataclass(frozen=True, kw_only=True)
class RevisionInput:
    """What is known of a product. ``density`` as typed; hazards as they stand on the safety data sheet."""

    form: str
    lines: tuple[LineInput, ...] = ()
    complete: bool = True
    density: str = ""
    reactivity: tuple[str, ...] = ()
    signal_word: str = ""
    pictograms: tuple[str, ...] = ()
    statements: tuple[str, ...] = ()
    safety_data_sheet: Attachment | None = None
    sheet_date: date | None = None


def keep_sheet(*, actor: Membership, now: datetime, name: str, data: bytes) -> Attachment:
    """Keep a safety data sheet, so that a revision can name it. Raises InvalidInputError if it is no PDF file."""
    if not data.startswith(b"%PDF-"):
        raise InvalidInputError.of("safety_data_sheet", "A safety data sheet is a PDF file. Choose the PDF.")
    return journal.add_attachment(actor=actor, now=now, name=name, data=data)


def create_product(
    *, actor: Membership, now: datetime, name: str, supplier: str, revision: RevisionInput
) -> ProductRevision:
    """Create a product with its first revision."""
    require_writer(actor)
    product = Product(workshop=actor.workshop, name=name, supplier=supplier)
    errors = check_row(product)
    checked, more = _check_revision(actor, revision)
    with transaction.atomic(), scope(workshop=actor.workshop):
        if not errors and Product.objects.filter(name=product.name, supplier=product.supplier).exists():
            errors.append(FieldError("name", "This product of this supplier is in the register. Revise it instead."))
        if errors or more:
            raise InvalidInputError([*errors, *more])
        product.save()
        return _write_revision(actor, now, product, 1, checked)


def revise_product(*, actor: Membership, now: datetime, product: Product, revision: RevisionInput) -> ProductRevision:
    """Write the next revision; earlier ones stay as they were."""
    require_writer(actor)
    require_same_workshop(actor, product)
    checked, errors = _check_revision(actor, revision)
    if errors:
        raise InvalidInputError(errors)
    with transaction.atomic(), scope(workshop=actor.workshop):
        locked = Product.objects.select_for_update().get(pk=product.pk)
        number = ProductRevision.objects.filter(product=locked).count() + 1
        return _write_revision(actor, now, locked, number, checked)


@dataclass(frozen=True)
class _Checked:
    said: RevisionInput
    density: int | None
    lines: tuple[tuple[LineInput, int, str], ...]


def _check_revision(actor: Membership, said: RevisionInput) -> tuple[_Checked, list[FieldError]]:
    require_same_workshop(actor, *(line.substance for line in said.lines))
    if said.safety_data_sheet is not None:
        require_same_workshop(actor, said.safety_data_sheet)
    errors = list(_check_sheet(said))
    density, lines = None, []
    if said.density.strip():
        try:
            density = parse(said.density, "density", default_unit="g/mL").base
        except QuantityError as error:
            errors.append(FieldError("density", error.message))
    if density == 0:
        errors.append(FieldError("density", "A density is more than zero."))
    for number, line in enumerate(said.lines):
        try:
            lines.append((line, *read_content(line.content)))
        except QuantityError as error:
            errors.append(FieldError(f"lines.{number}.content", error.message))
    if said.form == Form.SOLID:
        errors += [
            FieldError(f"lines.{said.lines.index(line)}.content", "A solid has no litres. Write % of its mass.")
            for line, _, per in lines
            if per == Per.LITRE
        ]
    if len({line.substance.pk for line in said.lines}) < len(said.lines):
        errors.append(FieldError("lines", "A substance stands twice in the list. Add the two together."))
    if sum(amount for _, amount, per in lines if per == Per.KILOGRAM) > 10**9:
        errors.append(FieldError("lines", "The parts add up to more than 100 %."))
    return _Checked(said, density, tuple(lines)), errors


def _check_sheet(said: RevisionInput) -> Iterator[FieldError]:
    if said.form not in Form.values:
        yield FieldError("form", "Choose solid or liquid.")
    yield from check_hazards(
        signal_word=said.signal_word,
        pictograms=said.pictograms,
        statements=said.statements,
        reactivity=said.reactivity,
    )
    if said.safety_data_sheet is not None and said.safety_data_sheet.media_type != "application/pdf":
        yield FieldError("safety_data_sheet", "A safety data sheet is a PDF file. Choose the PDF.")


def read_content(text: str) -> tuple[int, str]:
    """Return (micrograms, per kilogram or litre) of "98 %" or "250 g/L". Raises QuantityError."""
    if "/" in text:
        return parse(text, "concentration").base, Per.LITRE
    return parse(text, "fraction", default_unit="%").base * 1000, Per.KILOGRAM


def _write_revision(
    actor: Membership, now: datetime, product: Product, number: int, checked: _Checked
) -> ProductRevision:
    said = checked.said
    revision = ProductRevision.objects.create(
        product=product,
        number=number,
        form=said.form,
        density=checked.density,
        complete=said.complete,
        reactivity=sorted(said.reactivity),
        signal_word=said.signal_word,
        pictograms=sorted(said.pictograms),
        statements=[tidy(text) for text in said.statements],
        safety_data_sheet=said.safety_data_sheet,
        sheet_date=said.sheet_date,
        created_at=now,
        created_by=actor,
    )
    CompositionLine.objects.bulk_create(
        CompositionLine(revision=revision, substance=line.substance, typed=tidy(line.content), amount=amount, per=per)
        for line, amount, per in checked.lines
    )
    return revision
