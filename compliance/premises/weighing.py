"""How much of a sort stands in a place, how sure that is, and what that says of a limit.

Every vessel counts whole. What is unknown is never taken as full, nor as nothing: the sum is a least one then.
"""

from collections.abc import Iterable
from dataclasses import dataclass
from math import isqrt

from chemicals.books.events import GROSS_MASS, VOLUME
from chemicals.science.decision import RISK, Verdict, decide
from compliance.premises.models import Measure
from compliance.premises.selectors import Standing, is_stock
from compliance.premises.sorts import Nature

COMPONENTS = {Measure.VOLUME: VOLUME, Measure.MASS: GROSS_MASS}
MILLILITRE = 10**6
"""Nanolitres; a density is in micrograms per millilitre."""


@dataclass(frozen=True)
class Amount:
    """Base units with standard uncertainty; None is unknown. ``elsewise``: only the other measure is known."""

    base: int | None
    sd: int = 0
    elsewise: bool = False


def amount_in(standing: Standing, measure: Measure) -> Amount:
    """Return how much a vessel holds by a measure; of one product as bought also by its density, taken as exact."""
    held = {row.component: row for row in standing.held}
    wanted = held.pop(COMPONENTS[measure], None)
    other = held.get(COMPONENTS[Measure.MASS if measure == Measure.VOLUME else Measure.VOLUME])
    if wanted is not None and wanted.amount is not None and wanted.amount > 0:
        return Amount(wanted.amount, wanted.sd)
    if other is None or other.amount is None or other.amount <= 0:
        nothing = wanted is not None and wanted.amount == 0 and (other is None or other.amount == 0)
        return Amount(0, wanted.sd) if nothing and wanted is not None else Amount(None)
    density = _density_of(standing)
    if density is None:
        return Amount(None, elsewise=True)
    times, by = (density, MILLILITRE) if measure == Measure.MASS else (MILLILITRE, density)
    return Amount(other.amount * times // by, other.sd * times // by)


def _density_of(standing: Standing) -> int | None:
    """Return the density of what stands as bought, if one product is all that is in it."""
    if not is_stock(standing.vessel) or standing.unnamed or len(standing.revisions) != 1:
        return None
    return standing.revisions[0].density


@dataclass(frozen=True)
class Weighed:
    """A sum against a limit: base units, standard uncertainty, verdict; why it cannot be told, by number of vessels.

    ``counted`` vessels are of the sort, of which ``unknown`` have no known amount and ``elsewise`` one of the other
    measure alone; ``unsure`` more may be of the sort.
    """

    least: int
    sd: int
    verdict: Verdict
    counted: tuple[Standing, ...]
    unknown: int
    elsewise: int
    unsure: int

    @property
    def is_least(self) -> bool:
        """Whether there may be more than the sum."""
        return bool(self.unknown or self.elsewise or self.unsure)


def weigh(
    here: Iterable[tuple[Standing, Nature]], sort: str, measure: Measure, limit: int, *, risk: float = RISK
) -> Weighed:
    """Add up what is of a sort and compare it with the limit.

    What may be of the sort decides as well: it is within only if it would be with all of that. Amounts of several
    vessels are taken as independent of each other.
    """
    listed = list(here)
    counted = tuple(standing for standing, nature in listed if sort in nature.sorts)
    maybe = [amount_in(standing, measure) for standing, nature in listed if nature.may_be(sort)]
    known = [amount_in(standing, measure) for standing in counted]
    least, sd = _add(known)
    most, most_sd = _add([*known, *maybe])
    missing = any(amount.base is None for amount in (*known, *maybe))
    verdict = decide(least, sd, limit, risk=risk).verdict
    if verdict == "within" and (missing or decide(most, most_sd, limit, risk=risk).verdict != "within"):
        verdict = "undecided"
    elsewise = sum(amount.elsewise for amount in known)
    unknown = sum(amount.base is None for amount in known) - elsewise
    return Weighed(least, sd, verdict, counted, unknown, elsewise, len(maybe))


def _add(amounts: Iterable[Amount]) -> tuple[int, int]:
    """Return the sum of what is known, and its standard uncertainty."""
    known = [amount for amount in amounts if amount.base is not None]
    return sum(amount.base or 0 for amount in known), isqrt(sum(amount.sd**2 for amount in known))
