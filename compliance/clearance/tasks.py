"""Background tasks of clearance."""

from collections.abc import Mapping
from datetime import datetime
from functools import partial
from typing import Any

from django.db import transaction
from django_scopes import scope

from chemicals.jobs.registry import Effect
from chemicals.process.importing.columns import from_json
from chemicals.process.importing.files import read_table
from chemicals.process.importing.register.plan import Plan
from chemicals.process.importing.understanding import Made
from chemicals.process.models import Import, Subject
from chemicals.workshop.errors import ConflictError, InvalidInputError
from chemicals.workshop.models import Membership
from compliance.clearance.importing import read_file, refusals_of, refuse_import, write_import


def import_entries(payload: Mapping[str, Any], *, now: datetime) -> Effect | None:
    """Record all that a large file says, or keep what is wrong with it."""
    member = Membership.objects.select_related("workshop", "user").get(pk=payload["member"])
    with scope(workshop=member.workshop):
        upload = Import.objects.select_related("file", "workshop").get(pk=payload["import"])
        if upload.imported_at is not None:
            return None
        chosen, table = from_json(upload.mapping), read_table(upload)
        subject, sha256 = Subject(upload.subject), upload.file.sha256
        understood = read_file(member, now, table, chosen, subject=subject, sha256=sha256)
    if understood.wrong:
        return partial(refuse_import, upload, understood.errors, understood.wrong)
    return partial(_write, member, now, upload, understood.made)


def _write(member: Membership, now: datetime, upload: Import, made: tuple[Made, ...] | Plan) -> None:
    try:
        with transaction.atomic():
            write_import(actor=member, now=now, upload=upload, made=made)
    except (InvalidInputError, ConflictError) as error:  # a period was closed, or a key used, since the file was read
        found = refusals_of(error)
        refuse_import(upload, found, len(found))
