"""What the labels of vessels say, from the books and the register as they stand."""

from collections.abc import Iterator, Sequence
from datetime import date
from typing import Any

from django.conf import settings

from chemicals.science.quantity import show
from compliance.premises.hazards import list_avoided
from compliance.premises.received import Received
from compliance.premises.selectors import Standing, is_stock

TANK_CAUTIONS = (
    "Gloves, goggles and apron, ventilation on, before you lean over it.",
    "Ask before anything goes in: scan the code.",
)
BOTTLE_CAUTIONS = ("Closed, upright, over its bund, away from what it must never meet.",)
SECONDARY_CAUTIONS = (
    "Only for use at once, by whoever decanted it.",
    "Nothing goes back: what is left is waste of its own stream.",
)
"""Common practice, all of it."""


def build_label(standing: Standing, received: Sequence[Received] = ()) -> dict[str, Any]:
    """Return the frozen data of the label of a vessel: of a container of stock, or of anything else as a tank.

    ``received`` is what came into a container of stock since it was last empty.
    """
    bottle = is_stock(standing.vessel)
    facts = _bottle_facts(standing, received) if bottle else _tank_facts(standing)
    return {
        **_common(standing),
        "sort": "bottle" if bottle else "tank",
        "contents": contents_of(standing),
        "facts": list(facts),
        "cautions": list(BOTTLE_CAUTIONS if bottle else TANK_CAUTIONS),
    }


def build_decanted_label(standing: Standing, *, day: date, by: str, note: str) -> dict[str, Any]:
    """Return the frozen data of the label of a small container into which somebody decanted from a vessel."""
    facts = [
        *([_fact("note", note)] if note else []),
        _fact("decanted", day.isoformat()),
        _fact("decanted by", by),
    ]
    return {
        **_common(standing),
        "sort": "secondary container",
        "name": ", ".join(standing.names) if is_stock(standing.vessel) and standing.names else standing.vessel.name,
        "contents": _composition(standing) if is_stock(standing.vessel) else contents_of(standing),
        "facts": facts,
        "cautions": list(SECONDARY_CAUTIONS),
    }


def _common(standing: Standing) -> dict[str, Any]:
    hazards = standing.hazards
    return {
        "name": standing.vessel.name,
        "code": standing.vessel.code,
        "url": f"{settings.PUBLIC_URL}/c/{standing.vessel.code}",
        "hazards": hazards.data,
        "precautions": hazards.protection,
        "not_entered": list(hazards.not_entered),
        "must_not_meet": list_avoided(standing.kinds),
    }


def contents_of(standing: Standing) -> str | None:
    """Return in words what is inside; None where nobody said."""
    if standing.stream is not None:
        return standing.stream.name
    if standing.tank is not None and standing.tank.bath_type:
        return standing.tank.bath_type
    if standing.names:
        return ", ".join(standing.names)
    return None


def _composition(standing: Standing) -> str | None:
    """Return the substances with their contents as typed."""
    rows = (row.lines.select_related("substance").order_by("pk") for row in standing.revisions)
    lines = [f"{line.substance} {line.typed}" for lines in rows for line in lines]
    return ", ".join(dict.fromkeys(lines)) or None


def _fact(what: str, value: str | None) -> dict[str, str | None]:
    return {"what": what, "value": value}


def _tank_facts(standing: Standing) -> Iterator[dict[str, str | None]]:
    if standing.tank is not None:
        mark = standing.tank.mark
        yield _fact("mark", None if mark is None else show(mark, "volume"))
    yield _fact("place", standing.vessel.place.name if standing.vessel.place else None)


def _bottle_facts(standing: Standing, received: Sequence[Received]) -> Iterator[dict[str, str | None]]:
    """Yield what is known of a container of stock; what nobody entered is left out."""
    for revision in standing.revisions:
        yield _fact("revision", str(revision.number))
    lots = ", ".join(dict.fromkeys(each.lot for each in received if each.lot))
    if lots:
        yield _fact("lot", lots)
    days = ", ".join(dict.fromkeys(each.day.isoformat() for each in received))
    if days:
        yield _fact("received", days)
    known = {"opened": standing.vessel.opened_on, "keeps until": standing.vessel.expires_on}
    yield from (_fact(what, day.isoformat()) for what, day in known.items() if day is not None)
    suppliers = dict.fromkeys(row.product.supplier for row in standing.revisions if row.product.supplier)
    yield from (_fact("supplier", supplier) for supplier in suppliers)
    numbers = dict.fromkeys(row.supplier_telephone for row in standing.revisions if row.supplier_telephone)
    yield from (_fact("supplier's telephone", number) for number in numbers)
    if standing.vessel.place:
        yield _fact("place", standing.vessel.place.name)
