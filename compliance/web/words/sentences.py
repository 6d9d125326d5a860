"""What follows from an entry as sentences: movements and findings."""

from collections.abc import Sequence
from dataclasses import dataclass

from django.utils.translation import gettext as _

from chemicals.books import events
from chemicals.books.fold.state import FINDINGS, Finding, Transfer
from chemicals.ledger.models import Finding as FoundBefore
from compliance.web.words.amounts import component_name, with_uncertainty
from compliance.web.words.ends import Ends
from compliance.web.words.kinds import BASES


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
