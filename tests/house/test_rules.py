"""House rules that a reader can break without noticing; each names its reason."""

import ast
import re
from pathlib import Path

from tests.house.source import ROOT, calls, python_files, tracked, tree

CLOCK_FILES = {"tasks.py", "celery.py"}
CLOCK_FOLDERS = {("compliance", "web"), ("compliance", "api")}
FLOAT_FREE_NAMES = re.compile(r"(models|forms|serializers)\.py$|^chemicals/books/|/forms/|/serializers/")


def _may_read_clock(path: Path) -> bool:
    return path.name in CLOCK_FILES or path.parts[:2] in CLOCK_FOLDERS or "commands" in path.parts


def test_no_clock_below_the_faces() -> None:
    """``now`` is passed in, so that every act can be repeated at any time."""
    readers = [
        f"{path}:{line} {name}()"
        for path in python_files()
        if not _may_read_clock(path)
        for line, name in calls(path)
        if name in ("now", "utcnow", "today", "localdate")
    ]
    assert readers == []


def test_no_float_touches_an_amount() -> None:
    """Floats lose units of the ledger; they live in science only."""
    floats = []
    for path in python_files():
        if not FLOAT_FREE_NAMES.search(path.as_posix()):
            continue
        for node in ast.walk(tree(path)):
            literal = isinstance(node, ast.Constant) and isinstance(node.value, float)
            named = isinstance(node, ast.Name) and node.id in ("float", "FloatField")
            attribute = isinstance(node, ast.Attribute) and node.attr == "FloatField"
            if literal or named or attribute:
                floats.append(f"{path}: {ast.unparse(node)}")
    assert floats == []


def test_no_page_or_paper_passes_judgement() -> None:
    """The tool defers to local rules: the word for having met them stands nowhere but in this rule."""
    word = "compl" + "iant"
    allowed = {"README.md", "DEVELOPERS.md"}
    found = [
        f"{path}:{number}"
        for path in tracked()
        if path.suffix in (".py", ".html", ".md", ".css", ".js", ".json", ".toml") and str(path) not in allowed
        for number, line in enumerate((ROOT / path).read_text().splitlines(), 1)
        if re.search(rf"\b(non-?)?{word}\b", line, re.IGNORECASE)
    ]
    assert found == []


def test_query_counts_are_asserted_in_a_with_block() -> None:
    """Called without ``with`` they check nothing."""
    bare = [
        f"{path}:{node.lineno}"
        for path in python_files(tests=True)
        for node in ast.walk(tree(path))
        if isinstance(node, ast.Expr)
        and isinstance(node.value, ast.Call)
        and re.search(r"assert_?num_?queries|assertNumQueries", ast.unparse(node.value.func))
    ]
    assert bare == []


def test_no_test_is_skipped() -> None:
    """A skipped test passes for a green one."""
    skipping = re.compile(r"pytest\.(mark\.)?(skip|skipif|xfail|importorskip)")
    found = [
        str(p)
        for p in python_files(tests=True)
        if skipping.search((ROOT / p).read_text()) and p.name != "test_rules.py"
    ]
    assert found == []


def test_every_test_asserts_something() -> None:
    """A test without an assertion cannot fail."""
    silent = []
    for path in python_files(tests=True):
        if not path.name.startswith("test_"):
            continue
        helpers = {
            node.name
            for node in ast.walk(tree(path))
            if isinstance(node, ast.FunctionDef) and not node.name.startswith("test_") and _asserts(node, set())
        }
        silent += [
            f"{path}:{node.lineno} {node.name}"
            for node in ast.walk(tree(path))
            if isinstance(node, ast.FunctionDef) and node.name.startswith("test_") and not _asserts(node, helpers)
        ]
    assert silent == []


def _asserts(function: ast.FunctionDef, helpers: set[str]) -> bool:
    for node in ast.walk(function):
        if isinstance(node, ast.Assert):
            return True
        if isinstance(node, ast.Call):
            name = ast.unparse(node.func)
            if name.startswith(("pytest.raises", "pytest.fail", "django_assert", "assert_", "check_", "expect_")):
                return True
            if name in helpers or ".assert_" in name:
                return True
    return False


def test_the_journal_is_never_written_past_its_services() -> None:
    """One way to write an entry."""
    writers = [
        str(path)
        for path in python_files()
        if re.search(
            r"\bEntry\.objects\.(create|bulk_create|update_or_create|get_or_create)\(", (ROOT / path).read_text()
        )
    ]
    assert writers == ["chemicals/journal/services.py"]


def test_foreign_keys_into_the_journal_protect_it() -> None:
    """People are deactivated, entries stay."""
    from django.apps import apps
    from django.db.models import PROTECT, ForeignKey

    from chemicals.journal.models import Entry

    keys = [field for field in Entry._meta.get_fields() if isinstance(field, ForeignKey)]
    keys += [
        field
        for model in apps.get_models()
        for field in model._meta.get_fields()
        if isinstance(field, ForeignKey) and field.related_model is Entry
    ]
    assert keys
    assert [str(key) for key in keys if key.remote_field.on_delete is not PROTECT] == []


def test_no_registry_or_machine_stands_in_a_file() -> None:
    """Locks and files work on any machine, with any index."""
    hosts = re.compile(r"pypi\.org|pythonhosted|npmjs|(?<![\w.])/(work|farm|root)/")
    found = [
        f"{path}:{number}"
        for path in tracked()
        if path.suffix in (".py", ".md", ".txt", ".toml", ".html", ".json", "", ".sh")
        for number, line in enumerate((ROOT / path).read_text(errors="replace").splitlines(), 1)
        if hosts.search(line) and path.name != "test_rules.py"
    ]
    assert found == []
