"""Files by SHA-256, outside the database. A file is complete on disk before an entry may name it."""

import hashlib
import os
import tempfile
from pathlib import Path

from django.conf import settings

from chemicals.workshop.errors import DomainError


class DamagedFileError(DomainError):
    """A kept file is missing, or its bytes are not those that were put in."""


def path_of(sha256: str) -> Path:
    """Return where a file lies."""
    return Path(settings.ATTACHMENTS) / sha256[:2] / sha256


def keep(data: bytes) -> str:
    """Write the bytes durably, unless they are there already; return their SHA-256 in hex.

    A missing or changed file is mended by keeping its bytes again.
    """
    sha256 = hashlib.sha256(data).hexdigest()
    path = path_of(sha256)
    if path.exists() and path.read_bytes() == data:
        return sha256
    path.parent.mkdir(parents=True, exist_ok=True)
    handle, fresh = tempfile.mkstemp(dir=path.parent)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        Path(fresh).replace(path)  # readers see the whole file or none
    except BaseException:
        Path(fresh).unlink()
        raise
    _sync_folder(path.parent)
    return sha256


def read(sha256: str) -> bytes:
    """Return the bytes; refuse a missing or changed file."""
    try:
        data = path_of(sha256).read_bytes()
    except FileNotFoundError as error:
        raise DamagedFileError(f"The file {sha256} is missing. Restore it from a backup.") from error
    if hashlib.sha256(data).hexdigest() != sha256:
        raise DamagedFileError(f"The file {sha256} was changed on disk. Restore it from a backup.")
    return data


def _sync_folder(folder: Path) -> None:
    handle = os.open(folder, os.O_RDONLY)
    try:
        os.fsync(handle)
    finally:
        os.close(handle)
