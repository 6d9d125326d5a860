"""Puts a backup back into an empty installation, all or nothing, and proves it before anybody uses it."""

import json
import zipfile
from collections.abc import Iterator
from itertools import islice
from pathlib import Path
from typing import Any

from django.core.management.color import no_style
from django.db import DatabaseError, connection, transaction
from django.db.models import Model

from chemicals.journal import files
from chemicals.ledger.services import refold_outdated
from compliance.ops import archive as layout
from compliance.ops.archive import BackupError, Manifest, open_checked
from compliance.ops.verify import find_loose_ends, our_models, verify_workshops

BATCH = 1000


def check_backup(path: Path) -> Manifest:
    """Return the list of a backup that can be restored by this version. Reads all of it, writes nothing."""
    with open_checked(path) as (_, manifest):
        _require_same_version(manifest)
        return manifest


def restore_backup(path: Path) -> Manifest:
    """Restore into an empty database with this version's tables. Raises BackupError, and then nothing has changed."""
    with open_checked(path) as (archive, manifest):
        _require_same_version(manifest)
        require_empty()
        _require_tables(manifest)
        kept: list[Path] = []
        try:
            with transaction.atomic():
                _restore_files(archive, manifest, kept)
                for model in layout.in_order(our_models()):
                    _restore_table(archive, model)
                _reset_sequences()
                _refold()
                _require_sound()
        except BaseException as error:
            for new in kept:
                new.unlink(missing_ok=True)
            if isinstance(error, OSError):
                raise BackupError(f"Nothing was restored: {error}. Make room, or name another folder.") from error
            raise
        return manifest


def _require_same_version(manifest: Manifest) -> None:
    theirs, ours = set(manifest.migrations), layout.our_migrations()
    if theirs - ours:
        raise BackupError(
            f"The backup was made by a newer version of the program ({manifest.program}; this is "
            f"{layout.program_version()}). Install that version and restore with it."
        )
    if ours - theirs:
        raise BackupError(
            f"The backup was made by an older version of the program ({manifest.program}; this is "
            f"{layout.program_version()}). Restore it with that version, then install this one and run: make upgrade"
        )


def require_empty() -> None:
    """Refuse a database that holds anything."""
    for model in our_models():
        if model._base_manager.exists():
            raise BackupError(
                f"The database is in use: there are rows in {model._meta.label_lower}. Name an empty folder in "
                "GRAMLEDGER_DATA, or an empty database in DATABASE_URL."
            )


def _require_tables(manifest: Manifest) -> None:
    theirs, ours = set(manifest.rows), {model._meta.label_lower for model in our_models()}
    if theirs != ours:
        odd = ", ".join(sorted(theirs ^ ours))
        raise BackupError(f"The tables of the backup are not those of its version: {odd}. Take another backup.")


def _restore_files(archive: zipfile.ZipFile, manifest: Manifest, kept: list[Path]) -> None:
    """Keep the attachments under their hashes: no name from the archive becomes a path."""
    for member in manifest.members:
        if member.rows is None:
            path = files.path_of(member.sha256)
            if not path.exists():
                kept.append(path)
            files.keep(archive.read(member.name))


def _restore_table(archive: zipfile.ZipFile, model: type[Model]) -> None:
    with archive.open(layout.name_of(model)) as file:
        rows = _rows(model, file)
        while batch := list(islice(rows, BATCH)):
            try:
                model._base_manager.bulk_create(batch)
            except DatabaseError as error:
                raise BackupError(f"The database refuses a row of {model._meta.label_lower}: {error}") from error


def _rows(model: type[Model], lines: Iterator[bytes]) -> Iterator[Model]:
    fields = {field.attname: field for field in model._meta.concrete_fields}
    for number, line in enumerate(lines, 1):
        try:
            plain: dict[str, Any] = json.loads(line)
            row = model(**{name: field.to_python(plain.pop(name)) for name, field in fields.items()})
        except Exception as error:  # whatever a type makes of a value that it does not know
            raise BackupError(f"Row {number} of {model._meta.label_lower} cannot be read: {error!r}") from error
        if plain:
            raise BackupError(f"Row {number} of {model._meta.label_lower} has columns too many: {', '.join(plain)}")
        yield row


def _reset_sequences() -> None:
    """Let the next row get the next number: PostgreSQL does not notice numbers that were given."""
    with connection.cursor() as cursor:
        for sql in connection.ops.sequence_reset_sql(no_style(), our_models()):
            cursor.execute(sql)


def _refold() -> None:
    """Let open periods be as this version folds; of closed ones everything came with the backup."""
    try:
        refold_outdated()
    except ValueError as error:
        raise BackupError(f"The backup does not verify ({error}), so nothing was restored.") from error


def _require_sound() -> None:
    wrong = find_loose_ends()
    for verdict in verify_workshops():
        wrong += [f"{verdict.workshop.name}: {problem.message}" for problem in verdict.problems]
    if wrong:
        raise BackupError(f"The backup does not verify ({wrong[0]}), so nothing was restored. Take an earlier backup.")
