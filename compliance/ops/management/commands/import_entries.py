"""Imports without a browser: of past records here, of the register by `import_register`."""

import hashlib
import json
from argparse import ArgumentParser
from collections.abc import Iterable, Mapping
from pathlib import Path
from typing import Any
from uuid import UUID

from django.core.management.base import BaseCommand, CommandError
from django.utils import timezone

from chemicals.ledger.selectors import get_recomputed_to
from chemicals.process.importing.columns import ColumnMap, as_json, from_json
from chemicals.process.importing.files import add_import, guess_map
from chemicals.process.importing.reading import RowError
from chemicals.process.importing.register.plan import KINDS, RegisterUnderstood
from chemicals.process.importing.table import open_table
from chemicals.process.models import Subject
from chemicals.workshop.errors import DomainError
from chemicals.workshop.models import Membership, Role
from compliance.clearance.importing import RefusedImportError, read_file, record_import


class Command(BaseCommand):
    """Record all rows of a CSV or XLSX file, or say everything that is wrong and record nothing."""

    subject = Subject.ENTRIES
    help = "Import past records from FILE, a CSV or XLSX file in which each row is an entry: all of them or none."

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("file", type=Path)
        parser.add_argument("--workshop", type=UUID, required=True, help="the workshop, as its addresses name it")
        parser.add_argument("--mapping", type=Path, help="what the columns mean, in JSON; else the headings say it")
        parser.add_argument("--by", default="", help="e-mail address of the member who records; else the only owner")
        parser.add_argument("--dry-run", action="store_true", help="only say how the file is understood")

    def handle(self, *args: Any, **options: Any) -> None:
        try:
            data = options["file"].read_bytes()
            member = find_member(options["workshop"], options["by"])
            chosen = read_mapping(options["mapping"])
            if options["dry_run"]:
                self.look(member, data, chosen)
            else:
                self.record(member, options["file"].name, data, chosen)
        except RefusedImportError as error:
            self.refuse(error.understood.errors, error.understood.wrong)
        except (DomainError, OSError, ValueError) as error:
            raise CommandError(str(error)) from error

    def look(self, member: Membership, data: bytes, chosen: ColumnMap | None) -> None:
        """Say how the file is understood."""
        table = open_table(data)
        chosen = chosen or guess_map(member.workshop, table, self.subject)
        self.stdout.write(json.dumps(as_json(chosen), ensure_ascii=False, indent=2))
        sha256 = hashlib.sha256(data).hexdigest()
        understood = read_file(member, timezone.now(), table, chosen, subject=self.subject, sha256=sha256)
        if understood.wrong:
            self.refuse(understood.errors, understood.wrong)
        if isinstance(understood, RegisterUnderstood):
            for remark in understood.remarks:
                self.stdout.write(f"row {remark.row}: {remark.message}")
            made = tell_counts(understood.made.counts)
        else:
            made = f"{len(understood.made)} entries"
        self.stdout.write(f"{understood.rows} rows, {made}. Nothing was recorded.")

    def record(self, member: Membership, name: str, data: bytes, chosen: ColumnMap | None) -> None:
        """Record all of it."""
        now = timezone.now()
        chosen = chosen or guess_map(member.workshop, open_table(data), self.subject)
        upload = add_import(actor=member, now=now, name=name, data=data, subject=self.subject)
        done = record_import(actor=member, now=now, upload=upload, chosen=chosen, whole=True)
        if done.imported_at is None:
            raise CommandError("A job is about to import this file.")
        before = "" if upload.imported_at is None else "This file was imported before. "
        if done.made:
            before += f"{tell_counts(done.made)}. "
        entries = f"Entries {done.first} to {done.last}." if done.first else "No entries."
        self.stdout.write(f"{before}{entries}")
        if get_recomputed_to(member.workshop) is not None:
            self.stdout.write("The books are being recomputed by a job: manage.py work")

    def refuse(self, errors: Iterable[RowError], wrong: int) -> None:
        """Print everything that is wrong, and fail."""
        for error in errors:
            where = ", ".join(filter(None, (f"row {error.row}" if error.row else "", error.column))) or "the file"
            self.stderr.write(f"{where}: {error.message}")
        raise CommandError(f"What is wrong: {wrong}. Nothing was recorded.")


def tell_counts(counts: Mapping[str, int]) -> str:
    """Return how many things of each kind a file of the register makes: "products: 2, revisions: 0, ..."."""
    return ", ".join(f"{kind}: {counts[kind]}" for kind in KINDS)


def find_member(workshop: UUID, email: str) -> Membership:
    """Return who records: the member of the address, or the only owner."""
    members = Membership.objects.filter(workshop__uuid=workshop, active=True).select_related("workshop", "user")
    found = list(members.filter(user__email=email.lower()) if email else members.filter(role=Role.OWNER))
    if len(found) != 1:
        raise CommandError("Name a member of this workshop: --by EMAIL" if found or email else "No such workshop.")
    return found[0]


def read_mapping(path: Path | None) -> ColumnMap | None:
    """Return what a file says of the columns."""
    return None if path is None else from_json(json.loads(path.read_text()))
