"""From an older version to this one, with a way back."""

from typing import Any

from django.conf import settings
from django.core.management import call_command
from django.core.management.base import BaseCommand, CommandError
from django.utils import timezone

from chemicals.ledger.services import refold_outdated
from compliance.ops import start
from compliance.ops.archive import BackupError
from compliance.ops.backup import write_backup


class Command(BaseCommand):
    """Back up, migrate, fold outdated books again, verify. The service must not be running."""

    help = "Back up the data folder, bring database and books to this version, verify the journal."

    def handle(self, *args: Any, **options: Any) -> None:
        try:
            with start.hold_folder(settings.DATA):
                self.upgrade()
        except (BackupError, start.StartError) as error:
            raise CommandError(str(error)) from error

    def upgrade(self) -> None:
        """Do all four; a failure leaves the backup, and its message says where."""
        start.refuse_newer_database()
        if start.is_empty_database():
            raise start.StartError(f"There is no database in {settings.DATA} yet. Run: make serve")
        pending = start.pending_migrations()
        now = timezone.now()
        backup = settings.DATA / "backups" / f"before-upgrade-{now:%Y%m%dT%H%M%SZ}.zip"
        backup.parent.mkdir(mode=0o700, exist_ok=True)
        write_backup(backup, now=now)
        self.stdout.write(f"Backup: {backup}")
        call_command("migrate", interactive=False, verbosity=0)
        self.stdout.write(f"Migrations: {', '.join(pending) or 'none were pending'}")
        try:
            again = refold_outdated()
        except ValueError as error:
            raise CommandError(f"The books cannot be folded again: {error} Run: manage.py verify") from error
        self.stdout.write(f"Folded again: {', '.join(workshop.name for workshop in again) or 'no books needed it'}")
        call_command("verify", stdout=self.stdout)
