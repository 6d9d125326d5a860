"""The one file of a backup: what stands in it, and how a changed byte or a missing end shows.

A zip archive of ``manifest.json``, ``tables/APP.MODEL.jsonl`` (a row per line, free of any database engine) and
``files/SHA256``. The last 64 bytes, its comment, are the SHA-256 of everything before them.
"""

import hashlib
import re
import tomllib
import zipfile
from collections.abc import Iterable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from typing import IO

from django.apps import AppConfig, apps
from django.conf import settings
from django.db.migrations.loader import MigrationLoader
from django.db.models import Model

from chemicals.books import canonical
from compliance.ops.start import OUR_PACKAGES

FORMAT = 1
MANIFEST = "manifest.json"
SEAL = 64
"""Length of the comment: a SHA-256 in hex."""
NAME = re.compile(r"manifest\.json|tables/[a-z]+\.[a-z]+\.jsonl|files/[0-9a-f]{64}")


class BackupError(Exception):
    """A backup cannot be written, or cannot be restored; the message says what to do."""


@dataclass(frozen=True)
class Member:
    """A file in the archive; ``rows`` of a table, None of an attachment."""

    name: str
    sha256: str
    size: int
    rows: int | None


@dataclass(frozen=True)
class Manifest:
    """What the archive holds, and which version of the program wrote it. ``migrations`` are "app.name", sorted."""

    format: int
    program: str
    made_at: datetime
    migrations: tuple[str, ...]
    members: tuple[Member, ...]

    @property
    def rows(self) -> dict[str, int]:
        """Return the number of rows by table ("journal.entry")."""
        return {table_of(m.name): m.rows for m in self.members if m.rows is not None}


def program_version() -> str:
    """Return the version of this program."""
    version: str = tomllib.loads((settings.BASE_DIR / "pyproject.toml").read_text())["project"]["version"]
    return version


def our_apps() -> list[AppConfig]:
    """Return the apps whose tables are backed up; sessions and the tables of libraries are left out."""
    return [config for config in apps.get_app_configs() if config.name.startswith(OUR_PACKAGES)]


def our_migrations() -> set[str]:
    """Return the migrations that this version of the program has for these tables, as "app.name"."""
    ours = {config.label for config in our_apps()}
    return {f"{app}.{name}" for app, name in MigrationLoader(None).disk_migrations if app in ours}


def name_of(model: type[Model]) -> str:
    """Return where the rows of a table stand."""
    return f"tables/{model._meta.label_lower}.jsonl"


def table_of(name: str) -> str:
    """Return the table whose rows stand under a name."""
    return name.removeprefix("tables/").removesuffix(".jsonl")


def in_order(models: Iterable[type[Model]]) -> list[type[Model]]:
    """Return tables so that each comes after those that it points to."""
    left = {model._meta.label: model for model in models}
    ordered: list[type[Model]] = []
    while left:
        ready = sorted(label for label, model in left.items() if not _targets(model) & (set(left) - {label}))
        ordered += [left.pop(label) for label in ready]
    return ordered


def _targets(model: type[Model]) -> set[str]:
    related = [field.related_model for field in model._meta.concrete_fields]
    return {target._meta.label for target in related if isinstance(target, type)}


def seal(file: IO[bytes]) -> None:
    """Write the digest of everything before the comment into the comment."""
    size = file.seek(0, 2)
    digest = _digest(file, size - SEAL)
    file.seek(size - SEAL)
    file.write(digest.encode())


def _digest(file: IO[bytes], length: int) -> str:
    digest = hashlib.sha256()
    file.seek(0)
    while length > 0 and (block := file.read(min(length, 1 << 20))):
        digest.update(block)
        length -= len(block)
    return digest.hexdigest()


@contextmanager
def open_checked(path: Path) -> Iterator[tuple[zipfile.ZipFile, Manifest]]:
    """Open a backup, having proved that every byte is as it was written. Raises BackupError."""
    if not path.is_file():
        raise BackupError(f"There is no file {path}. Name the backup file.")
    with path.open("rb") as file:
        if not zipfile.is_zipfile(file):
            raise BackupError(f"{path} is no backup, or its end is missing. Copy it again, or take another backup.")
        size = file.seek(0, 2)
        digest = _digest(file, size - SEAL)
        file.seek(max(0, size - SEAL))
        if file.read() != digest.encode():
            raise BackupError(f"{path} was changed or is incomplete. Copy it again, or take another backup.")
        file.seek(0)
        with zipfile.ZipFile(file) as archive:
            _check_names(archive)
            manifest = _read_manifest(archive)
            for member in manifest.members:
                _check_member(archive, member)
            yield archive, manifest


def _check_names(archive: zipfile.ZipFile) -> None:
    names = archive.namelist()
    strange = sorted(name for name in set(names) if not NAME.fullmatch(name) or names.count(name) > 1)
    if strange:
        raise BackupError(
            f"The archive holds {strange[0]!r}, which no backup holds. Do not use it; take another backup."
        )


def _read_manifest(archive: zipfile.ZipFile) -> Manifest:
    try:
        plain = canonical.load(archive.read(MANIFEST))
    except (KeyError, ValueError) as error:
        raise BackupError(f"The list of the backup cannot be read. Take another backup. ({error})") from error
    written = plain.get("format") if isinstance(plain, dict) else None
    if written != FORMAT:
        raise BackupError(
            f"The backup has the format {written}, this program reads {FORMAT}. Install the version that wrote it."
        )
    try:
        manifest = canonical.from_plain(Manifest, plain)
    except ValueError as error:
        raise BackupError(f"The list of the backup cannot be read. Take another backup. ({error})") from error
    listed = [MANIFEST, *(member.name for member in manifest.members)]
    if sorted(listed) != sorted(archive.namelist()):
        raise BackupError("The backup does not hold what its list says. Do not use it; take another backup.")
    return manifest


def _check_member(archive: zipfile.ZipFile, member: Member) -> None:
    digest, size, lines = hashlib.sha256(), 0, 0
    with archive.open(member.name) as file:
        while block := file.read(1 << 20):
            digest.update(block)
            size += len(block)
            lines += block.count(b"\n")
    wanted = member.sha256 == digest.hexdigest() and member.size == size and member.rows in (lines, None)
    if not wanted or (member.rows is None and member.name != f"files/{member.sha256}"):
        raise BackupError(f"{member.name} in the backup is not what its list says. Do not use it; take another backup.")
