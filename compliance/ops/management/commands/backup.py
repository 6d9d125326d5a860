"""One file with everything."""

from argparse import ArgumentParser
from pathlib import Path
from typing import Any

from django.core.management.base import BaseCommand, CommandError
from django.utils import timezone

from compliance.ops.archive import BackupError
from compliance.ops.backup import write_backup
from compliance.ops.verify import count_up


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
        counted = count_up(manifest.rows["workshop.workshop"], manifest.rows["journal.entry"], files)
        self.stdout.write(
            f"Backup: {path} ({path.stat().st_size} bytes): {counted}. Keep a copy away from this machine."
        )
