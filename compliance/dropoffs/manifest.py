"""What a manifest says, from the books as they stand when the drop-off is packed."""

from typing import Any

from django.conf import settings

from chemicals.books.events import GROSS_MASS, VOLUME
from chemicals.ledger.selectors import list_held
from compliance.dropoffs.models import DropOff
from compliance.waste.label import hazards_of, name_of, never_with, show_held, show_sd
from compliance.waste.models import WasteContainer

CAUTIONS = (
    "Nothing that must never meet goes into one vehicle, bund or tray.",
    "Upright, closed, secured against tipping; gloves, goggles and absorbent within reach.",
    "Carriage on public roads has rules of its own: ask your receiver and your local authority before you load.",
)


def build_manifest(drop_off: DropOff, containers: list[WasteContainer]) -> dict[str, Any]:
    """Return the frozen data of the manifest; the issuing adds number, chain head and names."""
    receiver = drop_off.receiver
    return {
        "receiver": {"name": receiver.name, "address": receiver.address, "reference": receiver.reference},
        "drop_off": {
            "code": str(drop_off.uuid)[:8].upper(),
            "date": drop_off.planned_for.isoformat(),
            "mode": drop_off.mode,
        },
        "containers": [_container(container) for container in containers],
        "cautions": list(CAUTIONS),
        "url": f"{settings.PUBLIC_URL}/w/{drop_off.workshop.uuid}/drop-offs/{drop_off.uuid}",
    }


def _container(container: WasteContainer) -> dict[str, Any]:
    held = list_held(container.vessel)
    volume = next((show_held(row) for row in held if row.component == VOLUME), None)
    return {
        "code": container.vessel.code,
        "stream": container.stream.name,
        "origin": container.stream.origin,
        "contents": [
            {
                "component": name_of(row.component),
                "amount": show_held(row),
                "uncertainty": show_sd(row),
                "basis": "from the books",
            }
            for row in held
            if row.component not in (VOLUME, GROSS_MASS)
        ],
        "volume": volume,
        "gross_kg": None if container.gross is None else _kilograms(container.gross),
        "hazards": hazards_of(container),
        "codes": [container.stream.code] if container.stream.code else [],
        "must_not_meet": never_with(container),
    }


def _kilograms(micrograms: int) -> str:
    """Return kilograms with three decimals, cut from whole micrograms."""
    grams = (micrograms + 500_000) // 10**6
    return f"{grams // 1000}.{grams % 1000:03d}"
