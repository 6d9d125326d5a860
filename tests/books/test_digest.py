"""The digests of a closed period: every figure counts, and whoever reads the same books finds the same digest."""

import dataclasses
import hashlib
from collections.abc import Callable
from typing import Any
from uuid import UUID

import pytest
from hypothesis import given

from chemicals.books.digest import digest_followed, digest_holdings
from chemicals.books.fold import Entry, Folded, rebuild
from chemicals.books.fold.state import Finding, Holding, State, Transfer, Vessel
from tests.books.histories import histories

ENTRY = UUID(int=7)
FOLDED = Folded(
    (Transfer("Cu", "bath", "parts", 11_850_000, 150_000, "computed"),),
    (Finding("unknown-level", "volume", "bath", "air"), Finding("unknown-amount", "Ag", "bath", "rinse")),
    (("bath", "", Holding(None)), ("bath", "Cu", Holding(5, 6, 0)), ("bath", "Ag", Holding(None, 0, 3))),
    (("bath", Vessel(incomplete=True, poured=frozenset({"salt/1", "acid/2"}))),),
)


def test_a_digest_is_the_hash_of_lines_that_anybody_can_write() -> None:
    """Written out by hand, so that the digests of today can be proved with other means in ten years."""
    line = (
        '["00000000-0000-0000-0000-000000000007",'
        '[["Cu","bath","parts",11850000,150000,"computed"]],'
        '[["unknown-amount","Ag","bath","rinse"],["unknown-level","volume","bath","air"]],'
        '[["bath","",null,0,0],["bath","Cu",5,6,0],["bath","Ag",null,0,3]],'
        '[["bath",true,["acid/2","salt/1"]]]]\n'
    )
    assert digest_followed([(ENTRY, FOLDED)]) == hashlib.sha256(line.encode()).hexdigest()
    state = State(vessels={"bath": Vessel(incomplete=False, poured=frozenset({"b", "a"}))})
    state.put("bath", "volume", Holding(20, 4, 0))
    state.put("bath", "Cu", Holding(None, 0, 9))
    lines = '["bath","Cu",null,0,9]\n["bath","volume",20,4,0]\n["bath",false,["a","b"]]\n'
    assert digest_holdings(state) == hashlib.sha256(lines.encode()).hexdigest()


def test_nothing_has_the_digest_of_nothing() -> None:
    nothing = hashlib.sha256(b"").hexdigest()
    assert digest_followed([]) == digest_followed([(ENTRY, Folded((), (), ()))]) == nothing
    assert digest_holdings(State()) == nothing


def changed(**parts: Any) -> Folded:
    return dataclasses.replace(FOLDED, **parts)


(TRANSFER,) = FOLDED.transfers
EVERYTHING, COPPER, SILVER = FOLDED.contents
OTHER_FIGURES: dict[str, Any] = {
    "component": "Ag", "source": "rinse", "target": "racks", "amount": 1, "sd": 1, "basis": "assumed",
}  # fmt: skip
CHANGES: dict[str, Folded] = {
    **{
        f"a transfer's {name}": changed(transfers=(dataclasses.replace(TRANSFER, **{name: value}),))
        for name, value in OTHER_FIGURES.items()
    },
    "a transfer twice": changed(transfers=(TRANSFER, TRANSFER)),
    "a finding less": changed(findings=FOLDED.findings[:1]),
    "a content's amount": changed(contents=(EVERYTHING, ("bath", "Cu", Holding(4, 6, 0)), SILVER)),
    "a content's variance": changed(contents=(EVERYTHING, COPPER, ("bath", "Ag", Holding(None, 1, 3)))),
    "a content's known part": changed(contents=(EVERYTHING, COPPER, ("bath", "Ag", Holding(None, 0, 4)))),
    "unknown is not zero": changed(contents=(EVERYTHING, COPPER, ("bath", "Ag", Holding(0, 0, 3)))),
    "what was poured in": changed(vessels=(("bath", Vessel(incomplete=True, poured=frozenset({"salt/1"}))),)),
}


@pytest.mark.parametrize("other", CHANGES.values(), ids=CHANGES)
def test_every_figure_counts(other: Folded) -> None:
    assert digest_followed([(ENTRY, other)]) != digest_followed([(ENTRY, FOLDED)])


def test_the_entry_and_the_order_of_entries_count() -> None:
    other = UUID(int=8)
    assert digest_followed([(other, FOLDED)]) != digest_followed([(ENTRY, FOLDED)])
    one, two = (ENTRY, FOLDED), (other, FOLDED)
    assert digest_followed([one, two]) != digest_followed([two, one])


def put(*rows: tuple[str, str, Holding]) -> Callable[[State], None]:
    def act(state: State) -> None:
        for row in rows:
            state.put(*row)

    return act


@pytest.mark.parametrize(
    "act",
    [
        put(("bath", "Cu", Holding(6))),
        put(("bath", "Ag", Holding(0))),
        put(("rinse", "Cu", Holding(5))),
        lambda state: state.put_vessel("bath", Vessel(incomplete=True)),
        lambda state: state.put_vessel("rinse", Vessel()),
    ],
    ids=["an amount", "another component", "another vessel", "an incomplete list", "another vessel that was emptied"],
)
def test_every_holding_and_memory_counts(act: Callable[[State], None]) -> None:
    state, other = (State(vessels={"bath": Vessel()}) for _ in range(2))
    for each in (state, other):
        each.put("bath", "Cu", Holding(5))
    act(other)
    assert digest_holdings(other) != digest_holdings(state)


@given(histories)
def test_the_same_history_has_the_same_digests(history: list[Entry]) -> None:
    (state, followed), (again, followed_again) = rebuild(history), rebuild(reversed(history))
    assert digest_followed(followed.items()) == digest_followed(followed_again.items())
    assert digest_holdings(state) == digest_holdings(again)
