"""Backups that somebody tampered with who knows how they are sealed."""

import hashlib
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

from chemicals.books import canonical
from compliance.ops import archive as layout

Members = dict[str, bytes]


def read_members(path: Path) -> Members:
    """Return what a backup holds, by name."""
    with zipfile.ZipFile(path) as archive:
        return {name: archive.read(name) for name in archive.namelist()}


def write_archive(path: Path, members: list[tuple[str, bytes]]) -> Path:
    """Write an archive with a seal that fits."""
    with path.open("w+b") as file:
        with zipfile.ZipFile(file, "w") as archive:
            for name, data in members:
                archive.writestr(name, data)
            archive.comment = b"0" * layout.SEAL
        layout.seal(file)
    return path


def forge(source: Path, change: Callable[[Members], Any], *, relist: bool = True) -> Path:
    """Return a changed copy of a backup, sealed again; ``relist``: its list fits what it holds."""
    members = read_members(source)
    change(members)
    if relist:
        listed = canonical.load(members.pop(layout.MANIFEST))
        listed["members"] = [_member(name, data) for name, data in members.items()]
        members[layout.MANIFEST] = canonical.dump(listed)
    return write_archive(source.with_name("forged.zip"), list(members.items()))


def _member(name: str, data: bytes) -> dict[str, Any]:
    rows = data.count(b"\n") if name.startswith("tables/") else None
    return {"name": name, "sha256": hashlib.sha256(data).hexdigest(), "size": len(data), "rows": rows}


def relist(change: Callable[[dict[str, Any]], Any]) -> Callable[[Members], None]:
    """Return a change of the list itself."""

    def apply(members: Members) -> None:
        listed = canonical.load(members[layout.MANIFEST])
        change(listed)
        members[layout.MANIFEST] = canonical.dump(listed)

    return apply


def replace(table: str, old: bytes, new: bytes) -> Callable[[Members], None]:
    """Return a change of the rows of a table."""

    def apply(members: Members) -> None:
        name = f"tables/{table}.jsonl"
        assert old in members[name]
        members[name] = members[name].replace(old, new, 1)

    return apply
