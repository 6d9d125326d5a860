"""Rinses: tanks without flow, tanks through which water runs, and how much of a bath is dragged into them.

Static rinse. Each dip brings D litres of the bath at C0 and, after mixing, takes D litres at the new concentration
away, so that the volume V stays and

    C_n - C0 = (C_{n-1} - C0) V / (V + D),    from clean water C_N = C0 [1 - (V / (V + D))^N].

The usual C0 N D / V counts no drag-out of the rinse itself; the strict series never passes C0. `expm1` and `log1p` keep
the first few dips of a large tank exact. Turned round, the rise of a rinse after N dips gives the drag-out D.

Running rinse, in its steady state: D litres an hour come from the bath at C0 and leave each stage at its concentration,
Q litres an hour of water run. With r = Q / D to a stage,

    fresh water to each of n stages:  C0 / Cn = (1 + r)^n,    counterflow:  C0 / Cn = 1 + r + ... + r^n;

a single rinse is either with n = 1. The usual r = (C0 / Cn)^(1/n) leaves out that drag-out takes liquid along too.
"""

import math
from typing import Final

SLACK: Final = 1e-12  # a target typed from a computed concentration counts as reached by that dip
ROUNDING: Final = 1e-15  # relative: a step of Newton's method that is smaller changes nothing
MOST_STAGES: Final = 20  # more than any line has

_KEPT: Final = "equal drag-in and drag-out"
STATIC_BASIS: Final = f"strict series of a static rinse, C_N = C0 + (C_start - C0) (V / (V + D))^N: {_KEPT}"
DRAG_OUT_BASIS: Final = f"strict series of a static rinse, C_N = C0 [1 - (V / (V + D))^N], solved for D: {_KEPT}"
SERIES_BASIS: Final = f"strict balance of running rinses, C0 / Cn = (1 + Q / D)^n: steady state, {_KEPT}"
COUNTERFLOW_BASIS: Final = (
    f"strict balance of a counterflow, C0 / Cn = 1 + r + ... + r^n with r = Q / D: steady state, {_KEPT}"
)


def static_concentration(volume: float, drag_out: float, dips: int, bath: float, start: float = 0.0) -> float:
    """Concentration after so many dips, in the unit of `bath` and `start`. Volume and drag-out in one unit."""
    return start + (bath - start) * -math.expm1(-dips * math.log1p(drag_out / volume))


def dips_to_reach(volume: float, drag_out: float, target: float, bath: float, start: float = 0.0) -> int | None:
    """The first dip after which the target is reached or passed; None if no number of dips gets there.

    The concentration moves from `start` towards `bath` and never arrives, so that the bath itself is out of reach; a
    target that the start has already passed takes no dip at all.
    """
    rising = bath >= start
    if (target <= start) if rising else (target >= start):
        return 0
    if (target >= bath) if rising else (target <= bath):
        return None
    needed = -math.log1p(-(target - start) / (bath - start)) / math.log1p(drag_out / volume)
    return math.ceil(needed * (1 - SLACK))


def drag_out_per_dip(volume: float, dips: int, rise: float, bath: float) -> float:
    """Drag-out that brings a clean static rinse to `rise` in so many dips, in the unit of `volume`; rise < bath."""
    return volume * math.expm1(-math.log1p(-rise / bath) / dips)


def simple_drag_out_per_dip(volume: float, dips: int, rise: float, bath: float) -> float:
    """The same without what is dragged out of the rinse: always a little less."""
    return volume * rise / (dips * bath)


def water_per_stage(bath: float, target: float, stages: int, *, counterflow: bool) -> float:
    """Water that one stage needs for each litre of drag-out, r = Q / D, so that the last one is at `target` < `bath`.

    In counterflow the stages share this water; in a series each gets as much.
    """
    excess = (bath - target) / target  # C0/Cn - 1, exact also where the ratio is hardly more than 1
    return _counterflow_root(excess, stages) if counterflow else math.expm1(math.log1p(excess) / stages)


def approximate_water_per_stage(bath: float, target: float, stages: int) -> float:
    """The usual form, (C0/Cn)^(1/n), for either arrangement: always a little more."""
    return math.pow(bath / target, 1 / stages)


def stage_concentrations(ratio: float, target: float, stages: int, *, counterflow: bool) -> list[float]:
    """Concentration of each stage, the one after the bath first and `target` last; `ratio` is r = Q / D."""
    grown = [1 + _powers(ratio, left)[0] if counterflow else (1 + ratio) ** left for left in range(stages)]
    return [target * factor for factor in reversed(grown)]


def _counterflow_root(excess: float, stages: int) -> float:
    """The r > 0 with r + r^2 + ... + r^n = excess, by Newton's method.

    Neither r nor r^n is more than the sum, so that the start is not below the root; the sum is convex, so that each
    step stays above it and comes nearer until a float can tell no difference.
    """
    ratio = min(excess, math.pow(excess, 1 / stages))
    while True:
        total, slope = _powers(ratio, stages)
        better = ratio - (total - excess) / slope
        if better >= ratio * (1 - ROUNDING):
            return ratio
        ratio = better


def _powers(ratio: float, stages: int) -> tuple[float, float]:
    """r + r^2 + ... + r^n and its slope, by Horner's scheme."""
    total = slope = 0.0
    for _ in range(stages):
        slope = slope * ratio + total + 1
        total = (total + 1) * ratio
    return total, slope
