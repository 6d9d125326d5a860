"""The calculation `limit`: is a value within its limit?"""

from dataclasses import dataclass
from typing import Annotated, Final

from chemicals.science import decision
from chemicals.science.calculation import BASIS, Calculation, Check, Output, choice, number, quantity


@dataclass(frozen=True)
class LimitInput:
    """A value, its standard uncertainty and its limit, all in one unit."""

    value: Annotated[float, number("Value", "The estimate, a bare number.", "1.9")]
    sd: Annotated[float, number("Standard uncertainty", "In the unit of the value; 0 if exact.", "0.1", minimum=0)]
    limit: Annotated[float, number("Limit", "In the unit of the value.", "2.07")]
    direction: Annotated[
        decision.Direction,
        choice(
            "Direction", "below: must not exceed the limit; above: must not fall below it.", decision.DIRECTIONS,
            default="below",
        ),
    ]  # fmt: skip
    risk: Annotated[
        float,
        quantity(
            "fraction", "1", "Risk", "Probability of a wrong verdict that is accepted.", "0.05",
            maximum=0.5, default="0.05",
        ),
    ]  # fmt: skip
    distribution: Annotated[
        decision.Distribution,
        choice("Distribution", "Of what the true value may be.", decision.DISTRIBUTIONS, default="normal"),
    ]


@dataclass(frozen=True)
class LimitOutput:
    """The verdict."""

    probability_over: Annotated[float, Output("Probability over the limit", "That the true value exceeds it.")]
    verdict: Annotated[decision.Verdict, Output("Verdict", "within, outside, or undecided: have it analysed.")]
    guard_band: Annotated[float, Output("Guard band", "How far from the limit the verdict turns to within.")]
    basis: Annotated[str, BASIS]


def _limit(given: LimitInput) -> LimitOutput:
    found = decision.decide(
        given.value, given.sd, given.limit, direction=given.direction, risk=given.risk, distribution=given.distribution
    )
    basis = f"{decision.BASIS}, {given.distribution} distribution"
    return LimitOutput(found.probability_over, found.verdict, found.guard_band, basis)


def _may_be_lognormal(amount: float, distribution: str) -> bool:
    return distribution != "lognormal" or amount > 0


_LOGNORMAL: Final = "A lognormal value is more than 0: write a positive number or another distribution."

LIMIT: Final = Calculation(
    "limit", "Limit", "Is a value within its limit, at a stated risk?",
    LimitInput, LimitOutput, _limit, {"value": 1.9, "sd": 0.1, "limit": 2.07},
    tuple(Check((name, "distribution"), _may_be_lognormal, _LOGNORMAL) for name in ("value", "limit")),
)  # fmt: skip
