"""The proof of a closed period: one SHA-256 of what followed from its entries, one of what was held at its end.

Each is taken over lines of canonical bytes, in an order that every reader of the same books arrives at.
"""

import hashlib
from collections.abc import Iterable, Iterator
from typing import Any
from uuid import UUID

from chemicals.books.canonical import dump
from chemicals.books.fold import Folded
from chemicals.books.fold.state import Holding, State, Vessel


def digest_followed(followed: Iterable[tuple[UUID, Folded]]) -> str:
    """Return the SHA-256 (hex) of what followed from each entry, given in fold order.

    An entry from which nothing followed has no line: whether a later version would fold it does not matter.
    """
    return _digest(_followed_line(entry, folded) for entry, folded in followed if _says_anything(folded))


def digest_holdings(state: State) -> str:
    """Return the SHA-256 (hex) of all holdings and of all that is remembered of vessels."""
    holdings = ([*key, *_plain_holding(holding)] for key, holding in sorted(state.holdings.items()))
    vessels = ([name, *_plain_vessel(vessel)] for name, vessel in sorted(state.vessels.items()))
    return _digest((*holdings, *vessels))


def _digest(lines: Iterable[list[Any]]) -> str:
    digest = hashlib.sha256()
    for line in lines:
        digest.update(dump(line) + b"\n")
    return digest.hexdigest()


def _says_anything(folded: Folded) -> bool:
    return bool(folded.transfers or folded.findings or folded.contents)


def _followed_line(entry: UUID, folded: Folded) -> list[Any]:
    remembered = dict(folded.vessels)
    return [
        str(entry),
        [[t.component, t.source, t.target, t.amount, t.sd, t.basis] for t in folded.transfers],
        sorted([f.code, f.component, f.source, f.target] for f in folded.findings),
        [[vessel, component, *_plain_holding(holding)] for vessel, component, holding in folded.contents],
        [[name, *_plain_vessel(remembered[name])] for name in sorted(remembered)],
    ]


def _plain_holding(holding: Holding) -> Iterator[int | None]:
    yield from (holding.amount, holding.variance, holding.known_part)


def _plain_vessel(vessel: Vessel) -> list[Any]:
    return [vessel.incomplete, sorted(vessel.poured)]
