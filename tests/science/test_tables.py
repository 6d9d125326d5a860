"""Every row of the science tables says where its figures come from."""

from pathlib import Path

import pytest

import chemicals.science
from chemicals.science.tables import read_table

NAMES = sorted(path.stem for path in (Path(chemicals.science.__file__).parent / "data").glob("*.csv"))


def test_there_are_tables() -> None:
    assert {"elements", "units"} <= set(NAMES)


@pytest.mark.parametrize("name", NAMES)
def test_each_row_has_its_source_and_says_whether_it_was_read(name: str) -> None:
    rows = read_table(name)
    assert rows
    for row in rows:
        sources = [value for column, value in row.items() if column.endswith(("source", "edition"))]
        read = [value for column, value in row.items() if column.endswith("read")]
        assert sources
        assert all(sources)
        assert read
        assert set(read) <= {"read", "memory"}


@pytest.mark.parametrize("name", NAMES)
def test_no_row_stands_twice(name: str) -> None:
    keys = [tuple(row.values())[:2] for row in read_table(name)]
    assert len(keys) == len(set(keys))
