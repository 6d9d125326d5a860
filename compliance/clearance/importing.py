"""The door for files: nobody is asked about what has happened, or stands there already; every entry says so."""

from collections.abc import Iterable
from datetime import datetime

from django.db import transaction
from django_scopes import scope

from chemicals.jobs.services import enqueue
from chemicals.journal.services import Fact, lock_chain
from chemicals.process.importing.columns import ColumnMap
from chemicals.process.importing.files import choose_columns, read_table
from chemicals.process.importing.reading import RowError
from chemicals.process.importing.register.plan import Plan, RegisterUnderstood
from chemicals.process.importing.register.understanding import understand_register
from chemicals.process.importing.table import Table
from chemicals.process.importing.understanding import Made, Understood, understand
from chemicals.process.models import Import, Subject
from chemicals.process.selectors import get_import_for
from chemicals.process.services import record_past
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_same_workshop, require_writer
from compliance.clearance.registering import imported_from, write_plan

AT_ONCE = 5000
"""Rows of a file that are checked, or recorded, in a request; a larger file is left to a job."""

MOST_KEPT = 1000
"""How many errors that a job found are kept."""

TASK = "import-entries"


class RefusedImportError(InvalidInputError):
    """Rows of a file are wrong: nothing of it was recorded."""

    def __init__(self, understood: Understood | RegisterUnderstood) -> None:
        super().__init__([FieldError(path_of(error), error.message) for error in understood.errors])
        self.args = (f"What is wrong: {understood.wrong}. Nothing was recorded.",)
        self.understood = understood


def path_of(error: RowError) -> str:
    """Return what an error is about: "rows.7.Amount" is the column Amount in row 7, "columns.Amount" all of it."""
    if error.row:
        return ".".join(filter(None, ("rows", str(error.row), error.column)))
    return f"columns.{error.column}" if error.column else "mapping"


def preview_import(
    member: Membership, now: datetime, upload: Import, chosen: ColumnMap, *, whole: bool = False
) -> Understood | RegisterUnderstood:
    """Return what the first rows of a file say (of most files these are all), and what is wrong. Writes nothing.

    ``whole``: all rows, however many.
    """
    subject, most = Subject(upload.subject), None if whole else AT_ONCE
    table, sha256 = read_table(upload), upload.file.sha256
    return read_file(member, now, table, chosen, subject=subject, sha256=sha256, most=most)


def read_file(
    member: Membership,
    now: datetime,
    table: Table,
    chosen: ColumnMap,
    *,
    subject: Subject,
    sha256: str,
    most: int | None = None,
) -> Understood | RegisterUnderstood:
    """Return what the rows of a file say of its subject, at most so many of them. Writes nothing."""
    if subject == Subject.REGISTER:
        return understand_register(member, now, table, chosen, sha256, most=most)
    return understand(member, now, table, chosen, sha256, most=most)


def record_import(
    *, actor: Membership, now: datetime, upload: Import, chosen: ColumnMap, whole: bool = False
) -> Import:
    """Record all that a file says, or nothing and raise RefusedImportError; leave a large file to a job.

    ``whole``: leave nothing to a job. A file that is imported, or about to be, is returned as it is.
    """
    require_writer(actor)
    require_same_workshop(actor, upload)
    upload = get_import_for(actor, upload.uuid)
    if upload.imported_at is not None or upload.waits:
        return upload
    understood = preview_import(actor, now, upload, chosen, whole=whole)
    try:
        upload = choose_columns(actor=actor, now=now, upload=upload, chosen=chosen)
    except ConflictError:  # somebody else was quicker
        return get_import_for(actor, upload.uuid)
    if understood.wrong:
        raise RefusedImportError(understood)
    if understood.all_read:
        write_import(actor=actor, now=now, upload=upload, made=understood.made)
    else:
        _leave_to_job(actor, now, upload)
    return get_import_for(actor, upload.uuid)


def _leave_to_job(actor: Membership, now: datetime, upload: Import) -> None:
    """Enqueue the import, unless somebody else has meanwhile."""
    with transaction.atomic(), scope(workshop=actor.workshop):
        lock_chain(actor)
        found = get_import_for(actor, upload.uuid)
        if found.imported_at is None and not found.waits:
            payload = {"import": found.pk, "member": actor.pk}
            found.job = enqueue(now=now, task=TASK, payload=payload, workshop=actor.workshop)
            found.save(update_fields=["job"])


def write_import(*, actor: Membership, now: datetime, upload: Import, made: Iterable[Made] | Plan) -> None:
    """Record what a file says, unless it is there already.

    Raises ConflictError if somebody has written to the register meanwhile what the file writes.
    """
    sha256 = upload.file.sha256
    with transaction.atomic(), scope(workshop=actor.workshop):
        lock_chain(actor)
        upload = Import.objects.get(pk=upload.pk)
        if upload.imported_at is not None:
            return
        if isinstance(made, Plan):
            facts = write_plan(actor=actor, now=now, plan=made, sha256=sha256)
            upload.made = made.counts
        else:
            facts = [_as_fact(each, sha256) for each in made]
        entries = record_past(actor=actor, now=now, facts=facts) if facts else []
        upload.imported_at = now
        if entries:
            upload.first, upload.last = entries[0].sequence, entries[-1].sequence
        upload.save(update_fields=["imported_at", "first", "last", "made"])


def _as_fact(made: Made, sha256: str) -> Fact:
    return Fact(made.said.key, made.event, made.occurred, imported_from(made.said.row, sha256), (sha256,))


def refuse_import(upload: Import, errors: Iterable[RowError], wrong: int) -> None:
    """Keep what is wrong with a file that a job has read."""
    rows = [(error.row, error.column, error.message) for error in list(errors)[:MOST_KEPT]]
    with scope(workshop=upload.workshop):
        Import.objects.filter(pk=upload.pk).update(errors=rows, wrong=wrong)


def refusals_of(error: InvalidInputError | ConflictError) -> list[RowError]:
    """Return what has come between since a file was read, as errors of the file."""
    messages = [each.message for each in error.errors] if isinstance(error, InvalidInputError) else [str(error)]
    return [RowError(0, "", message) for message in messages]
