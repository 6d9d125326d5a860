"""Every constraint of the database has a name, and an example of what it refuses."""

import re
from collections.abc import Callable
from typing import Any
from uuid import uuid4

import pytest
from django.apps import apps
from django.db import IntegrityError, connection, transaction
from django.db.models import CheckConstraint, Model, UniqueConstraint

from chemicals.jobs.models import Job, Schedule
from chemicals.journal import triggers
from chemicals.journal.models import Attachment, Entry
from chemicals.ledger.models import ClosingHolding, Component, Finding, Period, Vessel
from chemicals.process.models import Import
from chemicals.workshop.models import Place
from compliance.ops.verify import our_models
from compliance.premises.models import Assessment
from tests.ops.conftest import LOADED_AT

Values = dict[str, Any]
Change = Values | Callable[[Model], Values]


def twice(row: Model) -> Values:
    """Change nothing: the same row a second time."""
    return {}


def on_another_entry(row: Model) -> Values:
    """A paper has one entry and an entry one paper: take an entry that has none."""
    return {"entry_id": Entry._base_manager.filter(paper=None).first().pk}  # type: ignore[union-attr]


def another_entry(row: Model) -> Entry:
    """Return an entry that closed no period."""
    entry = Entry._base_manager.filter(period=None).first()
    assert entry is not None
    return entry


def another_file(row: Model) -> Attachment:
    """Return a kept file that no import is of."""
    file = Attachment._base_manager.exclude(pk=row.file_id).first()  # type: ignore[attr-defined]
    assert file is not None
    return file


def after(row: Model, **values: Any) -> Values:
    """Change a row so that it is the second of its kind."""
    values["transfer"] = 999
    insert_copy(row, values)
    return values


def a_vessel() -> int:
    """Return the id of some vessel."""
    vessel = Vessel._base_manager.first()
    assert vessel is not None
    return vessel.pk


def a_component() -> int:
    """Return the id of some component."""
    component = Component._base_manager.first()
    assert component is not None
    return component.pk


def a_place() -> int:
    """Return the id of some place."""
    place = Place._base_manager.first()
    assert place is not None
    return place.pk


OPEN: Values = {"finished_at": None, "finished_by_id": None, "abandoned": False}


def another_open(row: Model, **values: Any) -> Values:
    """Change a count day so that it is the second one that is open."""
    insert_copy(row, {**OPEN, **values})
    return {**OPEN, **values}


def taken_back(row: Model) -> Values:
    """Change a line so that it does not stand beside the first."""
    return {"taken_back_at": LOADED_AT, "taken_back_by_id": row.seen_by_id, "entry_id": None}  # type: ignore[attr-defined]


OTHER_END = {"vessel_id": None, "boundary": "the moon"}
EXAMPLES: dict[str, dict[str, Change]] = {
    "workshop.User": {"user_email_once": lambda row: {"email": row.email.upper()}},  # type: ignore[attr-defined]
    "workshop.Workshop": {"workshop_sheet_years": {"sheet_years": 0}},
    "workshop.Membership": {"membership_once": twice, "membership_role": {"role": "king"}},
    "workshop.Place": {"place_name_once": twice},
    "workshop.EmergencyNumber": {"emergency_number_position_once": twice},
    "jobs.Job": {
        "job_state_known": {"state": "asleep"},
        "job_lease_while_running": {"state": "running"},
        "job_finished_when_over": {"state": "done"},
        "job_progress_in_total": {"progress_done": 2, "progress_total": 1},
        "job_tries_in_attempts": {"tries": 2, "attempts": 1},
    },
    "jobs.Schedule": {"schedule_task_once": twice, "schedule_every_positive": {"every_seconds": 0, "task": "other"}},
    "journal.Entry": {
        "entry_sequence_once": twice,
        "entry_sequence_from_one": {"sequence": 0},
        "entry_precision": {"sequence": 999, "precision": "year"},
    },
    "journal.Attachment": {"attachment_once": twice},
    "register.Substance": {"substance_name_once": twice},
    "register.Product": {"product_name_once": twice},
    "register.ProductRevision": {
        "revision_number_once": twice,
        "revision_density_above_zero": {"density": 0},
        "revision_ph_floor_range": {"ph_floor": -1},
        "revision_form": {"form": "plasma"},
        "revision_packing_group": {"packing_group": "IV", "transport_unclassified": False},
        "revision_transport_or_none": {"transport_unclassified": True, "un_number": "1830"},
    },
    "register.CompositionLine": {
        "composition_substance_once": twice,
        "composition_not_negative": {"amount": -1},
        "composition_per": {"per": "mL"},
    },
    "register.ExposureLimit": {"exposure_limit_kind": {"kind": "weekly"}},
    "ledger.Vessel": {"vessel_name_once": twice, "vessel_kind": {"kind": "bucket"}},
    "ledger.VesselChange": {"vessel_change_fact": {"fact": "colour"}},
    "ledger.Component": {"component_code_once": twice, "component_kind": {"kind": "spirit"}},
    "ledger.Posting": {
        "posting_vessel_once": lambda row: after(row, vessel_id=a_vessel(), boundary=""),
        "posting_boundary_once": lambda row: after(row, vessel_id=None, boundary="air"),
        "posting_vessel_or_boundary": OTHER_END,
        "posting_amount_range": {"amount": 10**15 + 1},
        "posting_sd_not_negative": {"sd": -1},
        "posting_basis": {"basis": "guessed"},
    },
    "ledger.Holding": {"holding_once": twice},
    "ledger.Content": {"content_once": twice},
    "ledger.Finding": {"finding_once": twice},
    "ledger.Books": {"books_recomputed_by_a_job": {"recomputed_to": LOADED_AT}},
    "ledger.Period": {
        "period_until_once": lambda row: {"closing_id": another_entry(row).pk},
        "period_after_before_until": lambda row: {"closing_id": another_entry(row).pk, "after": LOADED_AT},
    },
    "ledger.ClosingHolding": {"closing_holding_once": twice},
    "process.Tank": {
        "tank_metal_with_valence": {"metal": "Cu", "valence": None},
        "tank_soluble_anode_set": {"anode_kind": "soluble", "anode_id": None},
        "tank_efficiency_above_zero": {"efficiency": 0},
        "tank_side_reaction_inert": {"anode_kind": "soluble", "side_reaction": "acid"},
        "tank_rack_share_of_racks": {"racks_id": None, "rack_share": 30_000},
    },
    "process.RackType": {"rack_type_name_once": twice, "rack_type_drag_out_not_negative": {"drag_out": -1}},
    "process.Route": {"route_name_once": twice},
    "process.Instrument": {
        "instrument_name_once": twice,
        "instrument_measures": {"name": "another", "measures": "luck"},
        "instrument_uncertainty_as_typed": {"name": "another", "sd": None, "sd_typed": "0.1 L"},
        "instrument_days_in_order": {"name": "another", "calibrated_on": "2026-02-01", "valid_until": "2026-01-01"},
    },
    "process.LevelMark": {
        "level_mark_once": {"height": None},
        "level_mark_height_once": {"mark": "another"},
        "level_mark_not_negative": {"mark": "another", "height": None, "volume": -1},
    },
    "process.RouteStep": {"route_position_once": twice},
    "process.Import": {
        "import_file_once": twice,
        "import_subject": {"subject": "recipes"},
        "import_with_its_entries": lambda row: {"file_id": another_file(row).pk, "imported_at": LOADED_AT},
    },
    "process.CountDay": {
        "count_day_open_once_at_place": lambda row: another_open(row, place_id=a_place()),
        "count_day_open_once_of_all": lambda row: {**OPEN, "place_id": None},
        "count_day_finished_by_somebody": {"finished_at": LOADED_AT, "finished_by_id": None},
    },
    "process.CountLine": {
        "count_line_once": {"entry_id": None},
        "count_line_amount_or_word": lambda row: {**taken_back(row), "base": None},
        "count_line_taken_back_by_somebody": lambda row: {**taken_back(row), "taken_back_by_id": None},
    },
    "documents.Paper": {"paper_number_once": on_another_entry, "paper_kind": {"kind": "poem"}},
    "premises.ChosenRule": {"chosen_rule_named": {"rule": ""}},
    "premises.QuantityLimit": {
        "limit_of_what_by_whom": {"citation": ""},
        "limit_measure": {"measure": "area"},
        "limit_amount_range": {"amount": -1},
    },
    "premises.KeepApart": {
        "keep_apart_two_sorts_by_whom": {"first": ""},
        "keep_apart_reach": {"reach": "room"},
    },
    "premises.Assessment": {"assessment_place_or_shared": {"shared": "tray"}},
    "waste.WasteStream": {"waste_stream_name_once": twice},
    "dropoffs.Receiver": {"receiver_name_once": twice},
    "dropoffs.DropOff": {
        "drop_off_state": {"state": "lost"},
        "drop_off_mode": {"mode": "thrown"},
        "drop_off_manifest_when_packed": {"state": "packed", "manifest_id": None},
    },
}
pytestmark = pytest.mark.django_db
TABLE = [(label, name, change) for label, changes in EXAMPLES.items() for name, change in changes.items()]


def first_row(model: type[Model]) -> Model:
    """Return a row to copy; of tables that the demo leaves empty, a new one."""
    row = model._base_manager.order_by("pk").first()
    if row is not None:
        return row
    entry = Entry._base_manager.order_by("pk").first()
    assert entry is not None
    made: dict[type[Model], Values] = {
        Job: {"task": "sweep", "due_at": LOADED_AT, "created_at": LOADED_AT},
        Schedule: {"task": "sweep", "every_seconds": 60, "due_at": LOADED_AT},
        Finding: {"workshop_id": entry.workshop_id, "entry": entry, "code": "x", "occurred_at": LOADED_AT},
        Period: {
            "workshop_id": entry.workshop_id,
            "closing": entry,
            "until": LOADED_AT,
            "sequence": 1,
            "fold_version": 1,
        },
        Assessment: {
            "workshop_id": entry.workshop_id,
            "reach": "place",
            "place": Place._base_manager.first(),
            "until": LOADED_AT.date(),
            "entered_at": LOADED_AT,
            "entered_by_id": entry.member_id,
        },
        Import: {
            "workshop_id": entry.workshop_id,
            "file": Attachment._base_manager.first(),
            "changed_at": LOADED_AT,
            "changed_by_id": entry.member_id,
        },
    }
    if model is ClosingHolding:
        held = {"period": first_row(Period), "vessel_id": a_vessel(), "component_id": a_component(), "variance": 0}
        return model._base_manager.create(workshop_id=entry.workshop_id, **held)
    return model._base_manager.create(**made[model])


def insert_copy(row: Model, changes: Values) -> None:
    """Insert a row that differs in the changes, and in whatever is unique on its own."""
    values = {field.attname: getattr(row, field.attname) for field in row._meta.concrete_fields}
    fresh: Values = {"uuid": uuid4(), "code": uuid4().hex[:8], "email": f"{uuid4().hex}@demo.example"}
    for field in row._meta.concrete_fields:
        if field.primary_key:
            values[field.attname] = uuid4() if isinstance(row, Job) else None
        elif field.unique and field.attname in fresh:
            values[field.attname] = fresh[field.attname]
    type(row)(**(values | changes)).save(force_insert=True)


def refused_by(error: IntegrityError, model: type[Model]) -> str:
    """Return the name of the constraint that refused. SQLite names the columns of a unique one in its place."""
    if connection.vendor == "postgresql":
        name: str = error.__cause__.diag.constraint_name  # type: ignore[union-attr]
        return name
    text = str(error)
    if named := re.search(r"CHECK constraint failed: (\w+)|UNIQUE constraint failed: index '(\w+)'", text):
        return named[1] or named[2]
    columns = set(re.findall(r"\w+\.(\w+)", text.partition("UNIQUE constraint failed:")[2]))
    for constraint in model._meta.constraints:
        fields = getattr(constraint, "fields", ())
        if columns and {model._meta.get_field(field).column for field in fields} == columns:  # type: ignore[union-attr]
            return constraint.name
    return text


@pytest.mark.usefixtures("people")
@pytest.mark.parametrize(("label", "name", "change"), TABLE, ids=[name for _, name, _ in TABLE])
def test_what_a_constraint_refuses(label: str, name: str, change: Change) -> None:
    model = apps.get_model(label)
    if model is Entry:  # the triggers would refuse it first
        triggers.remove(connection)
    row = first_row(model)
    changes = change(row) if callable(change) else change
    with pytest.raises(IntegrityError) as caught, transaction.atomic():
        insert_copy(row, changes)
    assert refused_by(caught.value, model) == name


def test_every_constraint_has_an_example() -> None:
    constraints = {
        (model._meta.label, constraint.name)
        for model in our_models()
        for constraint in model._meta.constraints
        if isinstance(constraint, CheckConstraint | UniqueConstraint)
    }
    assert constraints == {(label, name) for label, name, _ in TABLE}


def test_no_rule_between_columns_is_without_a_name() -> None:
    nameless = [model._meta.label for model in our_models() if model._meta.unique_together]
    assert nameless == []
