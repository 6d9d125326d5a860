"""One file that holds everything but sessions and keys, consistent while people go on recording."""

import base64
import hashlib
import json
import os
import tempfile
import zipfile
from collections.abc import Iterable, Iterator
from contextlib import contextmanager
from datetime import UTC, date, datetime
from pathlib import Path
from typing import Any
from uuid import UUID

from django.db import connection, transaction
from django.db.migrations.loader import MigrationLoader
from django.db.models import Model

from chemicals.books import canonical
from chemicals.journal import files
from compliance.ops import archive as layout
from compliance.ops.archive import BackupError, Manifest, Member

BATCH = 2000


def write_backup(path: Path, *, now: datetime) -> Manifest:
    """Write the backup to a new file that only its user may read; all of it or nothing. Raises BackupError."""
    if path.exists():
        raise BackupError(f"{path} exists already. Choose another name.")
    if not path.parent.is_dir():
        raise BackupError(f"There is no folder {path.parent}. Make it, or choose another one.")
    try:
        return _write_whole(path, now)
    except FileExistsError as error:
        raise BackupError(f"{path} exists already. Choose another name.") from error
    except OSError as error:
        raise BackupError(
            f"The backup cannot be written to {path.parent}: {error.strerror}. Choose another folder."
        ) from error


def _write_whole(path: Path, now: datetime) -> Manifest:
    """Write under another name first, so that the backup is whole from its first moment."""
    handle, fresh = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.")
    try:
        with os.fdopen(handle, "w+b") as file:
            with zipfile.ZipFile(file, "w", zipfile.ZIP_DEFLATED) as archive, _snapshot():
                manifest = _fill(archive, now)
                archive.comment = b"0" * layout.SEAL
            layout.seal(file)
            file.flush()
            os.fsync(file.fileno())
        os.link(fresh, path)  # fails if somebody else has taken the name meanwhile
    finally:
        Path(fresh).unlink()
    return manifest


@contextmanager
def _snapshot() -> Iterator[None]:
    """Hold one view of the database; others go on writing meanwhile.

    SQLite's write-ahead log gives a reader the state at its first read, PostgreSQL's REPEATABLE READ likewise.
    """
    if connection.vendor == "sqlite":
        with connection.cursor() as cursor:
            cursor.execute("BEGIN DEFERRED")  # Django's own begin would take the lock of writers
            try:
                yield
            finally:
                cursor.execute("ROLLBACK")
        return
    with transaction.atomic(), connection.cursor() as cursor:
        cursor.execute("SET TRANSACTION ISOLATION LEVEL REPEATABLE READ, READ ONLY")
        yield


def _fill(archive: zipfile.ZipFile, now: datetime) -> Manifest:
    """Write all members; the tables have the shape that the database has, which may be older than this program's."""
    loader = MigrationLoader(connection)
    applied = [key for key in loader.graph.nodes if key in loader.applied_migrations]
    if not applied:
        raise BackupError("There is no database here yet. Name the data folder in GRAMLEDGER_DATA.")
    ours = {config.label for config in layout.our_apps()}
    models = loader.project_state(applied).apps.get_models(include_auto_created=True)
    tables = layout.in_order(model for model in models if model._meta.app_label in ours)
    members = [_write(archive, layout.name_of(model), _lines(model), rows=True) for model in tables]
    sheets = next(model for model in tables if model._meta.label == "journal.Attachment")
    kept = sheets._base_manager.order_by("sha256").values_list("sha256", flat=True).distinct()
    members += [_write(archive, f"files/{sha256}", [_read_file(sha256)], rows=False) for sha256 in list(kept)]
    manifest = Manifest(
        format=layout.FORMAT,
        program=layout.program_version(),
        made_at=now,
        migrations=tuple(sorted(f"{app}.{name}" for app, name in applied if app in ours)),
        members=tuple(members),
    )
    archive.writestr(layout.MANIFEST, canonical.dump(canonical.to_plain(manifest)))
    return manifest


def _write(archive: zipfile.ZipFile, name: str, parts: Iterable[bytes], *, rows: bool) -> Member:
    digest, size, count = hashlib.sha256(), 0, 0
    with archive.open(name, "w", force_zip64=True) as file:
        for part in parts:
            file.write(part)
            digest.update(part)
            size += len(part)
            count += 1
    return Member(name, digest.hexdigest(), size, count if rows else None)


def _lines(model: type[Model]) -> Iterator[bytes]:
    names = [field.attname for field in model._meta.concrete_fields]
    rows = model._base_manager.order_by("pk").values_list(*names)
    for row in rows.iterator(chunk_size=BATCH):
        plain = {name: _plain(value) for name, value in zip(names, row, strict=True)}
        yield json.dumps(plain, ensure_ascii=False, separators=(",", ":")).encode() + b"\n"


def _plain(value: Any) -> Any:
    """Return a value as JSON has it; the restore turns it back by the type of its column."""
    if isinstance(value, bytes | memoryview):
        return base64.b64encode(value).decode()
    if isinstance(value, datetime):
        return value.astimezone(UTC).isoformat()
    if isinstance(value, date):
        return value.isoformat()
    return str(value) if isinstance(value, UUID) else value


def _read_file(sha256: str) -> bytes:
    try:
        return files.read(sha256)
    except files.DamagedFileError as error:
        raise BackupError(
            f"{error} Without it a backup would be incomplete: put files/{sha256} of an earlier backup to "
            f"{files.path_of(sha256)}, or upload the same file again."
        ) from error
