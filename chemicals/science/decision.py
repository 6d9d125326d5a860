"""Is a value within its limit? Probability, verdict and guard band, after JCGM 106:2012 (clauses 7 and 8).

The value x with its standard uncertainty u stands for a distribution of what the true value may be. `within` is said
only if the probability of the wrong side is at most the risk, `outside` only if that of the right side is; between the
two it is undecided: have it analysed. The guard band w is the distance from the limit, on its good side, at which the
verdict turns to within.
"""

import math
from dataclasses import dataclass
from statistics import NormalDist
from typing import Final, Literal

Direction = Literal["below", "above"]
Distribution = Literal["normal", "lognormal"]
Verdict = Literal["within", "outside", "undecided"]

DIRECTIONS: Final[tuple[Direction, ...]] = ("below", "above")
DISTRIBUTIONS: Final[tuple[Distribution, ...]] = ("normal", "lognormal")
BASIS: Final = "JCGM 106:2012, conformance probability and one-sided guard band"
RISK: Final = 0.05


@dataclass(frozen=True)
class Decision:
    """Probability that the true value exceeds the limit, verdict, and guard band in the unit of the value."""

    probability_over: float
    verdict: Verdict
    guard_band: float


def decide(
    value: float,
    sd: float,
    limit: float,
    *,
    direction: Direction = "below",
    risk: float = RISK,
    distribution: Distribution = "normal",
) -> Decision:
    """Compare a value with a limit that it must stay `below`, or must not fall below (`above`).

    One unit for all; 0 < risk <= 0.5; sd >= 0, where 0 means exactly known and a value on the limit is within.
    Lognormal means that x and u are mean and standard deviation of a lognormal law, with x and the limit positive; its
    guard band assumes the same relative uncertainty at the limit.
    """
    place, scale, bound = value, sd, limit
    if distribution == "lognormal":
        scale = math.sqrt(math.log1p((sd / value) ** 2))
        place, bound = math.log(value) - scale**2 / 2, math.log(limit)
    over, under = _chance_positive(place - bound, scale), _chance_positive(bound - place, scale)
    wrong, right = (over, under) if direction == "below" else (under, over)
    verdict: Verdict = "within" if wrong <= risk else "outside" if right <= risk else "undecided"
    margin = NormalDist().inv_cdf(1 - risk) * scale
    if distribution == "lognormal":
        sign = -1 if direction == "below" else 1
        margin = sign * limit * math.expm1(scale**2 / 2 + sign * margin)
    return Decision(over, verdict, margin)


def _chance_positive(mean: float, scale: float) -> float:
    """P(N(mean, scale) > 0), right in the far tails too, where 1 - cdf would round to 0."""
    if scale == 0:
        return 1.0 if mean > 0 else 0.0
    return 0.5 * math.erfc(-mean / (scale * math.sqrt(2)))
