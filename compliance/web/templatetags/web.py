"""Filters of the pages: amounts and moments."""

from datetime import date, datetime

from django import template
from django.utils import timezone
from django.utils.html import format_html
from django.utils.safestring import SafeString

from chemicals.balance.selectors import Amount, FlowEnd
from chemicals.journal.models import Entry
from chemicals.ledger.components import dimension_per_litre
from chemicals.ledger.running import Running
from chemicals.ledger.selectors import Held, HeldMetal
from chemicals.process.models import Instrument
from chemicals.process.readings import Taken
from chemicals.science.quantity import show
from chemicals.science.reading import ANALYSIS
from compliance.documents.twin import symbol
from compliance.web import words
from compliance.web.forms.period import last_day_of
from compliance.web.statement import Line
from compliance.web.words.readings import FACT_NAMES, amount_of, quantity_name

register = template.Library()


@register.filter
def moment(at: datetime | None) -> SafeString | str:
    """Show a moment in the workshop's zone."""
    return "" if at is None else _time(at, words.moment(at))


@register.filter
def happened(entry: Entry) -> SafeString:
    """Show when an entry happened, as precisely as is known."""
    return _time(entry.occurred_at, words.moment(entry.occurred_at, entry.precision))


@register.filter
def day(on: date | str) -> SafeString:
    """Show a day, in one piece."""
    return format_html('<time datetime="{0}">{0}</time>', str(on))


@register.filter
def local_day(at: datetime) -> SafeString:
    """Show the day of a moment in the workshop's zone."""
    return day(timezone.localdate(at))


@register.filter
def last_day(until: datetime) -> SafeString:
    """Show the last day of what ends just before a moment."""
    return day(last_day_of(until))


def _time(at: datetime, text: str) -> SafeString:
    return format_html('<time datetime="{}">{}</time>', at.isoformat(), text)


@register.filter
def volume(nanolitres: int | None) -> str:
    """Show a volume."""
    return words.amount(nanolitres, "volume")


@register.filter
def mass(micrograms: int | None) -> str:
    """Show a mass."""
    return words.amount(micrograms, "gross mass")


@register.filter
def of(base: int | None, component: str) -> str:
    """Show an amount of a component."""
    return words.amount(base, component)


@register.filter
def held(row: Held | None) -> str:
    """Show what a vessel holds of a component, with its uncertainty."""
    return words.amount(0, "volume") if row is None else words.with_uncertainty(row.amount, row.sd, row.component)


@register.filter
def per_litre(row: HeldMetal | Running) -> str:
    """Show a concentration with its uncertainty; nothing where there is none."""
    if row.concentration is None:
        return ""
    return words.in_one_unit(row.concentration, row.concentration_sd, dimension_per_litre(row.component))


@register.filter
def in_unit(base: int | None, dimension: str) -> str:
    """Show base units of any dimension."""
    return str(words.UNKNOWN) if base is None else show(base, dimension)


@register.filter
def component(code: str) -> str:
    """Show the name of what is balanced."""
    return words.component_name(code)


@register.filter
def kind(code: str) -> str:
    """Show the kind of an entry."""
    return str(words.KINDS[code])


@register.filter
def verdict(code: str) -> str:
    """Show the recorded answer to "may this be done?"."""
    return str(words.VERDICTS[code])


register.filter("pictogram", symbol)


@register.filter
def figures(row: Amount | Line) -> str:
    """Show a mass with its uncertainty."""
    return words.with_uncertainty(row.value, row.sd, "gross mass")


@register.filter
def signed(row: Line) -> str:
    """Show a mass with its sign and uncertainty."""
    return words.signed(row.value, row.sd, "gross mass")


@register.filter
def end(of_flow: FlowEnd) -> str:
    """Show the end of a flow: the name of a vessel, or of a boundary."""
    return words.end_name(of_flow)


@register.filter
def figure(value: object) -> str:
    """Show a calculated value with the digits that mean something."""
    return f"{value:.6g}" if isinstance(value, float) else str(value)


@register.filter
def quantity(measures: str) -> str:
    """Show what an instrument measures."""
    return quantity_name(measures)


@register.filter
def doubt(instrument: Instrument) -> str:
    """Show how sure an instrument is; nothing where nobody said so."""
    return " + ".join(filter(None, (instrument.sd_typed, instrument.relative_typed)))


@register.filter
def read(taken: Taken) -> str:
    """Show what was read, as it was understood."""
    return amount_of(taken)


@register.filter
def of_what(taken: Taken) -> str:
    """Show what was read: a quantity, or what a strip or an analysis is for."""
    if taken.quantity == ANALYSIS:
        return words.component_name(taken.shows)
    return quantity_name(taken.quantity, taken.shows)


@register.filter
def fact(name: str) -> str:
    """Show what of the set-up of a tank was changed."""
    return str(FACT_NAMES[name])
