"""The newer verbs on the pages: the right buttons at every vessel, details folded away, wrong input all at once."""

import re
from typing import Any
from uuid import uuid4

import pytest

from chemicals.journal.models import Entry
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import list_held
from chemicals.process.fields import describe
from chemicals.process.inputs import INPUTS
from chemicals.process.setup import SOLID_HOLDERS, create_holder
from chemicals.workshop.models import Membership
from compliance.waste.models import WasteContainer
from compliance.web.bench import BENCH, GROUPS, list_bench, list_groups
from tests.conftest import NOW
from tests.web.conftest import GRAM, Line, Visitor, text_of


def put_up(owner: Membership, kind: VesselKind) -> Vessel:
    return create_holder(actor=owner, now=NOW, kind=kind, name=f"New {kind}")


def latest() -> Entry:
    return Entry._base_manager.latest("sequence")


class TestButtons:
    """Each vessel offers what fits its kind, each verb once."""

    def test_every_verb_of_a_vessel_is_offered_somewhere(self, owner: Membership, line: Line) -> None:
        holders = [put_up(owner, kind) for kind in SOLID_HOLDERS]
        offered: set[str] = set()
        for vessel in (line.bath, line.rinse, line.tub, line.drum.vessel, *holders):
            verbs = [verb for verb, _ in list_bench(vessel)]
            verbs += [verb for _, group in list_groups(vessel) for verb, _ in group]
            assert len(verbs) == len(set(verbs)), vessel.kind
            offered |= set(verbs)
        assert set(INPUTS) - offered == {"acceptance", "cancellation"}  # of analyses, of entries

    def test_every_kind_of_vessel_has_a_bench(self) -> None:
        assert set(BENCH) == set(VesselKind)
        assert {verb for verbs in BENCH.values() for verb in verbs} <= set(INPUTS)
        assert {verb for _, verbs in GROUPS for verb in verbs} <= set(INPUTS)

    @pytest.mark.parametrize("kind", SOLID_HOLDERS)
    def test_each_button_opens_a_form_with_the_vessel_filled_in(
        self, visit: Visitor, owner: Membership, line: Line, kind: VesselKind
    ) -> None:
        vessel = put_up(owner, kind)
        page = visit.get("vessel", vessel.uuid).content.decode()
        links = re.findall(rf'href="([^"]*/record/[a-z-]+/\?vessel={vessel.uuid})"', page)
        assert len(links) >= 5
        for link in links:
            form = text_of(visit.client.get(link))
            assert f'value="{vessel.uuid}" selected' in form, link

    def test_a_closed_container_offers_no_filling(self, visit: Visitor, line: Line) -> None:
        address = visit.address("record", "clean-out")
        assert address in text_of(visit.get("waste-container", line.drum.vessel.uuid))
        visit.post("close-container", line.drum.vessel.uuid, gross="3 kg")
        assert address not in text_of(visit.get("waste-container", line.drum.vessel.uuid))

    def test_a_closed_container_may_leak(self, visit: Visitor, line: Line) -> None:
        visit.post("close-container", line.drum.vessel.uuid, gross="3 kg")
        address = visit.address("record", "spill") + f"?vessel={line.drum.vessel.uuid}"
        assert address in text_of(visit.get("waste-container", line.drum.vessel.uuid))
        assert f'value="{line.drum.vessel.uuid}" selected' in text_of(visit.client.get(address))

    def test_an_observer_is_offered_nothing(self, observer: Membership, line: Line) -> None:
        for vessel in (line.bath, line.tub):
            assert "/record/" not in text_of(Visitor(observer).get("vessel", vessel.uuid))


class TestDetails:
    """What nobody needs to say is folded away, and unfolded where it was said or is wrong."""

    def test_are_folded_until_something_is_written(self, visit: Visitor, filled: Line) -> None:
        page = text_of(visit.get("record", "filter"))
        assert "<details> <summary>If you know more</summary>" in page
        assert page.index('id="id_tank"') < page.index('id="id_occurred"') < page.index("<details>")
        assert page.index("<details>") < page.index('id="id_uptake"')

    def test_are_open_where_something_is_wrong(self, visit: Visitor, filled: Line) -> None:
        page = visit.post("record", "filter", key=uuid4(), uptake="much", step="preview")
        text = text_of(page)
        assert page.status_code == 400
        assert "<details open>" in text
        assert '<a href="#id_uptake">' in text

    def test_a_form_without_details_has_none(self, visit: Visitor, filled: Line) -> None:
        assert "<details" not in text_of(visit.get("record", "sample")).split("</form>")[0]


class TestForms:
    """Choices per kind, and every error with its field."""

    def test_a_closed_container_is_no_choice_for_any_verb_that_fills(
        self, visit: Visitor, owner: Membership, line: Line
    ) -> None:
        put_up(owner, VesselKind.FILTER)
        visit.post("close-container", line.drum.vessel.uuid, gross="3 kg")
        filling = [
            verb for verb, data in INPUTS.items()
            if any(getattr(kind, "fills", False) and VesselKind.WASTE in kind.kinds for _, kind in describe(data))  # type: ignore[attr-defined]  # a vessel's field
        ]  # fmt: skip
        assert {"drum-off", "filter", "sludge", "spill", "clean-out", "treatment", "move"} <= set(filling)
        for verb in filling:
            fields = text_of(visit.get("record", verb))
            name = next(n for n, kind in describe(INPUTS[verb]) if getattr(kind, "fills", False))
            choices = fields[fields.index(f'id="id_{name}"') :].split("</select>")[0]
            assert "Drum 7" not in choices, verb
            assert "Can 2" in choices, verb

    def test_what_is_balanced_is_chosen_by_its_name(self, visit: Visitor, line: Line) -> None:
        visit.post("add-substance", name="Glauber's salt", formula="Na2SO4", inert="on")
        page = text_of(visit.get("record", "analysis"))
        for code, name in (("Cu", "copper"), ("free cyanide", "free cyanide"), ("Na2SO4", "Na2SO4")):
            assert re.search(rf'<option value="{code}">[^<]*{name}', page), code

    def test_the_empty_weight_of_a_container_is_known(self, visit: Visitor, line: Line) -> None:
        WasteContainer._base_manager.filter(pk=line.drum.pk).update(tare=1_250_500_000)
        page = visit.get("record", "weight-reading", query=f"?vessel={line.drum.vessel.uuid}")
        assert 'value="1250.5 g"' in text_of(page)

    def test_a_day_sheet_tells_every_wrong_row(self, visit: Visitor, filled: Line) -> None:
        rows = {
            "racks-0-loads": "0",
            "racks-2-route": filled.route.uuid,
            "racks-2-loads": "a lot",
            "charges-1-charge": "31,500 Ah",
        }
        page = visit.post("record", "day-sheet", key=uuid4(), **rows, step="preview")
        assert page.status_code == 400
        targets = set(re.findall(r'href="#id_([a-z0-9_-]+)"', text_of(page)))
        assert targets == {"racks-0-route", "racks-0-loads", "racks-2-loads", "charges-1-bath", "charges-1-charge"}

    def test_an_error_of_the_domain_finds_its_row(self, visit: Visitor, filled: Line) -> None:
        rows = {"taken-0-metal": "Cu", "taken-0-amount": "5 g/L"}
        said = {"key": uuid4(), "tank": filled.bath.uuid, "target": filled.drum.vessel.uuid}
        page = visit.post("record", "filter", **said, **rows, step="preview")
        assert page.status_code == 400
        assert '<a href="#id_taken-0-amount">' in text_of(page)


def test_a_day_sheet_is_previewed_and_saved(visit: Visitor, filled: Line) -> None:
    said: dict[str, Any] = {
        "key": uuid4(),
        "racks-0-route": filled.route.uuid,
        "racks-0-loads": "4",
        "charges-0-bath": filled.bath.uuid,
        "charges-0-charge": "8 Ah",
    }
    page = text_of(visit.post("record", "day-sheet", **said, step="preview"))
    assert "Copper line: Copper bath → Rinse, 4" in page
    assert re.search(r"9\.48 ± 0\.\d+ g copper", page)
    saved = visit.post("record", "day-sheet", **said, step="save")
    assert (saved.status_code, latest().kind, latest().verdict) == (302, "day sheet", "allowed")
    assert visit.client.get(saved.headers["Location"]).status_code == 200


def test_a_spill_says_what_to_do_first_and_is_saved_as_an_incident(visit: Visitor, filled: Line) -> None:
    said = {"key": uuid4(), "source": filled.rinse.uuid, "amount": "0.5 L"}
    page = text_of(visit.post("record", "spill", **said, step="preview"))
    assert "First steps" in page
    assert "Keep it out of drains" in page
    assert "It is recorded as an incident." in page
    assert "NEVER" not in page
    assert 'value="save"' in page
    saved = visit.post("record", "spill", **said, step="save")
    assert latest().verdict == "incident"
    assert "Keep it out of drains" in text_of(visit.client.get(saved.headers["Location"]))
    assert "Incidents" in text_of(visit.get("today"))


def test_a_spill_into_the_wrong_container_is_first_refused(visit: Visitor, filled: Line) -> None:
    said = {"key": uuid4(), "source": filled.bath.uuid, "target": filled.cyanide_drum.vessel.uuid, "amount": "1 L"}
    page = visit.post("record", "spill", **said, step="save")
    assert page.status_code == 409
    assert "hydrogen cyanide" in text_of(page)
    assert visit.post("record", "spill", **said, step="incident").status_code == 302


def test_a_discharge_is_answered_for_by_whoever_records_it(visit: Visitor, filled: Line) -> None:
    said = {"key": uuid4(), "source": filled.rinse.uuid, "volume": "1 L"}
    page = visit.post("record", "discharge", **said, step="save")
    text = text_of(page)
    assert page.status_code == 409
    assert "for your permit and your local rules: no permit line is adopted here" in text
    assert "Record it, I answer for it" in text
    assert "incident" not in text.replace('value="incident"', "")
    assert visit.post("record", "discharge", **said, step="incident").status_code == 302
    assert latest().verdict == "overridden"


def test_a_treatment_shows_its_cautions_before_it_is_saved(visit: Visitor, filled: Line) -> None:
    said = {"key": uuid4(), "vessel": filled.rinse.uuid, "consumed-0-species": "acid"}
    page = text_of(visit.post("record", "treatment", **said, step="preview"))
    assert "Before you begin" in page
    assert "arithmetic, not permission" in page
    assert "Acid goes into water" in page
    assert visit.post("record", "treatment", **said, step="save").status_code == 302


def test_a_filter_needs_a_tank_and_where_it_went(visit: Visitor, filled: Line) -> None:
    said = {"key": uuid4(), "tank": filled.bath.uuid, "target": filled.drum.vessel.uuid}
    page = text_of(visit.post("record", "filter", **said, step="preview"))
    assert re.search(r"250 ± 1[23]\d mL liquid", page) or "0.25 ± 0.13 L" in page
    assert visit.post("record", "filter", **said, step="save").status_code == 302
    entry = text_of(visit.get("entry", latest().uuid))
    assert "assumed for a drained filter cartridge" in entry


def test_expired_stock_goes_to_waste_from_its_own_page(visit: Visitor, filled: Line) -> None:
    address = visit.address("record", "drum-off") + f"?vessel={filled.tub.uuid}"
    assert address in text_of(visit.get("vessel", filled.tub.uuid))
    said = {"key": uuid4(), "source": filled.tub.uuid, "target": filled.drum.vessel.uuid, "mass": "250 g"}
    assert visit.post("record", "drum-off", **said, step="save").status_code == 302
    held = {row.component: row.amount for row in list_held(filled.tub)}
    assert held["gross mass"] == 750 * GRAM
