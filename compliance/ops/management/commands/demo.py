"""The demo without serving it: for rehearsals."""

from typing import Any

from django.core.management.base import BaseCommand, CommandError
from django.utils import timezone

from compliance.ops.demo import NotEmptyError, load_demo


class Command(BaseCommand):
    """Record the invented demo workshop in an empty database and print who can sign in."""

    help = "Load the invented demo workshop into an empty database; print its people with their random passwords."

    def handle(self, *args: Any, **options: Any) -> None:
        try:
            users = load_demo(now=timezone.now())
        except NotEmptyError as error:
            raise CommandError(str(error)) from error
        for user in users:
            self.stdout.write("\t".join(user))
