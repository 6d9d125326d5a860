"""The project's own source files, for the tests that read them."""

import ast
import subprocess
from collections.abc import Iterator
from functools import cache
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]


@cache
def tracked() -> tuple[Path, ...]:
    """Return every file that git tracks or would track, relative to the top."""
    command = ["git", "ls-files", "--cached", "--others", "--exclude-standard"]
    names = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=True).stdout.splitlines()
    return tuple(Path(name) for name in names if (ROOT / name).is_file())


def python_files(*, tests: bool = False) -> list[Path]:
    """Return the Python files of the product, or of the tests too, without migrations."""
    return [
        path
        for path in tracked()
        if path.suffix == ".py" and "migrations" not in path.parts and (tests or path.parts[0] != "tests")
    ]


def tree(path: Path) -> ast.Module:
    """Return the syntax tree of a file."""
    return ast.parse((ROOT / path).read_text(), filename=str(path))


def calls(path: Path) -> Iterator[tuple[int, str]]:
    """Yield (line, name) of every call in a file; a method call gives its last name."""
    for node in ast.walk(tree(path)):
        if isinstance(node, ast.Call):
            if isinstance(node.func, ast.Attribute):
                yield node.lineno, node.func.attr
            elif isinstance(node.func, ast.Name):
                yield node.lineno, node.func.id
