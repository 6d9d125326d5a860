"""What stands where: labels of vessels, the emergency sheet, the list of chemicals."""

from collections.abc import Iterable, Sequence
from functools import partial
from itertools import groupby
from typing import Any
from uuid import UUID, uuid4

from django.contrib import messages
from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse, HttpResponseBase
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.ledger.selectors import get_recomputed_to, get_vessel_for
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_owner, require_writer
from compliance.documents.emergency_words import follow_the_fire_brigade, together
from compliance.documents.models import Paper, PaperKind
from compliance.documents.register_words import ask_about_list, columns_after, list_column, list_is_no_verdict
from compliance.documents.selectors import list_papers_for
from compliance.documents.twin import describe_premises
from compliance.premises.chemicals import read_list
from compliance.premises.emergency import build_sheet
from compliance.premises.rules import list_rules
from compliance.premises.selectors import find_chosen_rule, find_vessels_by_code, read_next_label, require_chosen_rule
from compliance.premises.services import (
    choose_rule,
    issue_chemical_list,
    issue_decanted_label,
    issue_emergency_sheet,
    issue_labels,
)
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.premises import DecantForm, LabelsForm, PaperForm, RuleForm
from compliance.web.views.acts import address, fill_in, sent

LAST = 5
"""How many issued papers a page lists."""
PER_PAGE = 200
THING_COLUMNS = (
    Column("place", lambda row: row[0]["name"] or ""),
    Column("bund", lambda row: row[0]["bund"]),
    Column("exhaust duct", lambda row: row[0]["exhaust_duct"]),
    Column("vessel", lambda row: row[1]["name"]),
    Column("code", lambda row: row[1]["code"]),
    Column("kind", lambda row: row[1]["kind"]),
    Column("contents", lambda row: row[1]["contents"] or ""),
    Column("amount", lambda row: row[1]["amount"] or "unknown"),
    Column("standard uncertainty", lambda row: row[1]["doubt"] or ""),
    Column("signal word", lambda row: row[1]["hazards"]["signal_word"]),
    Column("pictograms", lambda row: " ".join(row[1]["hazards"]["pictograms"])),
    Column("hazard statements", lambda row: "; ".join(row[1]["hazards"]["statements"])),
    Column("hazards not entered for", lambda row: "; ".join(row[1]["not_entered"])),
    Column("un numbers", lambda row: " ".join(row[1]["un_numbers"])),
    Column("must never meet", lambda row: "; ".join(other["what"] for other in row[1]["must_not_meet"])),
)


def _papers(member: Membership, kind: PaperKind) -> list[Paper]:
    return list(list_papers_for(member).filter(kind=kind)[:LAST])


@page("GET", "POST", need=require_writer)
def labels(request: HttpRequest, member: Membership) -> HttpResponse:
    """Issue labels of vessels by their codes, several at once."""

    def act(form: LabelsForm) -> str:
        paper = issue_labels(
            actor=member,
            now=timezone.now(),
            key=form.cleaned_data["key"],
            vessels=find_vessels_by_code(member, form.list_codes()),
            stock=form.cleaned_data["stock"],
            start=form.cleaned_data["start"],
            copies=form.cleaned_data["copies"],
        )
        return address("paper", member, paper.uuid)

    codes = " ".join(request.GET.getlist("code"))
    form = LabelsForm(sent(request), initial={"key": uuid4(), "codes": codes, **_next(member)})
    words = {"heading": _("Labels of containers and tanks"), "button": _("Issue the labels"), "intro": _says()}
    return fill_in(request, member, form, act, here="register", back=address("register", member), **words)


def _next(member: Membership) -> dict[str, Any]:
    """Return where the sheet that was printed last goes on."""
    stock, start = read_next_label(member)
    return {"stock": stock, "start": start}


def _says() -> str:
    return _("They say what the register and the books say at this moment. What does not fit is shortened or refused.")


@page("GET", "POST", need=require_writer)
def decant(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Issue the label of a small container that was filled from a vessel."""
    found = get_vessel_for(member, uuid)

    def act(form: DecantForm) -> str:
        paper = issue_decanted_label(actor=member, now=timezone.now(), vessel=found, **form.cleaned_data)
        return address("paper", member, paper.uuid)

    form = DecantForm(sent(request), initial={"key": uuid4(), **_next(member)})
    words = {
        "heading": _("Decanted from %(vessel)s") % {"vessel": found},
        "button": _("Issue the label"),
        "intro": _("It bears today's date, your name and the hazards as entered; a dilution may differ."),
    }
    return fill_in(request, member, form, act, here="register", back=address("vessel", member, found.uuid), **words)


@page("GET", "POST")
def emergency(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """Show what the emergency sheet would say now; a POST issues it."""
    if request.method == "POST":
        require_writer(member)

    def act(form: PaperForm) -> str:
        paper = issue_emergency_sheet(actor=member, now=timezone.now(), **form.cleaned_data)
        return address("paper", member, paper.uuid)

    workshop = member.workshop
    said = build_sheet(member)
    rows = [(place, thing) for place in said["places"] for thing in place["things"]]
    file = wanted_file(request, things=(THING_COLUMNS, lambda: rows))
    listed = Paginator(rows, PER_PAGE).get_page(request.GET.get("page"))
    whole = {"workshop": {"name": workshop.name, "telephone": workshop.telephone}, **said}
    return file or fill_in(
        request,
        member,
        PaperForm(sent(request), initial={"key": uuid4()}),
        act,
        template="web/emergency.html",
        here="register",
        premises=describe_premises({**whole, "places": _regroup(listed)}),
        together=together(whole),  # type: ignore[arg-type]
        listed=listed,
        follow=follow_the_fire_brigade(),
        recomputing=get_recomputed_to(workshop),
        papers=_papers(member, PaperKind.EMERGENCY),
    )


def _regroup(rows: Iterable[tuple[dict[str, Any], dict[str, Any]]]) -> list[dict[str, Any]]:
    """Return the places of some rows, each with its things among them."""
    grouped = groupby(rows, key=lambda row: id(row[0]))
    return [{**pairs[0][0], "things": [thing for _, thing in pairs]} for pairs in (list(some) for _, some in grouped)]


@page("GET", "POST")
def chemicals(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """Show the list of chemicals with the columns of the chosen rule; a POST issues it."""
    if request.method == "POST":
        require_writer(member)
        require_chosen_rule(member)

    def act(form: PaperForm) -> str:
        paper = issue_chemical_list(actor=member, now=timezone.now(), **form.cleaned_data)
        return address("paper", member, paper.uuid)

    found = find_chosen_rule(member)
    if found is None:
        return show(request, member, "web/chemicals.html", here="register", rules=list_rules())
    rule, chosen = found
    listed = read_list(member, timezone.now())
    headings = {column: list_column(column) for column in rule.columns}  # type: ignore[arg-type]
    file = wanted_file(request, chemicals=(_columns(rule.columns), lambda: [row.cells for row in listed.rows]))
    rows = Paginator(listed.rows, PER_PAGE).get_page(request.GET.get("page"))
    return file or fill_in(
        request,
        member,
        PaperForm(sent(request), initial={"key": uuid4()}),
        act,
        template="web/chemicals.html",
        here="register",
        rule=rule,
        chosen=chosen,
        after=columns_after({**vars(rule)}),  # type: ignore[typeddict-item]
        no_verdict=list_is_no_verdict(),
        decide=ask_about_list(),
        headings=list(headings.values()),
        listed=rows,
        rows=[[(heading, row.cells[column]) for column, heading in headings.items()] for row in rows],
        left_out=listed.left_out,
        papers=_papers(member, PaperKind.REGISTER),
    )


def _columns(columns: Sequence[str]) -> list[Column]:
    return [Column(column, partial(_cell, column)) for column in columns]


def _cell(column: str, cells: dict[str, list[str]]) -> str:
    return "; ".join(cells[column])


@page("GET", "POST", need=require_owner)
def rule(request: HttpRequest, member: Membership) -> HttpResponse:
    """Choose the rule whose columns the list of chemicals has."""
    today = timezone.localdate(timezone=member.workshop.zone)

    def act(form: RuleForm) -> str:
        choose_rule(actor=member, now=timezone.now(), **form.cleaned_data)
        messages.success(request, _("The list has the columns of this rule from now on."))
        return address("chemicals", member)

    found = find_chosen_rule(member)
    start = {} if found is None else {"rule": found[0].code, "citation": found[1].citation}
    return fill_in(
        request,
        member,
        RuleForm(today, sent(request), initial=start),
        act,
        template="web/list-rule.html",
        here="register",
        rules=list_rules(),
        back=address("chemicals", member),
    )
