"""Imports: upload a file, say what its columns mean, look at what was understood, import all of it."""

import hashlib
import json
from itertools import islice
from typing import Any
from uuid import UUID

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseBase, HttpResponseRedirect
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.process.importing.columns import ColumnMap, as_json
from chemicals.process.importing.files import add_import, choose_columns, find_map, read_table
from chemicals.process.importing.reading import RowError
from chemicals.process.importing.register.plan import RegisterUnderstood
from chemicals.process.importing.table import CSV_TYPE, Table
from chemicals.process.importing.understanding import Understood
from chemicals.process.models import Import, Subject
from chemicals.process.selectors import get_import_for, list_imports_for
from chemicals.workshop.errors import ConflictError, InvalidInputError
from chemicals.workshop.models import Membership, Role
from chemicals.workshop.permissions import require_writer
from compliance.clearance.importing import AT_ONCE, RefusedImportError, preview_import, record_import
from compliance.ops.demo import SCENARIO
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.imports import EXAMPLES, FORMS, UploadForm
from compliance.web.imported import RowTeller, Told, tell_register
from compliance.web.views.acts import address, fill_in, sent

EXAMPLE = SCENARIO.parent / "imports" / "register-invented.csv"
SHOWN_ROWS, SHOWN_ERRORS = 10, 200
IMPORT = "import"
COLUMNS = (
    Column("row", lambda error: error.row or None),
    Column("column", lambda error: error.column),
    Column("message", lambda error: error.message),
)
IMPORT_COLUMNS = (
    Column("file", lambda row: row.file.name),
    Column("sha256", lambda row: row.file.sha256),
    Column("changed", lambda row: row.changed_at),
    Column("by", lambda row: str(row.changed_by.user)),
    Column("imported", lambda row: row.imported_at),
    Column("first entry", lambda row: row.first),
    Column("last entry", lambda row: row.last),
    Column("subject", lambda row: row.subject),
)


@page("GET", "POST")
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List the files of past records and of the register, and take another one."""

    def act(form: UploadForm) -> str:
        file, subject = form.cleaned_data["file"], Subject(form.cleaned_data["subject"] or Subject.ENTRIES)
        found = add_import(actor=member, now=timezone.now(), name=file.name, data=file.read(), subject=subject)
        return address("import", member, found.uuid)

    if request.method == "POST":
        require_writer(member)
    rows = list_imports_for(member)
    file = wanted_file(request, imports=(IMPORT_COLUMNS, lambda: rows))
    about = request.GET.get("subject", Subject.ENTRIES)
    form = UploadForm(sent(request), request.FILES or None, initial={"subject": about})
    return file or fill_in(request, member, form, act, template="web/imports.html", here=_here(about), rows=rows)


def _here(subject: str) -> str:
    """Return the part of the site to which a file belongs."""
    return "register" if subject == Subject.REGISTER else "entries"


@page()
def example(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """Send a file of the register with every column, all of it invented."""
    name = {"Content-Disposition": f'attachment; filename="{EXAMPLE.name}"'}
    return HttpResponse(EXAMPLE.read_bytes(), content_type=CSV_TYPE, headers=name)


@page("GET", "POST")
def upload(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponseBase:
    """Show a file as it is understood; keep what its columns mean, or import it."""
    found = get_import_for(member, uuid)
    if request.method == "POST":
        return _receive(request, member, found)
    if found.imported_at is not None or found.waits:
        return _show(request, member, found)
    table = read_table(found)
    return _look(request, member, found, table, find_map(found, table))


def _receive(request: HttpRequest, member: Membership, found: Import) -> HttpResponseBase:
    """Do what the form says: import what was seen, or show how it is understood now."""
    require_writer(member)
    table, now = read_table(found), timezone.now()
    form = FORMS[found.subject](table.headings, ColumnMap({}), _first(table), request.POST)
    if not form.is_valid():
        return _show(request, member, found, status=400, form=form)
    chosen = form.chosen
    if request.POST.get("step") != IMPORT or form.cleaned_data["seen"] != _digest(chosen):
        if found.imported_at is None and not found.waits:
            choose_columns(actor=member, now=now, upload=found, chosen=chosen)
        return HttpResponseRedirect(address("import", member, found.uuid))
    try:
        done = record_import(actor=member, now=now, upload=found, chosen=chosen)
    except RefusedImportError:
        return _look(request, member, found, table, chosen, status=400)
    except (InvalidInputError, ConflictError) as error:
        form.add_error(None, str(error))
        return _show(request, member, found, status=409, form=form)
    messages.success(request, _("A job imports it.") if done.imported_at is None else _("Imported."))
    return HttpResponseRedirect(address("import", member, found.uuid))


def _look(
    request: HttpRequest, member: Membership, found: Import, table: Table, chosen: ColumnMap, *, status: int = 200
) -> HttpResponseBase:
    """Show what the columns mean, what the first rows say, and everything that is wrong."""
    understood = preview_import(member, timezone.now(), found, chosen)
    errors = understood.errors or tuple(RowError(*row) for row in found.errors)
    file = wanted_file(request, errors=(COLUMNS, lambda: errors))
    if file is not None:
        return file
    return _show(
        request,
        member,
        found,
        status=status,
        form=FORMS[found.subject](table.headings, chosen, _first(table), initial={"seen": _digest(chosen)}),
        table=table,
        understood=understood,
        rows=_tell(member, understood),
        remarks=getattr(understood, "remarks", ())[:SHOWN_ERRORS],
        counts=_count(understood),
        errors=errors[:SHOWN_ERRORS],
        wrong=understood.wrong or found.wrong,
        more=len(errors) - SHOWN_ERRORS,
        at_once=AT_ONCE,
    )


def _tell(member: Membership, understood: Understood | RegisterUnderstood) -> list[Told]:
    """Return the first rows of the file that are right, in words."""
    if isinstance(understood, RegisterUnderstood):
        return tell_register(understood.made, SHOWN_ROWS)
    if not understood.made:
        return []
    teller = RowTeller(member)
    return [teller.tell(made) for made in sorted(understood.made, key=lambda made: made.said.row)[:SHOWN_ROWS]]


def _count(understood: Understood | RegisterUnderstood) -> dict[str, int]:
    """Return how many things of each kind a file of the register makes; of entries it is their number that counts."""
    return understood.made.counts if isinstance(understood, RegisterUnderstood) else {}


def _first(table: Table) -> list[Any]:
    return list(islice(table.rows(), EXAMPLES))


def _digest(chosen: ColumnMap) -> str:
    return hashlib.sha256(json.dumps(as_json(chosen), sort_keys=True).encode()).hexdigest()


def _show(request: HttpRequest, member: Membership, found: Import, status: int = 200, **context: Any) -> HttpResponse:
    heading = _("Import of %(name)s") % {"name": found.file.name}
    may = member.role != Role.OBSERVER
    return show(
        request,
        member,
        "web/import.html",
        here=_here(found.subject),
        status=status,
        heading=heading,
        upload=found,
        may=may,
        **context,
    )
