"""A height or a mark of a tank's level table, taken for the volume that it stands for."""

from chemicals.books.events import LevelMark as Relied
from chemicals.books.events import Measured
from chemicals.ledger.models import Vessel
from chemicals.process.build.instruments import Used
from chemicals.process.draft import Draft
from chemicals.process.levels import as_height, list_level_marks, same_mark
from chemicals.process.models import LevelMark
from chemicals.science.level import LevelError, Step, add_in_squares, division_of, interpolate
from chemicals.science.quantity import Quantity

NAMED_SD = 10_000
"""Standard uncertainty of a mark that has no height, in ppm of its volume: assumed."""

Level = tuple[Measured, tuple[Relied, ...]]


def find_level(draft: Draft, vessel: Vessel, said: str, *, hot: bool, used: Used, sd: Quantity | None) -> Level | None:
    """Return the volume of a height or mark, and the rows of the table that it was taken from.

    Its uncertainty is what was said, or else half a division of the height as it was written (of a mark with a name
    a hundredth of the volume, assumed) together with that of the gauge.
    """
    marks = draft.known.once((LevelMark, vessel.pk), lambda: list_level_marks(vessel))
    table = [mark for mark in marks if mark.hot] if hot else []
    table = table or [mark for mark in marks if not mark.hot]
    if not table:
        draft.refuse("mark", "This vessel has no level table. Write the volume, or enter its table on its page first.")
        return None
    found = next((mark for mark in table if same_mark(mark.mark, said)), None)
    height = as_height(said)
    if height is not None:
        return _between(draft, table, height, used, sd)
    if found is None:
        names = ", ".join(mark.mark for mark in table)
        draft.refuse("mark", f"The level table has no such mark. Write one of {names}, or a height such as 32 cm.")
        return None
    doubt = add_in_squares(found.volume * NAMED_SD // 10**6, used.doubt(found.volume, None) or 0)
    volume = Measured(said.strip(), "nL", found.volume, doubt if sd is None else sd.base)
    return volume, (Relied(found.mark, found.height, found.volume),)


def _between(draft: Draft, table: list[LevelMark], height: Quantity, used: Used, sd: Quantity | None) -> Level | None:
    rows = {mark.height: mark for mark in table if mark.height is not None}
    steps = [Step(at, rows[at].volume) for at in sorted(rows)]
    found = interpolate(height.base, division_of(height), steps)
    if found is None:
        ends = {"least": rows[steps[0].height].mark, "most": rows[steps[-1].height].mark} if len(steps) > 1 else {}
        error = LevelError("outside", typed=height.typed, **ends) if ends else LevelError("no_heights")
        draft.refuse("mark", error.message)
        return None
    doubt = add_in_squares(found.sd, used.doubt(found.volume, None) or 0)
    volume = Measured(height.typed, "nL", found.volume, doubt if sd is None else sd.base)
    relied = [rows[step.height] for step in dict.fromkeys((found.below, found.above))]
    return volume, tuple(Relied(mark.mark, mark.height, mark.volume) for mark in relied)
