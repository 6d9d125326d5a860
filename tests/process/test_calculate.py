"""The command `calculate`: JSON in, JSON out, and no database (the test client of the database is never asked for)."""

import io
import json
import os
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest
from django.core.management import call_command

from chemicals.science.calculations import CALCULATIONS

SAMPLES = sorted((Path(__file__).parent / "calculations").glob("*.json"))


def run(monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str], name: str, text: bytes) -> tuple[int, Any]:
    """Exit status and the JSON written."""
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(text)))
    status = 0
    try:
        call_command("calculate", name)
    except SystemExit as stopped:
        status = int(str(stopped.code))
    return status, json.loads(capsys.readouterr().out)


@pytest.mark.parametrize("sample", SAMPLES, ids=lambda path: path.stem)
def test_the_samples_give_their_results(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str], sample: Path
) -> None:
    """Each sample holds the input and some of the results; `status` 2 marks the bad ones, with the fields refused."""
    case = json.loads(sample.read_text())
    status, found = run(monkeypatch, capsys, case["name"], json.dumps(case["input"]).encode())
    assert status == case["status"]
    if status:
        assert sorted(error["field"] for error in found["errors"]) == sorted(case["refused"])
        assert all(error["message"] for error in found["errors"])
    else:
        assert {key: found[key] for key in case["output"]} == pytest.approx(case["output"], rel=1e-6)


def test_there_are_samples_for_every_calculation_good_and_bad() -> None:
    cases = [json.loads(sample.read_text()) for sample in SAMPLES]
    assert {case["name"] for case in cases if case["status"] == 0} == set(CALCULATIONS)
    assert {case["name"] for case in cases if case["status"] == 2} == set(CALCULATIONS)


@pytest.mark.parametrize(
    ("name", "text", "fields"),
    [
        ("composition", b"", ["input"]),
        ("composition", b"{", ["input"]),
        ("composition", b"[1, 2]", ["input"]),
        ("composition", b'"Cu"', ["input"]),
        ("composition", b"\xff\xfe\xff", ["input"]),
        ("composition", b"[" * 100_000, ["input"]),
        ("composition", b'{"formula": ' + b"9" * 5000 + b"}", ["input"]),
        ("composition", b'{"formula": "Cu", "formula": "Au"}', ["formula"]),
        ("limit", b'{"value": NaN, "sd": Infinity, "limit": 1}', ["value", "sd"]),
        ("unheard-of", b"{}", ["name"]),
        ("", b"{}", ["name"]),
    ],
)
def test_what_cannot_be_read_is_refused_with_status_2(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str], name: str, text: bytes, fields: list[str]
) -> None:
    status, found = run(monkeypatch, capsys, name, text)
    assert status == 2
    assert [error["field"] for error in found["errors"]] == fields


def test_the_list_names_every_calculation(capsys: pytest.CaptureFixture[str]) -> None:
    call_command("calculate", "--list")
    names = [line.split("\t")[0] for line in capsys.readouterr().out.splitlines()]
    assert names == ["composition", "faraday", "rinse", "static-rinse", "drag-out", "titration", "limit"]


def test_it_runs_in_a_fresh_process_with_a_database_that_cannot_be_reached(tmp_path: Path) -> None:
    env = os.environ | {
        "DATABASE_URL": "sqlite:////proc/no/such/folder/db.sqlite3",
        "GRAMLEDGER_DATA": str(tmp_path),
        "DJANGO_SETTINGS_MODULE": "compliance.settings",
    }
    done = subprocess.run(
        [sys.executable, "manage.py", "calculate", "composition"],
        input='{"formula": "CuSO4.5H2O"}', capture_output=True, text=True, env=env, check=False,
        cwd=Path(__file__).parents[2],
    )  # fmt: skip
    assert done.returncode == 0, done.stderr
    assert json.loads(done.stdout)["molar_mass_g_mol"] == pytest.approx(249.677)
