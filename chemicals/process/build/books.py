"""From what was said of the books themselves to events: cancellations and corrections."""

from datetime import datetime

from chemicals.books import events
from chemicals.books.events import GROSS_MASS, VOLUME
from chemicals.ledger.components import dimension_of
from chemicals.process import inputs
from chemicals.process.build.stock import check_same_dimension
from chemicals.process.build.substances import express, find_factor, times
from chemicals.process.draft import Draft
from chemicals.process.inputs.books import MORE

NEVER_CANCELLED = (
    events.Cancellation.KIND, events.Paper.KIND, events.PeriodClosing.KIND, events.PeriodReopening.KIND,
)  # fmt: skip


def build_cancellation(draft: Draft, now: datetime, data: inputs.CancellationInput) -> events.Cancellation | None:
    """Return the event of a cancellation."""
    entry = draft.entry("entry", data.entry)
    if entry is not None and entry.kind in NEVER_CANCELLED:
        draft.refuse("entry", f"A {entry.kind} cannot be cancelled. Record what is right as a new entry.")
    if not data.reason.strip():
        draft.refuse("reason", "Write why this entry was a mistake.")
    if draft.errors or entry is None:
        return None
    return events.Cancellation(entry.uuid, data.reason.strip())


def build_correction(draft: Draft, now: datetime, data: inputs.CorrectionInput) -> events.Correction | None:
    """Return the event of a correction: what there is more or less than the books said."""
    entry, vessel = draft.entry("entry", data.entry), draft.vessel(data, "vessel")
    found = [_change(draft, f"changes.{number}.", row) for number, row in enumerate(data.changes)]
    changes = tuple(change for change in found if change is not None)
    if not data.changes:
        draft.refuse("changes", "Write what there is more or less of.")
    if len({change.component for change in changes}) < len(changes):
        draft.refuse("changes", "A metal stands twice in the list. Add the two together.")
    if not data.reason.strip():
        draft.refuse("reason", "Write what was wrong with the entry.")
    if draft.errors or entry is None or vessel is None:
        return None
    return events.Correction(entry.uuid, str(vessel.uuid), changes, data.reason.strip())


def _change(draft: Draft, at: str, row: inputs.ChangeRow) -> events.Change | None:
    component = draft.component(f"{at}metal", row.metal, bulk=True)
    check_same_dimension(draft, row.amount, row.sd, at)
    if component is None:
        return None
    whole = {VOLUME: "volume", GROSS_MASS: "mass"}.get(component)
    if (row.amount.dimension == "volume") != (whole == "volume") or (whole and row.amount.dimension != whole):
        draft.refuse(f"{at}amount", "Write a volume for the liquid, a mass for the weight, a mass or moles otherwise.")
        return None
    factor = find_factor(draft, f"{at}expressed_as", component, row.expressed_as, row.amount)
    if factor is None:
        return None
    base, sd = times(factor, row.amount.base), None if row.sd is None else times(factor, row.sd.base)
    amount = express(row.amount, row.expressed_as, dimension_of(component), base, sd)
    return events.Change(component, amount, found=row.change == MORE)
