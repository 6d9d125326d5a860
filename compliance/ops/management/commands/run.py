"""The demo in one command."""

from pathlib import Path
from typing import Any

from django.conf import settings
from django.core.management import call_command
from django.core.management.base import BaseCommand, CommandError
from django.db import connections, transaction
from django.utils import timezone

from chemicals.workshop.models import User
from compliance.ops import start
from compliance.ops.supervisor import supervise

DemoUser = tuple[str, str, str]
"""E-mail address, password, role."""


class Command(BaseCommand):
    """Serve the invented demo workshop from its own data folder, with jobs running, until Ctrl-C."""

    help = "Serve the invented demo workshop until Ctrl-C."
    requires_system_checks = ()  # the second start takes less than 5 s; `make test` runs the checks

    def handle(self, *args: Any, **options: Any) -> None:
        try:
            start.require_public_address(settings.BIND)
            with start.hold_folder(settings.DATA):
                start.require_free_port(settings.BIND)
                users = self.prepare()
                self.greet(users)
                connections.close_all()
                supervise(start.service_children(settings.BIND), say=self.say)
        except start.StartError as error:
            raise CommandError(str(error)) from error

    def prepare(self) -> list[DemoUser]:
        """Bring schema, demo and static files up to date; return the people who can sign in."""
        start.refuse_newer_database()
        if start.pending_migrations():
            self.say("Preparing the database ...")
            call_command("migrate", interactive=False, verbosity=0)
        start.collect_static(settings.DATA)
        return self.load_or_read(settings.DATA / "demo-users.txt")

    def load_or_read(self, kept: Path) -> list[DemoUser]:
        """Load the demo into an empty database and keep its random passwords, or read those kept before."""
        if User.objects.exists():
            return self.read(kept)
        from compliance.ops.demo import load_demo

        self.say("Loading the demo workshop ...")
        with transaction.atomic():  # the people and their only readable passwords appear together
            users = load_demo(now=timezone.now())
            start.write_private(kept, "".join("\t".join(user) + "\n" for user in users))
        return users

    def read(self, kept: Path) -> list[DemoUser]:
        """Return the people of an earlier start; refuse a folder that the demo did not make."""
        if not kept.exists():
            raise start.StartError(
                f"The folder {kept.parent} holds people but no demo. For a workshop of your own use `make serve`; "
                "for a new demo name an empty folder in GRAMLEDGER_DATA."
            )
        rows = [line.split("\t") for line in kept.read_text().splitlines()]
        return [(email, password, role) for email, password, role in rows]

    def greet(self, users: list[DemoUser]) -> None:
        """Print the address and who can sign in there."""
        width = max(len(email) for email, _, _ in users)
        self.say(f"\nGramledger, invented demo data: {settings.PUBLIC_URL}\n\n")
        for email, password, role in users:
            self.say(f"  {email:<{width}}  {password}  ({role})")
        self.say("\nCtrl-C ends it.")

    def say(self, text: str) -> None:
        """Print at once, also into a pipe."""
        self.stdout.write(text)
        self.stdout.flush()
