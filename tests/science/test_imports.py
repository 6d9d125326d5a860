"""Science starts fast and stands alone: no slow library before it is needed, and no Django ever."""

import subprocess
import sys


def modules_after(statement: str) -> set[str]:
    """The names of all modules loaded in a fresh process that ran the statement."""
    code = f"{statement}\nimport sys\nprint(*sys.modules)"
    return set(subprocess.run([sys.executable, "-c", code], check=True, capture_output=True, text=True).stdout.split())


def test_importing_the_calculations_loads_no_slow_library_and_no_django() -> None:
    loaded = modules_after("import chemicals.science.calculations")
    assert "chemicals.science.faraday" in loaded
    assert not loaded & {"pint", "periodictable", "numpy", "scipy", "django", "sqlite3"}


def test_a_conversion_loads_pint_and_still_no_django() -> None:
    loaded = modules_after("from chemicals.science.quantity import parse\nparse('1 gal', 'volume')")
    assert "pint" in loaded
    assert "django" not in loaded
