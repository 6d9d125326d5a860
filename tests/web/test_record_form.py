"""The one form of all verbs: built from the description of the input, judged all at once."""

from uuid import uuid4

import pytest
from django.http import QueryDict

from chemicals.process.fields import describe
from chemicals.process.inputs import INPUTS, MakeUpInput, RunInput
from chemicals.process.instruments import InstrumentInput, create_instrument
from chemicals.science.reading import MEASURED
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership
from compliance.waste.services import close_container
from compliance.web.forms.fields import ThingField
from compliance.web.forms.prefill import prefill
from compliance.web.forms.record import UNDATED, RecordForm
from tests.conftest import NOW
from tests.web.conftest import Line, Say


def sent(**said: object) -> QueryDict:
    data = QueryDict(mutable=True)
    data.update({"key": str(uuid4()), **{name.replace("__", "-"): str(value) for name, value in said.items()}})
    return data


def enter_instruments(owner: Membership) -> None:
    """Enter an instrument for everything that can be measured."""
    for measures in MEASURED:
        said = InstrumentInput(name=f"One for {measures}", measures=measures)
        create_instrument(actor=owner, now=NOW, instrument=said)


@pytest.mark.parametrize("verb", INPUTS)
def test_every_field_of_every_verb_is_on_its_form(verb: str, owner: Membership, line: Line) -> None:
    enter_instruments(owner)
    form = RecordForm(owner, verb)
    described = [name for name, _ in describe(INPUTS[verb])]
    shown = [part.name for part in form.all_parts]
    assert shown == described + ([] if verb in UNDATED else ["occurred"])
    assert [str(part.label) for part in form.all_parts if not part.label] == []


def test_who_has_no_instrument_is_not_asked_for_one(owner: Membership, line: Line) -> None:
    assert "instrument" not in RecordForm(owner, "level-reading").fields
    enter_instruments(owner)
    assert "instrument" in RecordForm(owner, "level-reading").fields


def test_only_instruments_that_measure_it_are_offered(owner: Membership, line: Line) -> None:
    enter_instruments(owner)
    create_instrument(actor=owner, now=NOW, instrument=InstrumentInput(name="Broken", measures="pH", retired=True))

    def offered(verb: str, **query: str) -> list[str]:
        field = RecordForm(owner, verb, initial=query).fields["instrument"]
        assert isinstance(field, ThingField)
        return list(map(str, field.labels.values()))

    assert offered("reading", quantity="pH") == ["One for pH"]
    assert offered("level-reading") == ["One for level"]
    assert "One for temperature (temperature)" in offered("reading")
    assert "One for density" not in " ".join(offered("reading"))


def test_everything_that_is_wrong_is_said_at_once(owner: Membership, line: Line) -> None:
    form = RecordForm(owner, "make-up", sent(ingredients__0__amount="1,500 g", ingredients__2__amount="3 V", level="x"))
    assert not form.is_valid()
    told = [(str(problem.label), problem.target) for problem in form.all_problems]
    assert told == [
        ("Tank", "id_tank"),
        ("Ingredients 1: From", "id_ingredients-0-stock"),
        ("Ingredients 1: Amount", "id_ingredients-0-amount"),
        ("Ingredients 3: From", "id_ingredients-2-stock"),
        ("Ingredients 3: Amount", "id_ingredients-2-amount"),
        ("Filled with water to", "id_level"),
    ]


def test_blank_rows_do_not_count(owner: Membership, line: Line) -> None:
    form = RecordForm(
        owner,
        "make-up",
        sent(tank=line.bath.uuid, ingredients__1__stock=line.tub.uuid, ingredients__1__amount="4 kg", level="20 L"),
    )
    assert form.is_valid(), form.errors
    data = form.to_input()
    assert isinstance(data, MakeUpInput)
    assert [(row.stock, row.amount.base) for row in data.ingredients] == [(line.tub.uuid, 4 * 10**9)]
    assert dict(form.understood()) == {
        "Tank": f"Copper bath ({line.bath.code})",
        "Ingredients": f"Salt tub ({line.tub.code}), 4 kg",
        "Filled with water to": "20 L",
    }


def test_an_error_of_the_domain_finds_the_row_that_was_filled(owner: Membership, line: Line) -> None:
    form = RecordForm(owner, "make-up", sent(tank=line.bath.uuid, ingredients__2__amount="4 kg"))
    form.is_valid()
    form.add_domain_errors(
        InvalidInputError([FieldError("ingredients.0.amount", "Too much."), FieldError("nowhere", "Strange.")])
    )
    assert "Too much." in form.rows["ingredients"].forms[2].errors["amount"]
    assert form.non_field_errors() == ["Strange."]


def test_more_rows_come_when_asked_and_no_endless_number(owner: Membership, line: Line) -> None:
    grown = RecordForm(owner, "make-up", sent(more="ingredients", ingredients__0__amount="4 kg"))
    assert len(grown.rows["ingredients"].forms) == 6
    flooded = RecordForm(owner, "make-up", sent(ingredients__999__amount="4 kg"))
    assert len(flooded.rows["ingredients"].forms) == 60


def test_a_vessel_of_another_workshop_is_no_choice(owner: Membership, stranger: Membership, line: Line) -> None:
    form = RecordForm(stranger, "level-reading", sent(vessel=line.bath.uuid, volume="3 L"))
    assert not form.is_valid()
    assert form.errors["vessel"] == ["Choose one from the list."]


def test_a_closed_container_is_no_choice_for_pouring_in(owner: Membership, line: Line) -> None:
    close_container(actor=owner, now=NOW, container=line.drum, gross=10**9)
    names = str(RecordForm(owner, "drum-off")["target"])
    assert "Can 2" in names
    assert "Drum 7" not in names
    assert "Drum 7" in str(RecordForm(owner, "level-reading")["vessel"])


def test_the_page_of_a_vessel_fills_in_the_vessel(owner: Membership, line: Line) -> None:
    bath, drum = str(line.bath.uuid), str(line.drum.vessel.uuid)
    assert prefill(owner, "top-up", {"vessel": bath}) == {"tank": bath}
    assert prefill(owner, "drum-off", {"vessel": drum}) == {"target": drum}
    assert prefill(owner, "run", {"vessel": bath}) == {"route": str(line.route.uuid)}
    assert prefill(owner, "drum-off", {"vessel": bath, "target": drum}) == {"source": bath, "target": drum}
    assert prefill(owner, "top-up", {"vessel": "nonsense", "again": "nonsense"}) == {}


def test_same_as_last_time_repeats_what_was_said_but_no_weights(owner: Membership, filled: Line, say: Say) -> None:
    form = RecordForm(
        owner,
        "run",
        sent(route=filled.route.uuid, parts="hinges", current_density="1 A/dm2", time="4 h", weight_before="5.6 g",
             weight_after="7.7 g"),
    )  # fmt: skip
    assert form.is_valid(), form.errors
    entry = say(form.to_input())
    assert prefill(owner, "run", {"again": str(entry.uuid)}) == {
        "route": str(filled.route.uuid),
        "parts": "hinges",
        "time": "4 h",
        "current_density": "1 A/dm2",
    }
    assert INPUTS["run"] is RunInput


def test_an_old_entry_can_still_be_chosen_for_cancelling(owner: Membership, filled: Line, say: Say) -> None:
    from chemicals.journal.selectors import list_entries_for

    first = list_entries_for(owner).last()
    assert first is not None
    form = RecordForm(owner, "cancellation", sent(entry=first.uuid, reason="typed twice"))
    assert form.is_valid(), form.errors
