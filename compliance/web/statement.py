"""The words of a book balance: its lines in order, and what may be said about what nobody recorded."""

from dataclasses import dataclass

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.balance.selectors import Amount, BookBalance
from chemicals.books import events
from compliance.web.words import BOUNDARIES, amount

CAME = (events.OPENING, events.SUPPLIER, events.WATER_SUPPLY)
LEFT = (events.PARTS, events.AIR, events.SEWER, events.SAMPLE, events.SPILL, events.RECEIVER, events.REACTION)
NAMES = {
    events.OPENING: gettext_lazy("found when counting began"),
    events.SUPPLIER: gettext_lazy("received from suppliers"),
    events.WATER_SUPPLY: gettext_lazy("from the water supply"),
    events.PARTS: gettext_lazy("went onto and with parts"),
    events.AIR: gettext_lazy("went to air"),
    events.SEWER: gettext_lazy("went to the sewer"),
    events.SAMPLE: gettext_lazy("went out as samples"),
    events.SPILL: gettext_lazy("was spilled"),
    events.RECEIVER: gettext_lazy("handed over as waste"),
    events.REACTION: gettext_lazy("went to reaction"),
}


@dataclass(frozen=True)
class Line:
    """A line of the balance: its key, its name, the amount with sign."""

    key: str
    name: str
    value: int | None
    sd: int


def lines_of(balance: BookBalance) -> list[Line]:
    """Return the lines from the opening to the closing; a boundary that nothing crossed is left out."""
    crossed = [
        Line(boundary, str(NAMES.get(boundary, BOUNDARIES[boundary])), row.value, row.sd)
        for boundary in (*CAME, *LEFT)
        if (row := balance.boundaries.get(boundary)) is not None
    ]
    return [
        _line("held at the beginning", _("held at the beginning"), balance.opening),
        *crossed,
        _line("unaccounted", _("unaccounted"), balance.unaccounted),
        _line("held at the end", _("held at the end"), balance.closing),
    ]


def _line(key: str, name: str, found: Amount) -> Line:
    return Line(key, name, found.value, found.sd)


def verdict_of(balance: BookBalance) -> str:
    """Return what may be said of what nobody recorded: never that nothing was lost."""
    net, visible = balance.unaccounted, balance.smallest_visible
    metal = balance.component
    if net.value is None or visible is None:
        places = ", ".join(row.vessel.name for row in balance.vessels if None in (row.opening.value, row.closing.value))
        text = _("Unknown, so nothing can be said about losses: %(places)s. An accepted analysis settles it.")
        return text % {"places": places or _("an unknown amount went out")}
    if events.UNACCOUNTED not in balance.boundaries:
        return _("Nothing was measured against the books in this period, so no loss could have shown.")
    if abs(net.value) > 1.96 * net.sd and net.value:
        word = _("missing") if net.value < 0 else _("found")
        text = _("%(amount)s %(word)s beyond what was recorded. It is more than the readings can explain.")
        return text % {"amount": amount(abs(net.value), metal), "word": word}
    text = _("Nothing shown to be missing; up to %(most)s could be. A loss under %(least)s could not have been seen.")
    return text % {"most": amount(abs(net.value) + 2 * net.sd, metal), "least": amount(visible, metal)}
