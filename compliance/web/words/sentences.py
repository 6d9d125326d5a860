"""What follows from an entry as sentences: movements and findings."""

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.books import events
from chemicals.books.fold.state import FINDINGS, Finding, Transfer
from chemicals.ledger.models import Finding as FoundBefore
from compliance.web.words.amounts import component_name, with_uncertainty
from compliance.web.words.ends import Ends
from compliance.web.words.kinds import BASES
from compliance.web.words.reasons import reason

ALONG = (events.VOLUME, events.GROSS_MASS)
"""What goes along with substances."""


def movement(transfer: Transfer, ends: Ends) -> str:
    """Return a movement as a sentence."""
    return _("%(amount)s %(what)s goes from %(source)s to %(target)s, %(basis)s.") % {
        "amount": with_uncertainty(transfer.amount, transfer.sd, transfer.component),
        "what": component_name(transfer.component),
        "source": ends.name(transfer.source),
        "target": ends.name(transfer.target),
        "basis": BASES[transfer.basis],
    }


def went(transfer: Transfer, ends: Ends, why: str = "") -> str:
    """Return a movement of a recorded entry as a sentence, with its basis and why it is so much."""
    return _happened(transfer) % {
        "amount": with_uncertainty(transfer.amount, transfer.sd, transfer.component),
        "what": component_name(transfer.component),
        "source": ends.name(transfer.source),
        "target": ends.name(transfer.target),
        "basis": f"{BASES[transfer.basis]} {why}".strip(),
    }


def _happened(transfer: Transfer) -> str:
    """Return the sentence without its amounts and names."""
    for end, side in ((transfer.source, 0), (transfer.target, 1)):
        if end == events.REACTION and transfer.component == events.VOLUME:
            return str(SWELLED[side])
        if end in HAPPENED:
            return str(HAPPENED[end][side])
    return _("%(amount)s %(what)s went from %(source)s to %(target)s, %(basis)s.")


HAPPENED = {
    events.OPENING: (
        gettext_lazy("%(amount)s %(what)s was in %(target)s, %(basis)s."),
        gettext_lazy("%(amount)s %(what)s was not in %(source)s any more, %(basis)s."),
    ),
    events.UNACCOUNTED: (
        gettext_lazy("%(amount)s %(what)s more than booked was in %(target)s, unaccounted, %(basis)s."),
        gettext_lazy("%(amount)s %(what)s was missing in %(source)s, unaccounted, %(basis)s."),
    ),
    events.REACTION: (
        gettext_lazy("%(amount)s %(what)s formed in %(target)s, %(basis)s."),
        gettext_lazy("%(amount)s %(what)s reacted away in %(source)s, %(basis)s."),
    ),
}
"""What came from a boundary that is no place, and what went to it, as sentences."""

SWELLED = (
    gettext_lazy("The liquid in %(target)s swelled by %(amount)s, %(basis)s."),
    gettext_lazy("The liquid in %(source)s shrank by %(amount)s, %(basis)s."),
)
"""What dissolves needs room."""


@dataclass(frozen=True)
class Follows:
    """What follows from an entry as sentences: of metals and other substances, and of liquid and weight."""

    metals: list[str]
    others: list[str]

    @classmethod
    def of(cls, transfers: Sequence[Transfer], ends: Ends) -> "Follows":
        """Return the movements that an entry would cause as sentences."""
        return cls._of(transfers, lambda transfer: movement(transfer, ends))

    @classmethod
    def from_event(cls, event: events.Event, transfers: Sequence[Transfer], ends: Ends) -> "Follows":
        """Return the movements that followed from an event as sentences, with the reason of each."""
        return cls._of(transfers, lambda transfer: went(transfer, ends, reason(event, transfer)))

    @classmethod
    def _of(cls, transfers: Sequence[Transfer], tell: Callable[[Transfer], str]) -> "Follows":
        along = sorted((t for t in transfers if t.component in ALONG), key=lambda t: ALONG.index(t.component))
        return cls([tell(t) for t in transfers if t.component not in ALONG], [tell(t) for t in along])


def finding(found: Finding | FoundBefore, ends: Ends) -> str:
    """Return a finding as a sentence that says where and of what."""
    return findings([found], ends)[0]


def findings(found: Iterable[Finding | FoundBefore], ends: Ends) -> list[str]:
    """Return findings as sentences that say where and of what: one for all that is the same at the same place."""
    together: dict[tuple[str, str, str], list[str]] = {}
    for each in found:
        together.setdefault((each.source, each.target, each.code), []).append(component_name(each.component))
    return [
        f"{ends.names(list(dict.fromkeys(filter(None, (source, target)))))}, {', '.join(names)}: {_(FINDINGS[code])}"
        for (source, target, code), names in together.items()
    ]
