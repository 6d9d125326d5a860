"""``check --deploy``: what an installation for real use should have, each with what to do."""

import os
from pathlib import Path
from typing import Any
from urllib.parse import urlsplit

from django.conf import settings
from django.core.checks import CheckMessage, Error, Warning, register
from django.db import DatabaseError, connections
from django.db.backends.base.base import BaseDatabaseWrapper

from chemicals.journal.triggers import check_triggers

LOOPBACK = ("127.0.0.1", "localhost", "::1")


@register(deploy=True)
def check_public_url(**kwargs: Any) -> list[CheckMessage]:
    """Passwords and codes travel in the open without https, unless they stay on this machine."""
    address = urlsplit(settings.PUBLIC_URL)
    if address.scheme == "https" or address.hostname in LOOPBACK:
        return []
    hint = "Put a proxy with a certificate before it and set PUBLIC_URL to its https address."
    return [
        Warning(
            f"PUBLIC_URL is {settings.PUBLIC_URL}: passwords cross the network in the open.", hint=hint, id="ops.W001"
        )
    ]


@register(deploy=True)
def check_data_folder(**kwargs: Any) -> list[CheckMessage]:
    """Database, files and key are for the service's own user; the files can be written."""
    problems: list[CheckMessage] = [
        Warning(f"Others on this machine can read {path}.", hint=f"Run: chmod go-rwx {path}", id="ops.W002")
        for path in (settings.DATA, settings.DATA / "secret-key")
        if path.exists() and path.stat().st_mode & 0o077
    ]
    folder = _nearest(settings.ATTACHMENTS)
    if not os.access(folder, os.W_OK | os.X_OK):
        hint = "Let the user that runs the service own the data folder."
        problems.append(Error(f"Files cannot be kept: {folder} is not writable.", hint=hint, id="ops.E003"))
    return problems


def _nearest(folder: Path) -> Path:
    """Return the folder, or the one above it in which it will be made."""
    return folder if folder.exists() else _nearest(folder.parent)


@register(deploy=True)
def check_database(**kwargs: Any) -> list[CheckMessage]:
    """The database answers, keeps its write-ahead log, and has the journal's triggers. A new one is not made here."""
    connection = connections["default"]
    if connection.vendor == "sqlite" and not Path(connection.settings_dict["NAME"]).exists():
        return []
    try:
        return [*_check_journal_mode(connection), *check_triggers(databases=["default"])]
    except DatabaseError as error:
        hint = "Start the database, or mend DATABASE_URL."
        return [Error(f"The database does not answer: {error}", hint=hint, id="ops.E005")]


def _check_journal_mode(connection: BaseDatabaseWrapper) -> list[CheckMessage]:
    if connection.vendor != "sqlite":
        return []
    with connection.cursor() as cursor:
        cursor.execute("PRAGMA journal_mode")
        (mode,) = cursor.fetchone()
    if mode == "wal":
        return []
    hint = "Keep the data folder on a disk of this machine: network folders cannot share a write-ahead log."
    return [
        Error(f"SQLite keeps its journal in mode {mode}: people would wait for each other.", hint=hint, id="ops.E004")
    ]
