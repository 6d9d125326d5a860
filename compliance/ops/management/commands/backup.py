"""One file with everything."""

from argparse import ArgumentParser
from pathlib import Path
from typing import Any

from django.core.management.base import BaseCommand, CommandError
from django.utils import timezone

from compliance.ops.archive import BackupError
from compliance.ops.backup import write_backup


class Command(BaseCommand):
    """Write database and files into one file, while the service runs or not."""

    help = "Write everything into one new FILE, also while the service runs. Restore it with: manage.py restore FILE"

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("file", type=Path)

    def handle(self, *args: Any, **options: Any) -> None:
        path = options["file"].resolve()
        try:
            manifest = write_backup(path, now=timezone.now())
        except BackupError as error:
            raise CommandError(str(error)) from error
        files = sum(1 for member in manifest.members if member.rows is None)
        self.stdout.write(
            f"Backup: {path} ({path.stat().st_size} bytes): {manifest.rows['workshop.workshop']} workshops, "
            f"{manifest.rows['journal.entry']} entries, {files} files. Keep a copy away from this machine."
        )
