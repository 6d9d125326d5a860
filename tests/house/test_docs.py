"""Docs that lag fail here."""

import re
import tomllib

from django.core.management import get_commands

from chemicals.books.fold.state import FINDINGS
from chemicals.science.ghs import MESSAGES as CONTRADICTIONS
from tests.house.source import ROOT, python_files

README = (ROOT / "README.md").read_text()
DEVELOPERS = (ROOT / "DEVELOPERS.md").read_text()
MAKEFILE = (ROOT / "Makefile").read_text()
OUR_VARIABLES = re.compile(r'(?:environ(?:\.get)?[\[(]|getenv\()\s*"([A-Z_]+)"')
FOREIGN = {"DJANGO_SETTINGS_MODULE", "PATH", "HOME"}


def test_every_setting_is_documented() -> None:
    variables = {name for path in python_files() for name in OUR_VARIABLES.findall((ROOT / path).read_text())} - FOREIGN
    assert variables
    assert {name for name in variables if f"`{name}`" not in DEVELOPERS} == set()


def test_every_command_is_documented() -> None:
    ours = {name for name, app in get_commands().items() if app.startswith(("chemicals.", "compliance."))}
    assert {"calculate", "verify", "backup", "restore", "work", "run", "serve", "upgrade"} <= ours
    assert {name for name in ours if f"`manage.py {name}" not in DEVELOPERS} == set()


def test_every_finding_code_is_documented() -> None:
    assert {code for code in FINDINGS if f"`{code}`" not in DEVELOPERS} == set()


def test_every_contradiction_code_is_documented() -> None:
    assert {code for code in CONTRADICTIONS if f"`{code}`" not in DEVELOPERS} == set()


def test_every_target_of_the_makefile_is_documented_and_exists() -> None:
    targets = set(re.findall(r"^\.PHONY: (.*)$", MAKEFILE, re.MULTILINE)[0].split())
    named = set(re.findall(r"(?:^    |`)make ([a-z-]+)", README + DEVELOPERS, re.MULTILINE))
    assert named == targets


def test_the_readme_says_the_job_first_and_two_commands_next() -> None:
    title, job, *_ = [block for block in README.split("\n\n") if block.strip()]
    assert title.startswith("# Gramledger")
    assert len(job.split()) > 60
    commands = re.findall(r"^    (make [a-z-]+)", README, re.MULTILINE)
    assert commands[:2] == ["make run", "make test"]


def test_every_dependency_has_its_reason_and_its_lock() -> None:
    text = (ROOT / "pyproject.toml").read_text()
    project = tomllib.loads(text)["project"]
    extras = project["optional-dependencies"]
    for lock, names in {
        "requirements.txt": project["dependencies"],
        "requirements-scaled.txt": project["dependencies"] + extras["scaled"],
        "requirements-dev.txt": project["dependencies"] + extras["scaled"] + extras["dev"],
    }.items():
        pinned = {
            name.lower() for name in re.findall(r"^([A-Za-z0-9_.-]+)(?:\[.*\])?==", (ROOT / lock).read_text(), re.M)
        }
        assert {re.split(r"[<>=\[]", name)[0].lower() for name in names} <= pinned
    lines = re.findall(r'^    "([A-Za-z].*)",(.*)$', text.split("[tool.")[0], re.MULTILINE)
    typed = {"mypy", "django-stubs", "djangorestframework-stubs", "ruff", "pytest-django"}
    assert [name for name, reason in lines if "#" not in reason and re.split(r"[<>=\[]", name)[0] not in typed] == []


def test_every_room_of_the_house_is_on_the_map() -> None:
    rooms = {"/".join(path.parts[:2]) for path in python_files() if len(path.parts) > 2 and path.parts[0] != "tests"}
    assert {room for room in rooms if f"`{room}`" not in DEVELOPERS} == set()


def test_the_changelog_names_the_version() -> None:
    version = tomllib.loads((ROOT / "pyproject.toml").read_text())["project"]["version"]
    assert f"## {version}" in (ROOT / "CHANGELOG.md").read_text()
