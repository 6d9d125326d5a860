"""Invented papers: nothing here is a real workshop, receiver or waste."""

from collections.abc import Callable
from typing import Any

import pytest

Data = dict[str, Any]
HEAD = "9f86d081884c7d659a2feaa0c55ad015a3bf4f1b2b0b822cd15d6c15b0f00a08"


def workshop() -> Data:
    return {
        "name": "Werkstatt Löwenzahn (invented)",
        "address": "Färbergasse 7\n99999 Beispielstadt",
        "telephone": "+49 000 123456",
    }


def hazards() -> Data:
    return {
        "signal_word": "Danger",
        "pictograms": ["GHS05", "GHS07", "GHS09"],
        "statements": [
            "H290 May be corrosive to metals.",
            "H314 Causes severe skin burns and eye damage.",
            "H410 Very toxic to aquatic life with long lasting effects.",
        ],
    }


@pytest.fixture
def label() -> Data:
    """A waste label with umlauts, Greek, subscripts, ions and an unknown amount."""
    return {
        "workshop": workshop(),
        "number": 12,
        "container": {"code": "W-7K3M", "name": "Blue drum 3", "material": "HDPE, UN 1H2", "volume": "23.5 L"},
        "stream": "Acid copper rinse",
        "origin": "rinsing after acid copper plating",
        "contents": [
            {"name": "CuSO₄·5H₂O", "amount": "1.24 kg", "note": "as Cu²⁺ 316 g, computed"},
            {"name": "chloride, Cl⁻", "amount": None, "note": "not analysed"},
            {"name": "brightener (α-Δ mix)", "amount": "0.1 kg", "note": ""},
        ],
        "hazards": hazards(),
        "first_drop": "2025-02-03",
        "full": None,
        "must_not_meet": ["cyanide", "hypochlorite"],
        "cautions": ["Keep the vented cap on."],
        "url": "https://gramledger.example/c/7K3M",
        "chain_head": HEAD,
        "chain_sequence": 128,
        "issued_at": "2025-04-12T10:15:00+02:00",
        "issued_by": "Jörg Ω. Example",
    }


def container(number: int) -> Data:
    return {
        "code": f"W-{number:04d}",
        "stream": "Acid copper rinse",
        "origin": "rinsing after acid copper plating",
        "contents": [
            {"component": "copper, Cu", "amount": "316 g", "uncertainty": "12 g", "basis": "computed"},
            {"component": "H₂SO₄", "amount": "0.62 kg", "uncertainty": None, "basis": "assumed"},
            {"component": "Cl⁻", "amount": None, "uncertainty": None, "basis": "not analysed"},
        ],
        "volume": "23.5 L",
        "gross_kg": "25.4",
        "hazards": hazards(),
        "codes": ["11 01 11*", "D002"],
        "must_not_meet": ["cyanide", "hypochlorite"],
    }


@pytest.fixture
def manifest_of() -> Callable[[int], Data]:
    """A manifest of so many containers."""

    def make(count: int) -> Data:
        return {
            "workshop": workshop(),
            "number": 7,
            "receiver": {
                "name": "Sammelstelle Nord (invented)",
                "address": "Industriestraße 1\n99998 Musterdorf",
                "reference": "R-2025-118",
            },
            "drop_off": {"code": "D-0009", "date": "2025-04-14", "mode": "brought"},
            "containers": [container(number) for number in range(1, count + 1)],
            "cautions": ["Drum W-0001 builds up hydrogen: vented cap, upright."],
            "chain_head": HEAD,
            "chain_sequence": 128,
            "url": "https://gramledger.example/d/0009",
            "issued_at": "2025-04-12T10:15:00+02:00",
            "issued_by": "Jörg Ω. Example",
        }

    return make


@pytest.fixture
def manifest(manifest_of: Callable[[int], Data]) -> Data:
    return manifest_of(2)
