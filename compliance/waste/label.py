"""What the label of a waste container says, from the books as they stand."""

from datetime import datetime
from typing import Any

from django.conf import settings
from django.utils import timezone
from django_scopes import scope

from chemicals.books.events import GROSS_MASS, VOLUME
from chemicals.ledger import components
from chemicals.ledger.models import Content
from chemicals.ledger.selectors import Held, list_held
from chemicals.science.formula import METALS
from chemicals.science.quantity import show
from chemicals.science.reactivity import DANGERS, UNKNOWN, declared
from compliance.waste.models import WasteContainer

CAUTIONS = (
    "Keep closed and upright, in a bund, away from what it must never meet.",
    "Gloves, goggles and apron before opening; ventilation on.",
)


def build_label(container: WasteContainer) -> dict[str, Any]:
    """Return the frozen data of a waste label; the issuing adds number, chain head and names."""
    vessel, stream = container.vessel, container.stream
    held = list_held(vessel)
    return {
        "container": {
            "code": vessel.code,
            "name": vessel.name,
            "material": container.material,
            "volume": next((show_held(row) for row in held if row.component == VOLUME), show(0, "volume")),
        },
        "stream": stream.name,
        "origin": stream.origin,
        "contents": [
            {"name": name_of(row.component), "amount": show_held(row), "note": _doubt(row)}
            for row in held
            if row.component not in (VOLUME, GROSS_MASS)
        ],
        "hazards": hazards_of(container),
        "first_drop": _first_drop(container),
        "full": None if container.closed_at is None else _day(container, container.closed_at),
        "must_not_meet": never_with(container),
        "cautions": list(CAUTIONS),
        "url": f"{settings.PUBLIC_URL}/c/{vessel.code}",
    }


def show_held(row: Held) -> str | None:
    """Return an amount as it is read, None where it is unknown."""
    if row.amount is None:
        return None
    return show(row.amount, components.dimension_of(row.component))


def show_sd(row: Held) -> str | None:
    """Return the standard uncertainty as it is read, None where the amount is unknown."""
    if row.amount is None:
        return None
    return show(row.sd, components.dimension_of(row.component), digits=2)


def _doubt(row: Held) -> str:
    sd = show_sd(row)
    return "" if sd is None else f"± {sd}"


def name_of(component: str) -> str:
    """Return the name of a component as people say it, of a metal with its symbol."""
    return f"{components.name_of(component)} ({component})" if component in METALS else component


def hazards_of(container: WasteContainer) -> dict[str, Any]:
    """Return the hazards of the stream as the workshop entered them."""
    stream = container.stream
    return {
        "signal_word": stream.signal_word,
        "pictograms": list(stream.pictograms),
        "statements": list(stream.statements),
    }


def never_with(container: WasteContainer) -> list[str]:
    """Return what must never come together with this stream, and what that would give."""
    kinds = declared(container.stream.reactivity)
    if UNKNOWN in kinds:
        return ["anything: nobody declared what it reacts as"]
    return [
        f"{other} ({danger.gives})"
        for danger in DANGERS
        for one, other in ((danger.first, danger.second), (danger.second, danger.first))
        if one in kinds
    ]


def _first_drop(container: WasteContainer) -> str | None:
    """Return the day on which the first drop went in."""
    with scope(workshop=container.vessel.workshop):
        drops = Content.objects.filter(vessel=container.vessel).exclude(amount=0)
        first = drops.order_by("occurred_at", "sequence").first()
    return None if first is None else _day(container, first.occurred_at)


def _day(container: WasteContainer, moment: datetime) -> str:
    return timezone.localtime(moment, container.vessel.workshop.zone).date().isoformat()
