"""How pages say what the books know: amounts, ends of a movement, kinds, findings. Unknown is a word, never 0."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from decimal import Context, Decimal
from uuid import UUID

from django.utils import timezone
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy, pgettext_lazy

from chemicals.balance.selectors import FlowEnd
from chemicals.books import clearance, events
from chemicals.books.fold.state import EVERY, FINDINGS, Finding, Transfer
from chemicals.books.occurred import DAY
from chemicals.ledger.models import Finding as FoundBefore
from chemicals.ledger.models import Vessel
from chemicals.process.inputs import INPUTS
from chemicals.science.formula import element_name
from chemicals.science.quantity import show
from chemicals.science.units import find, to_base

BOUNDARIES = {
    events.OPENING: gettext_lazy("opening"),
    events.SUPPLIER: gettext_lazy("supplier"),
    events.WATER_SUPPLY: gettext_lazy("water supply"),
    events.PARTS: gettext_lazy("parts"),
    events.AIR: gettext_lazy("air"),
    events.SEWER: gettext_lazy("sewer"),
    events.SAMPLE: gettext_lazy("sample"),
    events.SPILL: gettext_lazy("spill"),
    events.RECEIVER: gettext_lazy("receiver"),
    events.REACTION: gettext_lazy("reaction"),
    events.UNACCOUNTED: gettext_lazy("unaccounted"),
}
BASES = {
    events.OBSERVED: gettext_lazy("observed"),
    events.COMPUTED: gettext_lazy("computed"),
    events.ASSUMED: gettext_lazy("assumed"),
}
VERDICTS = {
    clearance.ALLOWED: gettext_lazy("allowed"),
    clearance.OVERRIDDEN: gettext_lazy("overridden"),
    clearance.INCIDENT: gettext_lazy("incident"),
    clearance.NOT_ASKED: gettext_lazy("not asked"),
}
KINDS = {
    events.Opening.KIND: gettext_lazy("opening"),
    events.Receipt.KIND: gettext_lazy("receipt"),
    events.MakeUp.KIND: gettext_lazy("make-up"),
    events.TopUp.KIND: gettext_lazy("top-up"),
    events.Run.KIND: gettext_lazy("run"),
    events.Move.KIND: gettext_lazy("move"),
    events.DrumOff.KIND: gettext_lazy("drum off"),
    events.LevelReading.KIND: gettext_lazy("level reading"),
    events.Analysis.KIND: gettext_lazy("analysis"),
    events.Acceptance.KIND: gettext_lazy("acceptance"),
    events.HandOver.KIND: gettext_lazy("hand-over"),
    events.Cancellation.KIND: gettext_lazy("cancellation"),
    events.Paper.KIND: gettext_lazy("paper"),
}
"""Every kind of entry as a person reads it."""

UNKNOWN = gettext_lazy("unknown")
LIQUID = pgettext_lazy("what moved", "liquid")
WEIGHT = pgettext_lazy("what moved", "weight in all")


def amount(base: int | None, component: str) -> str:
    """Return an amount of a component: grams, litres, or the word unknown."""
    return str(UNKNOWN) if base is None else show(base, dimension_of(component))


def with_uncertainty(base: int | None, sd: int, component: str) -> str:
    """Return an amount and its standard uncertainty: "0.83 ± 0.02 g"."""
    return str(UNKNOWN) if base is None else in_one_unit(base, sd, dimension_of(component))


def in_one_unit(base: int, sd: int, dimension: str) -> str:
    """Return base units of any dimension with their standard uncertainty, both in the unit that suits the amount."""
    shown = show(base, dimension)
    number, _space, word = shown.partition(" ")
    unit = find(word, dimension)
    if not sd or unit is None:
        return shown
    doubt = Context(prec=2).plus(Decimal(sd) / to_base(Decimal(1), unit, dimension))
    return f"{number} ± {doubt:f} {word}"


def signed(base: int | None, sd: int, component: str) -> str:
    """Return an amount with its sign, for what came (+) and what left (−)."""
    if base is None:
        return str(UNKNOWN)
    sign = "+" if base > 0 else "−" if base < 0 else ""
    return f"{sign}{with_uncertainty(abs(base), sd, component)}"


def dimension_of(component: str) -> str:
    """Return the dimension in which a component is counted."""
    return "volume" if component == events.VOLUME else "mass"


def component_name(component: str) -> str:
    """Return a component as people say it: copper, liquid, weight in all."""
    if component == events.VOLUME:
        return str(LIQUID)
    if component == events.GROSS_MASS:
        return str(WEIGHT)
    return _("anything else") if component == EVERY else element_name(component)


def end_name(end: FlowEnd) -> str:
    """Return the name of the end of a flow: a vessel or a boundary."""
    return end.name if isinstance(end, Vessel) else str(BOUNDARIES[end])


def verb_of(kind: str) -> str:
    """Return the verb in addresses that records entries of this kind; empty if none does."""
    verb = kind.replace(" ", "-")
    return verb if verb in INPUTS else ""


def moment(at: datetime, precision: str = "") -> str:
    """Return a moment in the workshop's zone, ISO 8601: the day alone where no more is known."""
    local = timezone.localtime(at)
    return local.date().isoformat() if precision == DAY else local.strftime("%Y-%m-%d %H:%M")


@dataclass(frozen=True)
class Ends:
    """Names of the ends of movements: things by their uuid as text, most of them vessels, and the boundaries."""

    vessels: Mapping[str, str]

    @classmethod
    def of(cls, vessels: Iterable[tuple[UUID, str]]) -> "Ends":
        """Return the names of these vessels."""
        return cls({str(uuid): name for uuid, name in vessels})

    def name(self, end: str) -> str:
        """Return the name of a vessel or of a boundary."""
        return str(BOUNDARIES.get(end, "")) or self.vessels.get(end, end)

    def names(self, ends: Sequence[str]) -> str:
        """Return several names, as a route is read."""
        return " → ".join(self.name(end) for end in ends)


def movement(transfer: Transfer, ends: Ends) -> str:
    """Return a movement as a sentence."""
    return _("%(amount)s %(what)s goes from %(source)s to %(target)s, %(basis)s.") % {
        "amount": with_uncertainty(transfer.amount, transfer.sd, transfer.component),
        "what": component_name(transfer.component),
        "source": ends.name(transfer.source),
        "target": ends.name(transfer.target),
        "basis": BASES[transfer.basis],
    }


@dataclass(frozen=True)
class Follows:
    """What follows from an entry as sentences: of metals, and of liquid and weight, which go along."""

    metals: list[str]
    others: list[str]

    @classmethod
    def of(cls, transfers: Sequence[Transfer], ends: Ends) -> "Follows":
        """Return movements as sentences."""
        others = {events.VOLUME: 0, events.GROSS_MASS: 1}
        along = sorted((t for t in transfers if t.component in others), key=lambda t: others[t.component])
        metals = [movement(t, ends) for t in transfers if t.component not in others]
        return cls(metals, [movement(t, ends) for t in along])


def finding(found: Finding | FoundBefore, ends: Ends) -> str:
    """Return a finding as a sentence that says where and of what."""
    places = list(dict.fromkeys(ends.name(end) for end in (found.source, found.target) if end))
    return f"{' → '.join(places)}, {component_name(found.component)}: {_(FINDINGS[found.code])}"
