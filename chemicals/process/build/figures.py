"""Figures that an entry relies on where nobody measured: each is uncertain, and its text says that it is assumed."""

from chemicals.books.events import Figure

L, KG = 10**9, 10**9
"""Nanolitres in a litre, micrograms in a kilogram."""
NOTHING = Figure(0, 0, "none of what is dissolved, assumed")
SOLUTION_DENSITY = Figure(1_100_000, 100_000, "assumed for a plating solution: 1.1 g/mL, uncertain by 0.1 g/mL")
LIQUID_BRINGS_ITS_OWN = Figure(0, 0, "a liquid brings its own volume")
IN_CARTRIDGE = Figure(
    L // 4, L // 8, "assumed for a drained filter cartridge: 0.25 L, uncertain by half of it (common practice)"
)
IN_CARBON_PER_KG = Figure(
    2 * L, L, "assumed for drained carbon: 2 L for each kilogram, uncertain by half of it (common practice)"
)
IN_RESIN_PER_KG = Figure(
    L // 2, L // 4, "assumed for a drained resin: 0.5 L for each kilogram, uncertain by half of it (common practice)"
)
RESIN_KEEPS = Figure(
    900_000, 100_000, "assumed for a fresh resin: nine tenths of the metal, uncertain by one (common practice)"
)
RACK_SHARE = Figure(
    30_000, 15_000, "assumed for racks with bare tips: 3 % of the deposit, uncertain by half of it (common practice)"
)
RECOVERY = Figure(
    500_000, 250_000, "assumed for a recovery cell in a rinse: 50 % of the current, uncertain by half (common practice)"
)


def for_each_kilogram(figure: Figure, mass: int) -> Figure:
    """Return a figure per kilogram for a mass in micrograms."""
    return Figure(figure.base * mass // KG, figure.sd * mass // KG, figure.source)
