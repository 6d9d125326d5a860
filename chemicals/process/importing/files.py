"""Files to import as they are kept: uploaded, with what their columns mean, until they are imported."""

from datetime import datetime
from itertools import islice

from django.db import transaction
from django_scopes import scope

from chemicals.journal import files
from chemicals.journal.services import keep_file
from chemicals.process.importing.columns import VERB, ColumnMap, as_json, fold, from_json, guess, verb_words
from chemicals.process.importing.register.columns import guess_register
from chemicals.process.importing.table import Table, media_type_of, open_table
from chemicals.process.models import Import, Subject
from chemicals.workshop.errors import ConflictError
from chemicals.workshop.models import Membership, Workshop
from chemicals.workshop.permissions import require_same_workshop, require_writer

LOOKED_AT = 500
"""How many rows are looked at for the verbs that a file names."""


def add_import(
    *, actor: Membership, now: datetime, name: str, data: bytes, subject: Subject = Subject.ENTRIES
) -> Import:
    """Keep a CSV or XLSX file; the same bytes are the same import of a subject. Nothing is recorded yet."""
    require_writer(actor)
    open_table(data)
    with transaction.atomic(), scope(workshop=actor.workshop):
        file = keep_file(actor=actor, now=now, name=name, data=data, media_type=media_type_of(data))
        defaults = {"changed_at": now, "changed_by": actor}
        key = {"workshop": actor.workshop, "file": file, "subject": subject}
        found, _ = Import.objects.get_or_create(**key, defaults=defaults)
        return found


def read_table(upload: Import) -> Table:
    """Return the table in a kept file."""
    return open_table(files.read(upload.file.sha256))


def find_map(upload: Import, table: Table) -> ColumnMap:
    """Return what the columns mean: as it was said of this file, or as headings and the last import suggest."""
    return from_json(upload.mapping) if upload.mapping else guess_map(upload.workshop, table, Subject(upload.subject))


def guess_map(workshop: Workshop, table: Table, subject: Subject = Subject.ENTRIES) -> ColumnMap:
    """Return what headings and the workshop's last import of the subject suggest."""
    with scope(workshop=workshop):
        last = Import.objects.filter(subject=subject).exclude(mapping={}).order_by("-changed_at", "-pk").first()
    kept = None if last is None else from_json(last.mapping)
    if subject == Subject.REGISTER:
        return guess_register(table.headings, kept)
    first = guess(table.headings, kept)
    return guess(table.headings, kept, find_verbs(table, first) or first.verbs)


def find_verbs(table: Table, chosen: ColumnMap) -> list[str]:
    """Return the verbs that the first rows name: a heading may mean one thing with one verb, another with another."""
    place = next((place for place, heading in enumerate(table.headings) if chosen.columns[heading] == VERB), None)
    if place is None:
        return []
    words = verb_words()
    cells = (str(row.cells[place]) for row in islice(table.rows(), LOOKED_AT) if row.cells)
    return list(dict.fromkeys(words[word] for cell in cells if (word := fold(cell)) in words))


def choose_columns(*, actor: Membership, now: datetime, upload: Import, chosen: ColumnMap) -> Import:
    """Keep what the columns of a file mean. Raises ConflictError once it is imported, or about to be."""
    require_writer(actor)
    require_same_workshop(actor, upload)
    with transaction.atomic(), scope(workshop=actor.workshop):
        found = Import.objects.select_for_update(of=("self",)).select_related("file", "job").get(pk=upload.pk)
        if found.imported_at is not None or found.waits:
            raise ConflictError("This file is imported, or about to be. Look at its page.")
        found.mapping, found.errors, found.wrong = as_json(chosen), [], 0
        found.changed_at, found.changed_by = now, actor
        found.save(update_fields=["mapping", "errors", "wrong", "changed_at", "changed_by"])
        return found
