"""Reads of the catalogue."""

import re
import unicodedata
from collections.abc import Iterable
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Decimal
from uuid import UUID

from django.db.models import OuterRef, Prefetch, QuerySet, Subquery
from django_scopes import scope, scopes_disabled

from chemicals.books.events import UNKNOWN_LIQUID, Figure, Recipe, Share
from chemicals.register.models import CompositionLine, ExposureLimit, Form, Product, ProductRevision, Substance
from chemicals.science.formula import METALS, mass_fractions, parse_formula
from chemicals.science.species import nanomoles_per_microgram
from chemicals.science.substances import Starter, list_starters
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


@dataclass(frozen=True)
class Makeup:
    """What follows from a formula: grams per mole, grams of each metal per gram; without one None and nothing."""

    molar_mass: Decimal | None
    metals: dict[str, Decimal]


def get_makeup(substance: Substance) -> Makeup:
    """Return molar mass and metal fractions of a substance."""
    if not substance.formula:
        return Makeup(None, {})
    formula = parse_formula(substance.formula)
    fractions = formula.mass_fractions
    return Makeup(formula.molar_mass, {metal: part for metal, part in fractions.items() if metal in METALS})


def list_missing_starters(substances: Iterable[Substance]) -> list[Starter]:
    """Return the usual substances for which no name, synonym or CAS number among these stands."""
    names: set[str] = set()
    numbers: set[str] = set()
    for row in substances:
        names |= {row.name.casefold(), *(str(name).casefold() for name in row.synonyms)}
        numbers.add(row.cas_number)
    numbers.discard("")
    return [
        row
        for row in list_starters()
        if row.cas_number not in numbers and names.isdisjoint(name.casefold() for name in (row.name, *row.synonyms))
    ]


def list_products_for(member: Membership) -> QuerySet[Product]:
    """Return the products of the member's workshop, by name. One query."""
    with scope(workshop=member.workshop):
        return Product.objects.order_by("name", "supplier")


def list_suppliers_for(member: Membership) -> list[str]:
    """Return who sells the products of the member's workshop, by name. One query."""
    with scope(workshop=member.workshop):
        named = Product.objects.exclude(supplier="").order_by("supplier")
        return list(named.values_list("supplier", flat=True).distinct())


def get_product_for(member: Membership, uuid: UUID) -> Product:
    """Return one product of the member's workshop."""
    try:
        return list_products_for(member).get(uuid=uuid)
    except Product.DoesNotExist as error:
        raise NotFoundError("There is no such product in this workshop.") from error


def list_current_revisions_for(member: Membership) -> QuerySet[ProductRevision]:
    """Return the current revision of every product with all that belongs to it, by product name. Three queries."""
    with scope(workshop=member.workshop):
        newest = ProductRevision.objects.filter(product=OuterRef("product")).order_by("-number")
        return _with_parts(ProductRevision.objects.filter(pk=Subquery(newest.values("pk")[:1]))).order_by(
            "product__name", "product__supplier"
        )


def list_revisions_of(product: Product) -> QuerySet[ProductRevision]:
    """Return all revisions of a product, newest first. Three queries."""
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
    limits = Prefetch("limits", ExposureLimit.objects.select_related("substance").order_by("pk"))
    return revisions.select_related("product", "safety_data_sheet", "created_by__user").prefetch_related(lines, limits)


def build_recipe(revision: ProductRevision, lines: Iterable[CompositionLine] | None = None) -> Recipe:
    """Return the revision as an entry relies on it, per kilogram or litre; ``lines`` where they are at hand.

    Micrograms of each metal and of each solute declared inert, nanomoles of each species that reacts.
    """
    found = revision.lines.all() if lines is None else lines
    shares = [share for line in found for share in _shares(line)]
    density = None if revision.density is None else Figure(revision.density, 0, f"{revision}")
    return Recipe(
        product=revision.product.uuid,
        revision=revision.number,
        name=revision.product.name,
        solid=revision.form != Form.LIQUID,
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
