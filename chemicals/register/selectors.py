"""Reads of the catalogue."""

import re
import unicodedata
from decimal import ROUND_HALF_EVEN, Decimal
from uuid import UUID

from django.db.models import OuterRef, Prefetch, QuerySet, Subquery
from django_scopes import scope, scopes_disabled

from chemicals.books.events import UNKNOWN_LIQUID, Figure, Recipe, Share
from chemicals.register.models import CompositionLine, Form, Product, ProductRevision, Substance
from chemicals.science.formula import METALS, mass_fractions
from chemicals.science.species import nanomoles_per_microgram
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership, Workshop


def list_substances_for(member: Membership) -> QuerySet[Substance]:
    """Return the substances of the member's workshop, by name. One query."""
    with scope(workshop=member.workshop):
        return Substance.objects.order_by("name")


def get_substance_for(member: Membership, uuid: UUID) -> Substance:
    """Return one substance of the member's workshop."""
    try:
        return list_substances_for(member).get(uuid=uuid)
    except Substance.DoesNotExist as error:
        raise NotFoundError("There is no such substance in this workshop.") from error


def list_products_for(member: Membership) -> QuerySet[Product]:
    """Return the products of the member's workshop, by name. One query."""
    with scope(workshop=member.workshop):
        return Product.objects.order_by("name", "supplier")


def get_product_for(member: Membership, uuid: UUID) -> Product:
    """Return one product of the member's workshop."""
    try:
        return list_products_for(member).get(uuid=uuid)
    except Product.DoesNotExist as error:
        raise NotFoundError("There is no such product in this workshop.") from error


def list_current_revisions_for(member: Membership) -> QuerySet[ProductRevision]:
    """Return the current revision of every product with composition and sheet, by product name. Two queries."""
    with scope(workshop=member.workshop):
        newest = ProductRevision.objects.filter(product=OuterRef("product")).order_by("-number")
        return _with_parts(ProductRevision.objects.filter(pk=Subquery(newest.values("pk")[:1]))).order_by(
            "product__name", "product__supplier"
        )


def list_revisions_of(product: Product) -> QuerySet[ProductRevision]:
    """Return all revisions of a product, newest first. Two queries."""
    with scope(workshop=product.workshop):
        return _with_parts(ProductRevision.objects.filter(product=product)).order_by("-number")


def get_current_revision(product: Product) -> ProductRevision:
    """Return the newest revision; every product has one from its first moment."""
    revision = list_revisions_of(product).first()
    if revision is None:
        raise NotFoundError("This product has no revision.")
    return revision


def _with_parts(revisions: QuerySet[ProductRevision]) -> QuerySet[ProductRevision]:
    lines = Prefetch("lines", CompositionLine.objects.select_related("substance").order_by("pk"))
    return revisions.select_related("product", "safety_data_sheet", "created_by__user").prefetch_related(lines)


def build_recipe(revision: ProductRevision) -> Recipe:
    """Return the revision as an entry relies on it, per kilogram or litre.

    Micrograms of each metal and of each solute declared inert, nanomoles of each species that reacts.
    """
    shares = [share for line in revision.lines.all() for share in _shares(line)]
    density = None if revision.density is None else Figure(revision.density, 0, f"{revision}")
    return Recipe(
        product=revision.product.uuid,
        revision=revision.number,
        name=revision.product.name,
        solid=revision.form == Form.SOLID,
        complete=revision.complete,
        shares=tuple(shares),
        density=density,
    )


def _shares(line: CompositionLine) -> list[Share]:
    if not line.substance.formula:
        return []
    formula = line.substance.formula
    metals = {metal: part for metal, part in mass_fractions(formula).items() if metal in METALS}
    solute = {solute_code(formula): Decimal(1)} if line.substance.inert else {}
    return [
        Share(component, _part(line.amount, part), _part(line.sd, part), line.per)
        for component, part in sorted({**metals, **nanomoles_per_microgram(formula), **solute}.items())
    ]


def _part(amount: int, fraction: Decimal) -> int:
    return int((amount * fraction).to_integral_value(ROUND_HALF_EVEN))


def solute_code(formula: str) -> str:
    """Return the formula by which a solute that was declared inert is balanced: no blanks, a plain dot before water."""
    return re.sub("[·⋅∙•*]", ".", "".join(unicodedata.normalize("NFKC", formula).split()))


def list_solutes(workshop: Workshop) -> frozenset[str]:
    """Return the formulas of everything that was declared inert in a workshop. One query."""
    with scope(workshop=workshop):
        return frozenset(map(solute_code, Substance.objects.filter(inert=True).values_list("formula", flat=True)))


def recipe_key(revision: ProductRevision) -> str:
    """Return what a vessel remembers of this revision once it was poured in."""
    return f"{revision.product.uuid}/{revision.number}"


def list_reactivity(workshop: Workshop, keys: frozenset[str]) -> dict[str, list[str]]:
    """Return what each poured-in product revision reacts as, by recipe key. One query."""
    with scopes_disabled():
        revisions = ProductRevision.objects.filter(
            product__workshop=workshop,
            product__uuid__in={UUID(key.partition("/")[0]) for key in keys if not key.startswith(UNKNOWN_LIQUID)},
        ).select_related("product")
        return {recipe_key(row): list(row.reactivity) for row in revisions if recipe_key(row) in keys}
