"""Files by their hash: complete, found changed, mended."""

import hashlib
import os
from pathlib import Path

import pytest

from chemicals.journal import files

DATA = b"%PDF-1.4 a sheet"
SHA256 = hashlib.sha256(DATA).hexdigest()


def test_a_file_lies_under_its_hash(attachments_folder: Path) -> None:
    assert files.keep(DATA) == SHA256
    assert files.path_of(SHA256) == attachments_folder / SHA256[:2] / SHA256
    assert files.read(SHA256) == DATA


def test_keeping_twice_leaves_one_file_and_nothing_else(attachments_folder: Path) -> None:
    files.keep(DATA)
    files.keep(DATA)
    assert [path.name for path in attachments_folder.rglob("*") if path.is_file()] == [SHA256]


def test_a_missing_file_is_named(attachments_folder: Path) -> None:
    with pytest.raises(files.DamagedFileError, match=f"{SHA256} is missing"):
        files.read(SHA256)


def test_a_changed_file_is_named_and_mended_by_keeping_it_again(attachments_folder: Path) -> None:
    files.keep(DATA)
    files.path_of(SHA256).write_bytes(DATA[:-1])
    with pytest.raises(files.DamagedFileError, match=f"{SHA256} was changed"):
        files.read(SHA256)
    files.keep(DATA)
    assert files.read(SHA256) == DATA


def test_a_full_disk_leaves_no_half_file(attachments_folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(handle: int) -> None:
        raise OSError("No space left on device")

    monkeypatch.setattr(os, "fsync", fail)
    with pytest.raises(OSError, match="No space"):
        files.keep(DATA)
    assert [path for path in attachments_folder.rglob("*") if path.is_file()] == []
