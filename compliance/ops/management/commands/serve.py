"""Real use in one command."""

import os
from typing import Any

from django.conf import settings
from django.core.management import call_command
from django.core.management.base import BaseCommand, CommandError
from django.db import connections

from chemicals.ledger.selectors import list_outdated_books
from compliance.ops import start
from compliance.ops.first_start import ensure_token
from compliance.ops.supervisor import supervise


class Command(BaseCommand):
    """Serve a workshop from its own data folder until Ctrl-C or SIGTERM."""

    help = "Serve a workshop from the folder GRAMLEDGER_DATA until Ctrl-C or SIGTERM."
    requires_system_checks = ()  # done below, the database's among them

    def handle(self, *args: Any, **options: Any) -> None:
        try:
            self.require_settings()
            with start.hold_folder(settings.DATA):
                start.require_free_port(settings.BIND)
                self.prepare()
                self.greet(ensure_token(settings.DATA))
                connections.close_all()
                supervise(start.service_children(settings.BIND), say=self.say)
        except start.StartError as error:
            raise CommandError(str(error)) from error

    def require_settings(self) -> None:
        """Refuse to guess where the data lies and what a phone in the workshop can reach."""
        if not os.environ.get("GRAMLEDGER_DATA"):
            raise start.StartError("Set GRAMLEDGER_DATA to the folder for this workshop's data. Back that folder up.")
        if (settings.DATA / "demo-users.txt").exists():
            raise start.StartError(f"The folder {settings.DATA} holds the demo. Name another one in GRAMLEDGER_DATA.")
        start.require_public_address(settings.BIND)

    def prepare(self) -> None:
        """Migrate a new database; leave an older one to `make upgrade`, which makes a backup first."""
        start.refuse_newer_database()
        pending = start.pending_migrations()
        if pending and not start.is_empty_database():
            raise start.StartError(f"The database is older than this program ({pending[0]} ...). Run: make upgrade")
        if pending:
            self.say("Preparing the database ...")
            call_command("migrate", interactive=False, verbosity=0)
        if list_outdated_books():
            raise start.StartError("The books were kept by an older version of this program. Run: make upgrade")
        self.check(databases=["default"])  # is the journal still guarded by its triggers?
        start.collect_static(settings.DATA)

    def greet(self, token: str | None) -> None:
        """Print the address; before there is a user, the one for the first start."""
        self.say(f"\nGramledger: {settings.PUBLIC_URL}   data: {settings.DATA}")
        if token is not None:
            self.say(f"First start. Open this address once:\n\n  {settings.PUBLIC_URL}/first-start?token={token}\n\n")
        self.say("Ctrl-C ends it.")

    def say(self, text: str) -> None:
        """Print at once, also into a pipe."""
        self.stdout.write(text)
        self.stdout.flush()
