"""The sentences about what stands together and must not, and about limits of places."""

from collections.abc import Callable, Iterator, Sequence
from typing import cast

from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from chemicals.ledger.models import Vessel
from chemicals.science.ghs import PICTOGRAMS
from chemicals.science.quantity import show
from compliance.documents.shapes import Pictogram
from compliance.documents.words import symbol_name
from compliance.premises import violations as found
from compliance.premises.models import Measure, QuantityLimit, Reach
from compliance.premises.sorts import EVERYTHING, HAZARD_CLASS, PICTOGRAM
from compliance.premises.violations import Violation
from compliance.premises.weighing import Weighed

MOST_NAMES = 4


def sort_name(sort: str) -> str:
    """Return a sort of matter as a person reads it."""
    if sort == EVERYTHING:
        return _("everything")
    group, _colon, name = sort.partition(": ")
    if group == PICTOGRAM and name in PICTOGRAMS:
        return _("pictogram %(code)s, %(name)s") % {"code": name, "name": symbol_name(cast("Pictogram", name))}
    if group == HAZARD_CLASS:
        return _("hazard class %(name)s") % {"name": name}
    return _("what reacts as %(kind)s") % {"kind": name}


def names(vessels: Sequence[Vessel]) -> str:
    """Return the names of a few vessels, and how many more there are."""
    shown = ", ".join(vessel.name for vessel in vessels[:MOST_NAMES])
    more = len(vessels) - MOST_NAMES
    return shown if more <= 0 else _("%(names)s and %(more)d more") % {"names": shown, "more": more}


def where(violation: Violation) -> str:
    """Return where it is: a place, or the bund or duct that several share."""
    places = ", ".join(place.name for place in violation.places) or _("Place not stated")
    if violation.reach == Reach.BUND:
        return _("bund %(name)s (%(places)s)") % {"name": violation.shared, "places": places}
    if violation.reach == Reach.DUCT:
        return _("exhaust duct %(name)s (%(places)s)") % {"name": violation.shared, "places": places}
    return places


def sentence(violation: Violation) -> str:
    """Return what is wrong, or not known, in one sentence."""
    return _SENTENCES[violation.code](violation)


def _pair(violation: Violation) -> str:
    return _("%(first)s (%(ones)s) and %(second)s (%(others)s)") % {
        "first": violation.danger.first if violation.danger else sort_name(violation.first),
        "second": violation.danger.second if violation.danger else sort_name(violation.second),
        "ones": names(violation.ones),
        "others": names(violation.others),
    }


def _must_never_meet(violation: Violation) -> str:
    danger = violation.danger.danger if violation.danger else ""
    return _("%(pair)s must never meet: %(danger)s.") % {"pair": _pair(violation), "danger": danger}


def _kept_apart(violation: Violation) -> str:
    return _("%(pair)s stand together, and your own line keeps them apart.") % {"pair": _pair(violation)}


def _over(violation: Violation) -> str:
    return _("More than the limit: %(figures)s.") % {"figures": _figures(violation)}


def _undecided(violation: Violation) -> str:
    return _("Undecided whether it is within the limit: %(figures)s.") % {"figures": _figures(violation)}


def _figures(violation: Violation) -> str:
    if violation.weighed is None or not isinstance(violation.line, QuantityLimit):
        return ""
    return _("%(sort)s, %(sum)s, limit %(limit)s") % {
        "sort": sort_name(violation.first),
        "sum": total(violation.weighed, violation.line),
        "limit": violation.line.typed,
    }


def total(weighed: Weighed, limit: QuantityLimit) -> str:
    """Return a sum with its standard uncertainty; a least one where something is unknown."""
    measure = Measure(limit.measure)
    text = show(weighed.least, measure)
    if weighed.sd:
        doubt = show(weighed.sd, measure, digits=2)
        text = _("%(amount)s, give or take %(doubt)s") % {"amount": text, "doubt": doubt}
    return _("at least %s") % text if weighed.is_least else text


def _not_known(violation: Violation) -> str:
    return _("Nobody declared what all of this reacts as: %(names)s. Keep acid and cyanide away from it.") % {
        "names": names(violation.ones)
    }


def _not_entered(violation: Violation) -> str:
    count = len(violation.ones)
    text = ngettext(
        "The hazards of %(count)d container here are not entered: %(names)s.",
        "The hazards of %(count)d containers here are not entered: %(names)s.",
        count,
    )
    return text % {"count": count, "names": names(violation.ones)}


def _no_place(violation: Violation) -> str:
    count = len(violation.ones)
    text = ngettext(
        "Nobody said where %(count)d container stands, nor beside what: %(names)s.",
        "Nobody said where %(count)d containers stand, nor beside what: %(names)s.",
        count,
    )
    return text % {"count": count, "names": names(violation.ones)}


_SENTENCES: dict[str, Callable[[Violation], str]] = {
    found.MUST_NEVER_MEET: _must_never_meet,
    found.KEPT_APART: _kept_apart,
    found.OVER_LIMIT: _over,
    found.LIMIT_UNDECIDED: _undecided,
    found.NOT_KNOWN: _not_known,
    found.NOT_ENTERED: _not_entered,
    found.NO_PLACE: _no_place,
}


def speaks(violation: Violation) -> str:
    """Return what speaks against it: the line with its citation, or that what must never meet shares nothing."""
    if violation.line is not None:
        return _("Your line: %(citation)s, compared on %(day)s.") % {
            "citation": violation.line.citation,
            "day": violation.line.checked_on.isoformat(),
        }
    if violation.code == found.MUST_NEVER_MEET:
        return _("What must never meet shares no place, bund or exhaust duct.")
    return ""


def remedies(violation: Violation) -> list[str]:
    """Return what can be done."""
    return list(_remedies(violation))


def _remedies(violation: Violation) -> Iterator[str]:
    if violation.code in (found.MUST_NEVER_MEET, found.KEPT_APART):
        yield _("Move one of them to a place that shares nothing with the other.")
    elif violation.code == found.OVER_LIMIT:
        yield _("Move some of it to another place.")
    elif violation.code == found.NOT_KNOWN:
        yield _("Enter what their products react as, from the sheets.")
    elif violation.code == found.NOT_ENTERED:
        yield _("Enter the hazards of their products, from the sheets.")
    elif violation.code == found.NO_PLACE:
        yield _("Say where they stand.")
    elif violation.weighed is not None:
        yield from why_undecided(violation.weighed)
    if violation.is_stale:
        yield _("Nobody compared this line for a year: read the rule again.")


def why_undecided(weighed: Weighed) -> Iterator[str]:
    """Yield why a sum cannot be told from a limit, each with its remedy."""
    if weighed.unknown:
        text = ngettext(
            "The amount in %(count)d container is unknown: count it.",
            "The amounts in %(count)d containers are unknown: count them.",
            weighed.unknown,
        )
        yield text % {"count": weighed.unknown}
    if weighed.elsewise:
        text = ngettext(
            "%(count)d amount is not known in the unit of the limit: enter its product's density, or measure it so.",
            "%(count)d amounts are not known in the unit of the limit: enter the products' densities, or measure so.",
            weighed.elsewise,
        )
        yield text % {"count": weighed.elsewise}
    if weighed.unsure:
        text = ngettext(
            "%(count)d more container may belong to it: enter its hazards and what it reacts as.",
            "%(count)d more containers may belong to it: enter their hazards and what they react as.",
            weighed.unsure,
        )
        yield text % {"count": weighed.unsure}
    if not weighed.is_least:
        yield _("The sum is too unsure to tell: measure what stands there.")
