"""In which units a component is counted: metals and solutes by mass, species by amount of substance; what it is called.

A component's code is the element's symbol, the formula of a solute declared inert, the name of a species, volume or
gross mass.
"""

from chemicals.books.events import SPECIES, VOLUME
from chemicals.science.formula import METALS, element_name


def dimension_of(code: str) -> str:
    """Return the dimension of science.units in which a component is counted."""
    if code == VOLUME:
        return "volume"
    return "amount_of_substance" if code in SPECIES else "mass"


def dimension_per_litre(code: str) -> str:
    """Return the dimension of a component's concentration."""
    return "molar_concentration" if code in SPECIES else "concentration"


def name_of(code: str) -> str:
    """Return the English name of a component: metals by their element, everything else as it is."""
    return element_name(code) if code in METALS else code
