"""Past records by the command line, and the sample files: good ones go in, bad ones are refused with every reason."""

import json
import tomllib
from datetime import datetime
from io import StringIO
from pathlib import Path

import pytest
from django.core.management import CommandError, call_command
from django_scopes import scopes_disabled
from pytest_django import Settings

from chemicals.journal.models import Entry
from chemicals.ledger import late
from chemicals.ledger.models import Finding
from chemicals.ledger.verify import verify_projection
from chemicals.process.importing.columns import as_json
from chemicals.process.importing.files import guess_map
from chemicals.process.importing.register.columns import guess_register
from chemicals.process.importing.table import open_table
from chemicals.process.importing.understanding import understand
from chemicals.process.models import Import
from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership, Role, Workshop
from compliance.ops.demo import SCENARIO, Demo, load_demo

SAMPLES = SCENARIO.parent / "imports"


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


@pytest.fixture
def shop(db: None, now: datetime) -> Workshop:
    """Return the workshop of the demo before anything happened in it."""
    scenario = {**tomllib.loads(SCENARIO.read_text()), "history": [], "imports": []}
    Demo(scenario, now).load()
    return Workshop.objects.get()


def run(shop: Workshop, name: str, *options: str, command: str = "import_entries") -> str:
    """Run a command and return what it prints."""
    out, wrong = StringIO(), StringIO()
    try:
        call_command(command, str(SAMPLES / name), "--workshop", str(shop.uuid), *options, stdout=out, stderr=wrong)
    except CommandError as error:
        raise CommandError(f"{error}\n{wrong.getvalue()}") from error
    return out.getvalue()


def entries() -> list[Entry]:
    with scopes_disabled():
        return list(Entry.objects.order_by("sequence"))


@pytest.mark.parametrize("name", ["past-records-invented.csv", "past-records-invented.xlsx"])
def test_the_good_samples_go_in(shop: Workshop, name: str) -> None:
    assert run(shop, name).splitlines() == ["Entries 1 to 13."]
    assert [entry.kind for entry in entries()][-3:] == ["top-up", "analysis", "acceptance"]
    assert verify_projection(shop) == []
    with scopes_disabled():
        assert set(Finding.objects.values_list("code", flat=True)) <= {"was-unknown"}


def test_both_good_samples_say_the_same(shop: Workshop) -> None:
    said = []
    for name in ("past-records-invented.csv", "past-records-invented.xlsx"):
        table = open_table((SAMPLES / name).read_bytes())
        member = Membership.objects.get(role=Role.OWNER)
        found = understand(
            member, datetime.fromisoformat("2026-03-01T00:00Z"), table, guess_map(shop, table), "ab" * 32
        )
        said.append([(made.event, made.occurred) for made in found.made])
    assert said[0] == said[1]
    assert len(said[0]) == 13


def test_a_file_is_imported_once(shop: Workshop) -> None:
    run(shop, "past-records-invented.csv")
    assert run(shop, "past-records-invented.csv") == "This file was imported before. Entries 1 to 13.\n"
    assert len(entries()) == 13
    with pytest.raises(CommandError, match="This was imported already: it is entry 1"):
        run(shop, "past-records-invented.xlsx")  # the same keys


def test_a_column_map_of_another_country(shop: Workshop) -> None:
    mapping = str(SAMPLES / "german-spreadsheet-map.json")
    with pytest.raises(CommandError, match="row 4, Tag: Clocks were put back"):
        run(shop, "german-spreadsheet-invented.csv", "--mapping", mapping)
    assert entries() == []


def test_every_mistake_of_the_bad_sample_is_said(shop: Workshop) -> None:
    with pytest.raises(CommandError) as refused:
        run(shop, "mistakes-invented.csv")
    said = [line.partition(":")[0] for line in str(refused.value).splitlines()]
    assert said[0] == "What is wrong"
    assert said[1:] == [
        "row 3, Date", "row 4, Date", "row 5, Vessel", "row 6, Vessel", "row 7, Amount", "row 8, Amount",
        "row 9, Amount", "row 10, Key", "row 11, What", "row 12, Volume", "row 13, Volume", "row 14, Date",
    ]  # fmt: skip
    assert entries() == []


def test_the_sample_of_another_encoding_is_refused(shop: Workshop) -> None:
    with pytest.raises(CommandError, match="Line 2 holds a character that is not in UTF-8"):
        run(shop, "old-encoding-invented.csv")
    with pytest.raises(InvalidInputError):
        open_table((SAMPLES / "old-encoding-invented.csv").read_bytes())


def test_a_dry_run_says_what_it_would_do_and_keeps_nothing(shop: Workshop) -> None:
    said = run(shop, "past-records-invented.csv", "--dry-run")
    assert '"Charge [Ah]": "charge"' in said
    assert said.endswith("13 rows, 13 entries. Nothing was recorded.\n")
    with scopes_disabled():
        assert (Entry.objects.count(), Import.objects.count()) == (0, 0)
    with pytest.raises(CommandError, match="Nothing was recorded"):
        run(shop, "mistakes-invented.csv", "--dry-run")


def test_a_large_import_leaves_the_books_to_a_job(shop: Workshop, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(late, "LATE_LIMIT", 4)
    assert run(shop, "past-records-invented.csv").endswith("recomputed by a job: manage.py work\n")


def test_somebody_records_it(shop: Workshop) -> None:
    run(shop, "past-records-invented.csv", "--by", "Ben@demo.example")
    assert {entry.member.user.email for entry in entries()} == {"ben@demo.example"}
    for options, message in (
        (("--by", "nobody@demo.example"), "--by EMAIL"),
        (("--by", "cleo@demo.example"), "Observers only read"),
    ):
        with pytest.raises(CommandError, match=message):
            run(shop, "past-records-invented.csv", *options)
    shop.uuid = Import().uuid
    with pytest.raises(CommandError, match="No such workshop"):
        run(shop, "past-records-invented.csv")


@pytest.mark.parametrize("text", ["nonsense", "[]", '{"columns": {"Date": 1}}'])
def test_a_column_map_that_cannot_be_read_is_refused(shop: Workshop, tmp_path: Path, text: str) -> None:
    (tmp_path / "map.json").write_text(text)
    with pytest.raises(CommandError):
        run(shop, "past-records-invented.csv", "--mapping", str(tmp_path / "map.json"))
    assert entries() == []


def test_the_demo_has_laboratory_results_ready_to_be_imported(db: None, now: datetime) -> None:
    """They are older than the closed period: an analysis alone moves nothing."""
    load_demo(now=now)
    with scopes_disabled():
        upload = Import.objects.select_related("file").get()
        before = Entry.objects.count()
    assert upload.file.name == "lab-results-invented.csv"
    workshop = Workshop.objects.get()
    call_command("import_entries", str(SAMPLES / upload.file.name), "--workshop", str(workshop.uuid), stdout=StringIO())
    fresh = entries()[before:]
    assert [entry.kind for entry in fresh] == ["analysis"] * 4
    assert verify_projection(workshop) == []


def register(shop: Workshop, name: str, *options: str) -> str:
    """Run the command for the register and return what it prints."""
    return run(shop, name, *options, command="import_register")


@pytest.fixture
def new_places(tmp_path: Path) -> str:
    """Return a column map that lets rows name places that are not here."""
    table = open_table((SAMPLES / "register-invented.csv").read_bytes())
    path = tmp_path / "map.json"
    path.write_text(json.dumps({**as_json(guess_register(table.headings)), "add_places": True}))
    return str(path)


@pytest.mark.parametrize("name", ["register-invented.csv", "register-invented.xlsx"])
def test_the_good_samples_of_the_register_go_in(shop: Workshop, new_places: str, name: str) -> None:
    told = register(shop, name, "--mapping", new_places, "--dry-run")
    assert "5 rows, products: 4, revisions: 0, containers: 6, " in told
    assert 'row 4: "Sodium saccharin" is a new substance.' in told
    assert entries() == []
    told = register(shop, name, "--mapping", new_places)
    assert told.startswith("products: 4, revisions: 0, containers: 6, ")
    assert told.endswith("Entries 1 to 6.\n")
    assert [entry.kind for entry in entries()] == ["receipt", "receipt", "opening", "opening", "opening", "opening"]
    assert verify_projection(shop) == []
    assert register(shop, name, "--mapping", new_places).startswith("This file was imported before. products: 4")


def test_the_bad_sample_of_the_register_is_refused_row_by_row(shop: Workshop) -> None:
    with pytest.raises(CommandError) as refused:
        register(shop, "register-mistakes-invented.csv")
    told = str(refused.value).splitlines()
    assert {line.partition(",")[0] for line in told if line.startswith("row ")} == {f"row {n}" for n in range(3, 14)}
    assert told[0] == "What is wrong: 23. Nothing was recorded."
    assert "row 4, CAS number: The check digit of 7758-99-9 does not fit: read it again." in told
    with scopes_disabled():
        assert not Import.objects.filter(imported_at__isnull=False).exists()
