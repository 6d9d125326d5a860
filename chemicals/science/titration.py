"""Titration: concentration of an analyte from the volume of titrant, and its uncertainty.

    c = t f (V - B) n M / S

t titrant (mol/L), f its titre, V volume to the end point, B blank, S sample, n moles of analyte per mole of titrant, M
grams per mole. V, B and S stand in one unit. The uncertainty is that of JCGM 100:2008 (GUM), 5.1.2: to first order,
inputs not correlated, each contributing its standard uncertainty times how steeply the result depends on it.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Final

BASIS: Final = (
    "c = titrant x titre x (volume - blank) x mole ratio x molar mass / sample; uncertainty: JCGM 100:2008, 5.1.2, "
    "first order, not correlated"
)


@dataclass(frozen=True)
class Titration:
    """One titration, with volumes in one unit."""

    titrant_mol_per_l: float
    titre: float
    volume: float
    blank: float
    sample: float
    mole_ratio: float
    molar_mass: float

    @property
    def concentration_g_per_l(self) -> float:
        """Grams of the analyte per litre of the sample."""
        return self._per_volume * (self.volume - self.blank)

    @property
    def sensitivities(self) -> dict[str, float]:
        """By how many g/L the result changes with each input, per unit of the input."""
        found = self.concentration_g_per_l
        return {
            "titrant": found / self.titrant_mol_per_l,
            "titre": found / self.titre,
            "volume": self._per_volume,
            "blank": -self._per_volume,
            "sample": -found / self.sample,
            "mole_ratio": found / self.mole_ratio,
        }

    @property
    def _per_volume(self) -> float:
        return self.titrant_mol_per_l * self.titre * self.mole_ratio * self.molar_mass / self.sample


def combine(contributions: Mapping[str, float]) -> tuple[float, dict[str, float]]:
    """Standard uncertainty of a result, and the share of its variance that each input contributes.

    `contributions` are sensitivity times standard uncertainty, in the unit of the result; without any doubt there is
    nothing to share.
    """
    whole = math.hypot(*contributions.values())
    return whole, {name: (part / whole) ** 2 for name, part in contributions.items()} if whole else {}
