"""From a backup to an installation."""

from argparse import ArgumentParser
from pathlib import Path
from typing import Any

from django.conf import settings
from django.core.management import call_command
from django.core.management.base import BaseCommand, CommandError

from compliance.ops import start
from compliance.ops.archive import BackupError
from compliance.ops.restore import check_backup, require_empty, restore_backup


class Command(BaseCommand):
    """Restore a backup into an empty data folder and database; ends with proved books or with nothing."""

    help = "Restore the backup FILE into the empty folder GRAMLEDGER_DATA (and the empty database DATABASE_URL)."

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("file", type=Path)

    def handle(self, *args: Any, **options: Any) -> None:
        path = options["file"].resolve()
        try:
            check_backup(path)
            with start.hold_folder(settings.DATA):
                self.prepare()
                manifest = restore_backup(path)
        except (BackupError, start.StartError) as error:
            raise CommandError(str(error)) from error
        self.stdout.write(f"Restored as of {manifest.made_at.isoformat(timespec='seconds')}. Everybody signs in again.")
        call_command("verify", stdout=self.stdout)

    def prepare(self) -> None:
        """Make the tables in a new database; leave an older one alone."""
        start.refuse_newer_database()
        pending = start.pending_migrations()
        if pending and not start.is_empty_database():
            raise BackupError("The database is in use and older than this program. Name an empty one.")
        if pending:
            call_command("migrate", interactive=False, verbosity=0)
        require_empty()
