"""What a manifest says, from the books as they stand when the drop-off is packed."""

from collections.abc import Collection, Iterable
from typing import Any

from django.conf import settings

from chemicals.books.events import GROSS_MASS, VOLUME
from chemicals.ledger.selectors import Held, list_held
from compliance.dropoffs.load import Load, StockOnLoad
from compliance.dropoffs.models import DropOff
from compliance.premises.hazards import list_avoided
from compliance.waste.label import hazards_of, name_of, never_with, show_held, show_sd
from compliance.waste.models import WasteContainer

WEIGHT = "weight in all, without the container"
CAUTIONS = (
    "Nothing that must never meet goes into one vehicle, bund or tray.",
    "Upright, closed, secured against tipping; gloves, goggles and absorbent within reach.",
    "Carriage on public roads has rules of its own: ask your receiver and your local authority before you load.",
)


def build_manifest(drop_off: DropOff, load: Load) -> dict[str, Any]:
    """Return the frozen data of the manifest; the issuing adds number, chain head and names."""
    receiver = drop_off.receiver
    return {
        "receiver": {"name": receiver.name, "address": receiver.address, "reference": receiver.reference},
        "drop_off": {
            "code": str(drop_off.uuid)[:8].upper(),
            "date": drop_off.planned_for.isoformat(),
            "mode": drop_off.mode,
        },
        "containers": [*map(_container, load.waste), *map(_stock, load.stock)],
        "cautions": list(CAUTIONS),
        "url": f"{settings.PUBLIC_URL}/w/{drop_off.workshop.uuid}/drop-offs/{drop_off.uuid}",
    }


def _container(container: WasteContainer) -> dict[str, Any]:
    held = list_held(container.vessel)
    return {
        "code": container.vessel.code,
        "stream": container.stream.name,
        "origin": container.stream.origin,
        "contents": _contents(held, without=(VOLUME, GROSS_MASS)),
        "volume": _volume(held),
        "gross_kg": None if container.gross is None else _kilograms(container.gross),
        "hazards": hazards_of(container),
        "codes": [container.stream.code] if container.stream.code else [],
        "must_not_meet": never_with(container),
    }


def _stock(each: StockOnLoad) -> dict[str, Any]:
    """A stock container: by its product, with hazards and UN number as entered; nobody chose a waste code for it."""
    kinds = frozenset(kind for kinds in each.marks.values() for kind in kinds)
    newest = {row.product_id: row for row in each.revisions}
    numbers = sorted({row.un_number for row in newest.values() if row.un_number})
    return {
        "code": each.vessel.code,
        "stream": ", ".join(each.names) or str(each.vessel.product),
        "origin": "",
        "note": each.note,
        "contents": [] if each.empty else _contents(each.standing.held, without=(VOLUME,)),
        "volume": "0 L" if each.empty else _volume(each.standing.held),
        "gross_kg": None,
        "hazards": each.hazards.data,
        "codes": [f"UN {number}" for number in numbers],
        "must_not_meet": [f"{other['what']} ({other['gives']})" for other in list_avoided(kinds)],
    }


def _volume(held: Iterable[Held]) -> str | None:
    return next((show_held(row) for row in held if row.component == VOLUME), None)


def _contents(held: Iterable[Held], *, without: Collection[str]) -> list[dict[str, Any]]:
    return [
        {
            "component": WEIGHT if row.component == GROSS_MASS else name_of(row.component),
            "amount": show_held(row),
            "uncertainty": show_sd(row),
            "basis": "from the books",
        }
        for row in held
        if row.component not in without
    ]


def _kilograms(micrograms: int) -> str:
    """Return kilograms with three decimals, cut from whole micrograms."""
    grams = (micrograms + 500_000) // 10**6
    return f"{grams // 1000}.{grams % 1000:03d}"
