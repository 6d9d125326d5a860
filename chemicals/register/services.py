"""Writes of the catalogue: substances, products, revisions."""

from collections.abc import Sequence
from datetime import datetime

from django.db import transaction
from django.db.models import Exists, OuterRef
from django_scopes import scope

from chemicals.journal import services as journal
from chemicals.journal.models import Attachment
from chemicals.register.checks import Checked, check_revision, check_substance
from chemicals.register.inputs import LimitInput, LineInput, RevisionInput
from chemicals.register.models import CompositionLine, ExposureLimit, Product, ProductRevision, Substance
from chemicals.register.selectors import list_missing_starters, list_substances_for
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.rows import check_row

__all__ = [
    "LimitInput",
    "LineInput",
    "RevisionInput",
    "add_starter_substances",
    "change_substance",
    "create_product",
    "create_substance",
    "keep_sheet",
    "revise_product",
]


def create_substance(
    *,
    actor: Membership,
    name: str,
    cas_number: str = "",
    formula: str = "",
    inert: bool = False,
    ec_number: str = "",
    synonyms: Sequence[str] = (),
) -> Substance:
    """Create a substance; its numbers and its formula are checked if given. An inert one is balanced by its formula."""
    require_writer(actor)
    substance = Substance(workshop=actor.workshop, name=name, formula=formula, inert=inert)
    errors = check_substance(substance, cas_number, ec_number, synonyms)
    with transaction.atomic(), scope(workshop=actor.workshop):
        _finish(substance, errors)
        substance.save()
    return substance


def change_substance(
    *,
    actor: Membership,
    substance: Substance,
    name: str,
    cas_number: str = "",
    formula: str = "",
    inert: bool = False,
    ec_number: str = "",
    synonyms: Sequence[str] = (),
) -> Substance:
    """Correct a substance. What a composition names keeps its formula, and whether it is inert: entries rely on it."""
    require_writer(actor)
    require_same_workshop(actor, substance)
    with transaction.atomic(), scope(workshop=actor.workshop):
        row = Substance.objects.select_for_update().get(pk=substance.pk)
        before = (row.formula, row.inert)
        row.name, row.formula, row.inert = name, formula, inert
        errors = check_substance(row, cas_number, ec_number, synonyms)
        if before != (row.formula, row.inert) and CompositionLine.objects.filter(substance=row).exists():
            field = "formula" if before[0] != row.formula else "inert"
            errors.append(FieldError(field, "A composition relies on this. Add another substance, revise the product."))
        _finish(row, errors)
        row.save()
        _note_where_used(row)
    return row


def _note_where_used(substance: Substance) -> None:
    """Let the products that are made of a substance now be found by what it is called now."""
    newer = ProductRevision.objects.filter(product=OuterRef("product"), number__gt=OuterRef("number"))
    current = ProductRevision.objects.filter(~Exists(newer), lines__substance=substance).select_related("product")
    products = []
    for revision in current.prefetch_related("lines__substance"):
        revision.product.note_made_of(line.substance for line in revision.lines.all())
        products.append(revision.product)
    Product.objects.bulk_update(products, ["made_of"], batch_size=500)


def _finish(substance: Substance, errors: list[FieldError]) -> None:
    """Refuse a name that stands there already, together with everything else."""
    readable = all(error.field != "name" for error in errors)  # PostgreSQL cannot even look for a text with a NUL
    if readable and Substance.objects.filter(name=substance.name).exclude(pk=substance.pk).exists():
        errors.append(FieldError("name", "This substance is in the register already."))
    if errors:
        raise InvalidInputError(errors)


@transaction.atomic
def add_starter_substances(*, actor: Membership) -> list[Substance]:
    """Add the usual substances of plating by name, CAS number and formula, no hazards; those here stay as they are."""
    require_writer(actor)
    with scope(workshop=actor.workshop):
        rows = [
            Substance(
                workshop=actor.workshop,
                name=row.name,
                cas_number=row.cas_number,
                formula=row.formula,
                synonyms=list(row.synonyms),
            )
            for row in list_missing_starters(list_substances_for(actor))
        ]
        for row in rows:
            row.note_searched()
        return Substance.objects.bulk_create(rows)


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
    checked, more = _check(actor, revision)
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
    checked, errors = _check(actor, revision)
    if errors:
        raise InvalidInputError(errors)
    with transaction.atomic(), scope(workshop=actor.workshop):
        locked = Product.objects.select_for_update().get(pk=product.pk)
        number = ProductRevision.objects.filter(product=locked).count() + 1
        return _write_revision(actor, now, locked, number, checked)


def _check(actor: Membership, said: RevisionInput) -> tuple[Checked, list[FieldError]]:
    """Check what is said of a product; it may name only things of the actor's workshop."""
    named = [line.substance for line in said.lines] + [each.substance for each in said.limits if each.substance]
    require_same_workshop(actor, *named)
    if said.safety_data_sheet is not None:
        require_same_workshop(actor, said.safety_data_sheet)
    return check_revision(said)


def _write_revision(
    actor: Membership, now: datetime, product: Product, number: int, checked: Checked
) -> ProductRevision:
    revision = checked.revision
    revision.product, revision.number = product, number
    revision.created_at, revision.created_by = now, actor
    revision.save()
    for line in checked.lines:
        line.revision = revision
    for limit in checked.limits:
        limit.revision = revision
    CompositionLine.objects.bulk_create(checked.lines)
    product.note_made_of(line.substance for line in checked.lines)
    product.save(update_fields=["made_of"])
    ExposureLimit.objects.bulk_create(checked.limits)
    return revision
