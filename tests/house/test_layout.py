"""The house has the rooms of its plan and no others; files and functions stay short."""

import ast

from tests.house.source import ROOT, python_files, tracked, tree

TOP = {
    ".ci", ".gitignore", "CHANGELOG.md", "DEVELOPERS.md", "LICENSE", "Makefile", "NOTICE", "README.md", "chemicals",
    "compliance", "fixtures", "manage.py", "pyproject.toml", "requirements-dev.txt", "requirements-scaled.txt",
    "requirements.txt", "tests",
}  # fmt: skip
LONGEST_FILE, LONGEST_FUNCTION = 400, 80
ROOMS = {"models.py", "services.py", "selectors.py"}


def test_nothing_else_lies_at_the_top() -> None:
    assert {path.parts[0] for path in tracked()} == TOP


def test_no_file_is_longer_than_a_reader_can_hold() -> None:
    long = {
        str(p): n for p in python_files(tests=True) if (n := len((ROOT / p).read_text().splitlines())) > LONGEST_FILE
    }
    assert long == {}


def test_no_function_is_longer_than_a_screen() -> None:
    long = [
        f"{path}:{node.lineno} {node.name}"
        for path in python_files(tests=True)
        for node in ast.walk(tree(path))
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef)
        and (node.end_lineno or node.lineno) - node.lineno + 1 > LONGEST_FUNCTION
    ]
    assert long == []


def test_every_module_says_what_it_is_for() -> None:
    silent = [
        str(path)
        for path in python_files()
        if path.name not in ("__init__.py", "apps.py") and ast.get_docstring(tree(path)) is None
    ]
    assert silent == []


def test_every_public_function_and_class_has_a_docstring() -> None:
    silent = [
        f"{path}:{node.lineno} {node.name}"
        for path in python_files()
        if path.name != "apps.py" and path.parts[0] != ".ci" and path.parts[:2] != ("compliance", "web")
        for node in tree(path).body
        if isinstance(node, ast.FunctionDef | ast.ClassDef)
        and not node.name.startswith("_")
        and ast.get_docstring(node) is None
    ]
    assert silent == []


def test_every_app_that_writes_has_its_rooms() -> None:
    for path in python_files():
        if path.name == "services.py":
            names = {other.name for other in (ROOT / path.parent).iterdir()}
            assert "selectors.py" in names, path
