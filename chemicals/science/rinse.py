"""Static rinse: a tank without flow, into which parts carry solution and from which they carry it away.

Each dip brings D litres of the bath at C0 and, after mixing, takes D litres at the new concentration away, so that the
volume V stays and

    C_n - C0 = (C_{n-1} - C0) V / (V + D),    from clean water C_N = C0 [1 - (V / (V + D))^N].

The usual C0 N D / V counts no drag-out of the rinse itself; the strict series never passes C0. `expm1` and `log1p` keep
the first few dips of a large tank exact.
"""

import math
from typing import Final

SLACK: Final = 1e-12  # a target typed from a computed concentration counts as reached by that dip
BASIS: Final = "strict series of a static rinse, C_N = C0 + (C_start - C0) (V / (V + D))^N: equal drag-in and drag-out"


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
