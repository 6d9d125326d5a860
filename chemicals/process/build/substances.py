"""From an amount as people express it (as a salt, in moles, as a share) to the amount of what the books balance."""

from collections.abc import Sequence
from decimal import ROUND_HALF_EVEN, Decimal

from chemicals.books.events import GROSS_MASS, SPECIES, VOLUME, Held, Measured
from chemicals.ledger.components import dimension_of
from chemicals.process.draft import Draft
from chemicals.process.inputs import HeldRow
from chemicals.register.selectors import solute_code
from chemicals.science.formula import METALS, FormulaError, atomic_weight, metal_fraction, molar_mass, parse_formula
from chemicals.science.quantity import Quantity
from chemicals.science.species import moles_of, nanomoles_per_microgram
from chemicals.science.units import DIMENSIONS

MOLAR = ("amount_of_substance", "molar_concentration")
CYANIDE = "CN"
"""In analyses free cyanide is often expressed as the ion, which is no substance of the table."""


def find_factor(draft: Draft, field: str, component: str, formula: str, said: Quantity) -> Decimal | None:
    """Return by what an amount as expressed is multiplied: base units of the component per base unit as typed.

    ``formula`` empty means the component itself. Notes under the field what makes no sense.
    """
    formula, molar = formula.strip(), said.dimension in MOLAR
    if component in (VOLUME, GROSS_MASS) and not formula:
        return Decimal(1)
    try:
        if component in METALS:
            factor = _of_metal(component, formula or component, molar=molar)
        elif component in SPECIES:
            factor = _of_species(component, formula, molar=molar)
        else:
            factor = _of_solute(component, formula or component, molar=molar)
    except FormulaError as error:
        draft.refuse(field, str(error))
        return None
    if not factor:
        missing = f"{formula} holds no {component}." if formula else f"What a gram of {component} is nobody can tell."
        draft.refuse(field, f"{missing} {_remedy(component)}")
        return None
    return factor


def _remedy(component: str) -> str:
    if component in SPECIES:
        return "Write moles, or the formula it was expressed as, for example NaCN, H2SO4 or CrO3."
    return "Write the formula of the salt, or leave it empty."


def _of_metal(metal: str, formula: str, *, molar: bool) -> Decimal:
    if molar:  # nanomoles times grams per mole are nanograms
        return dict(parse_formula(formula).atoms).get(metal, 0) * atomic_weight(metal) / 1000
    return metal_fraction(formula, metal)


def _of_species(species: str, formula: str, *, molar: bool) -> Decimal:
    if formula == CYANIDE and species == "free cyanide":
        return Decimal(1) if molar else 1000 / molar_mass(CYANIDE)
    if molar:
        return Decimal(moles_of(formula).get(species, 0) if formula else 1)
    return nanomoles_per_microgram(formula).get(species, Decimal(0)) if formula else Decimal(0)


def _of_solute(solute: str, formula: str, *, molar: bool) -> Decimal:
    if solute_code(formula) != solute:
        return Decimal(0)
    return molar_mass(solute) / 1000 if molar else Decimal(1)


def times(factor: Decimal, base: int) -> int:
    """Return the amount of the component, rounded half-even."""
    return int((factor * base).to_integral_value(ROUND_HALF_EVEN))


def find_held(
    draft: Draft, field: str, rows: Sequence[HeldRow], *, volume: Quantity | None, mass: Quantity | None
) -> tuple[Held, ...]:
    """Return what was found of each component, and note what makes no sense row by row."""
    found = [_find_one(draft, f"{field}.{number}.", row, volume, mass) for number, row in enumerate(rows)]
    held = tuple(row for row in found if row is not None)
    if len({row.component for row in held}) < len(held):
        draft.refuse(field, "A metal stands twice in the list. Add the two together.")
    return held


def _find_one(draft: Draft, at: str, row: HeldRow, volume: Quantity | None, mass: Quantity | None) -> Held | None:
    component = draft.component(f"{at}metal", row.metal)
    whole = _whole(draft, f"{at}amount", row.amount, volume, mass)
    if component is None or whole is None:
        return None
    factor = find_factor(draft, f"{at}expressed_as", component, row.expressed_as, row.amount)
    if factor is None:
        return None
    return Held(component, express(row.amount, row.expressed_as, dimension_of(component), times(factor, whole)))


def express(said: Quantity, expressed_as: str, dimension: str, base: int, sd: int | None = None) -> Measured:
    """Return an amount as it was said, if in other words with those, and its value in base units of the dimension."""
    formula = expressed_as.strip()
    if said.dimension == dimension and not formula:
        return Measured(said.typed, said.unit, base, sd)
    return Measured(f"{said.typed} {formula}".strip(), DIMENSIONS[dimension].base_unit, base, sd)


def _whole(draft: Draft, field: str, said: Quantity, volume: Quantity | None, mass: Quantity | None) -> int | None:
    """Return the mass or the moles that were meant: of a concentration or a share, of the whole volume or mass."""
    if said.dimension in ("concentration", "molar_concentration"):
        if volume is None:
            draft.refuse(field, "A concentration needs the volume. Write the volume, or a mass here.")
            return None
        return said.base * volume.base // 10**9
    if said.dimension == "fraction":
        if mass is None:
            draft.refuse(field, "A share needs the mass. Write the mass of the whole, or of this metal.")
            return None
        return said.base * mass.base // 10**6
    return said.base
