"""Runs: metal onto parts, metal from soluble anodes, drag-out along the route."""

from decimal import ROUND_HALF_EVEN, Decimal, localcontext

from chemicals.books.events import ASSUMED, COMPUTED, GROSS_MASS, OBSERVED, PARTS, Deposit, Measured, Run
from chemicals.books.fold.state import Folding, root

MILLION = 10**6


def fold_run(folding: Folding, event: Run) -> None:
    """bath -> parts, anode set -> bath, then each step drags out to the next and drags in."""
    if event.deposit is not None and event.route:
        _deposit(folding, event, event.route[0].tank, event.deposit)
    ends = [step.tank for step in event.route[1:]] + [PARTS]
    for step, end in zip(event.route, ends, strict=True):
        if step.drag_out.base:
            folding.pour(step.tank, end, step.drag_out.base, step.drag_out.sd, ASSUMED)


def _deposit(folding: Folding, event: Run, bath: str, figures: Deposit) -> None:
    onto_parts = _weighed(event) or _by_faraday(event, figures)
    if onto_parts is None:
        folding.move_unknown(figures.metal, bath, PARTS)
    else:
        _plate(folding, figures.metal, bath, PARTS, *onto_parts)
    if event.anode is None:
        return
    charge = charge_of(event)
    if charge is None:
        folding.move_unknown(figures.metal, event.anode, bath)
        return
    dissolved = faraday_mass(charge.base, figures, MILLION)
    _plate(folding, figures.metal, event.anode, bath, dissolved, _relative(dissolved, charge), COMPUTED)


def _plate(folding: Folding, metal: str, source: str, target: str, amount: int, sd: int, basis: str) -> None:
    """Move metal without liquid: its mass leaves with it."""
    folding.move(metal, source, target, amount, sd, basis)
    folding.move(GROSS_MASS, source, target, amount, sd, basis)


def _weighed(event: Run) -> tuple[int, int, str] | None:
    before, after = event.weight_before, event.weight_after
    if before is None or after is None:
        return None
    variance = (before.sd or 0) ** 2 + (after.sd or 0) ** 2
    return after.base - before.base, root(variance), OBSERVED


def _by_faraday(event: Run, figures: Deposit) -> tuple[int, int, str] | None:
    charge = charge_of(event)
    if charge is None:
        return None
    mass = faraday_mass(charge.base, figures, figures.efficiency.base)
    sd = _relative(mass, charge) + mass * figures.efficiency.sd // figures.efficiency.base
    return mass, sd, COMPUTED


def charge_of(event: Run) -> Measured | None:
    """Return the charge in microcoulombs: as read, else current (uA) times time (ms); None where neither is known."""
    if event.charge is not None:
        return event.charge
    if event.current is None or event.time is None:
        return None
    base = event.current.base * event.time.base // 1000
    sd = _relative(base, event.current) + _relative(base, event.time)
    return Measured(f"{event.current.typed} x {event.time.typed}", "uC", base, sd)


def faraday_mass(charge: int, figures: Deposit, efficiency_ppm: int) -> int:
    """Return the mass in micrograms: M Q / (z F) x efficiency (Faraday's laws of electrolysis)."""
    with localcontext() as context:
        context.prec = 40
        mass = Decimal(figures.molar_mass) * charge * efficiency_ppm
        mass /= figures.valence * Decimal(figures.faraday) * MILLION
        return int(mass.to_integral_value(ROUND_HALF_EVEN))


def _relative(amount: int, measured: Measured) -> int:
    """Return the uncertainty of an amount that is proportional to a measured figure."""
    return abs(amount) * (measured.sd or 0) // max(abs(measured.base), 1)
