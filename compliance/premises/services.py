"""Labels, emergency sheet and list of chemicals are issued, the rule of that list is chosen, empties are put away."""

from collections.abc import Iterator, Sequence
from datetime import date, datetime
from typing import Any
from uuid import UUID

from django.db import transaction
from django_scopes import scope

from chemicals.journal.services import lock_chain
from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import get_recomputed_to
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Workshop
from chemicals.workshop.permissions import require_owner, require_same_workshop, require_writer
from chemicals.workshop.rows import check_row
from chemicals.workshop.texts import find_bad_lines, tidy
from compliance.documents.models import Paper, PaperKind
from compliance.documents.services import issue_paper
from compliance.documents.shapes import PaperSize
from compliance.documents.stock import ALL_STOCKS, Stock
from compliance.premises.chemicals import build_list
from compliance.premises.emergency import build_sheet
from compliance.premises.empties import Empty, list_empties_for
from compliance.premises.labels import build_decanted_label, build_label
from compliance.premises.models import ChosenRule
from compliance.premises.received import list_received
from compliance.premises.rules import find_rule
from compliance.premises.selectors import list_standing_for, require_chosen_rule

MOST_LABELS = 200
LONGEST_NOTE = 80
"""Characters."""


def issue_labels(
    *,
    actor: Membership,
    now: datetime,
    key: UUID,
    vessels: Sequence[Vessel],
    stock: str,
    start: int = 1,
    copies: int = 1,
) -> Paper:
    """Issue labels of vessels as they are now, each ``copies`` times, on sheets of a stock from ``start`` on."""
    require_writer(actor)
    require_same_workshop(actor, *vessels)
    sheet, errors = _find_stock(stock)
    errors += _check_count(len(vessels), copies)
    errors += [
        FieldError("vessels", f"{vessel.name} is a waste container. Issue its label on its own page.")
        for vessel in vessels
        if vessel.kind == VesselKind.WASTE
    ]
    if errors or sheet is None:
        raise InvalidInputError(errors)

    def build() -> dict[str, Any]:
        found = {each.vessel.uuid: each for each in list_standing_for(actor, [vessel.uuid for vessel in vessels])}
        received = list_received(actor, vessels)
        said = [build_label(found[vessel.uuid], received.get(str(vessel.uuid), ())) for vessel in vessels]
        labels = [label for label in said for _copy in range(copies)]
        return {"labels": labels, "stock": sheet.name, "start": start}

    return issue_paper(actor=actor, now=now, key=key, kind=PaperKind.LABELS, build=build, paper_size=sheet.page)


def issue_decanted_label(
    *,
    actor: Membership,
    now: datetime,
    key: UUID,
    vessel: Vessel,
    stock: str,
    note: str = "",
    start: int = 1,
    copies: int = 1,
) -> Paper:
    """Issue the label of a small container into which the actor decanted from a vessel today; ``note`` says what else
    is to be known, such as a dilution.
    """
    require_writer(actor)
    require_same_workshop(actor, vessel)
    sheet, errors = _find_stock(stock)
    errors += [*_check_count(1, copies), *find_bad_lines(note=note)]
    if len(note) > LONGEST_NOTE:
        errors.append(FieldError("note", f"This is too long. Write it in at most {LONGEST_NOTE} characters."))
    if errors or sheet is None:
        raise InvalidInputError(errors)
    day = now.astimezone(actor.workshop.zone).date()

    def build() -> dict[str, Any]:
        (standing,) = list_standing_for(actor, [vessel.uuid])
        label = build_decanted_label(standing, day=day, by=str(actor.user), note=tidy(note))
        return {"labels": [label] * copies, "stock": sheet.name, "start": start}

    return issue_paper(actor=actor, now=now, key=key, kind=PaperKind.LABELS, build=build, paper_size=sheet.page)


def _find_stock(name: str) -> tuple[Stock | None, list[FieldError]]:
    found = next((stock for stock in ALL_STOCKS if stock.name == name), None)
    names = ", ".join(stock.name for stock in ALL_STOCKS)
    return found, [] if found else [FieldError("stock", f"There is no such label stock. Choose one of: {names}.")]


def _check_count(vessels: int, copies: int) -> list[FieldError]:
    if vessels < 1:
        return [FieldError("vessels", "Nothing is named. Write the codes of what shall have a label.")]
    if copies < 1:
        return [FieldError("copies", "Write how many of each, at least 1.")]
    if vessels * copies > MOST_LABELS:
        return [FieldError("copies", f"These are more than {MOST_LABELS} labels. Print them in parts.")]
    return []


def issue_emergency_sheet(*, actor: Membership, now: datetime, key: UUID, paper_size: PaperSize = "A4") -> Paper:
    """Issue the sheet for the fire brigade and for emergencies as everything stands now."""
    require_writer(actor)
    return issue_paper(
        actor=actor,
        now=now,
        key=key,
        kind=PaperKind.EMERGENCY,
        build=lambda: build_sheet(actor),
        paper_size=paper_size,
    )


def issue_chemical_list(*, actor: Membership, now: datetime, key: UUID, paper_size: PaperSize = "A4") -> Paper:
    """Issue the list of chemicals with the columns of the chosen rule; ConflictError while none is chosen."""
    require_writer(actor)
    rule, chosen = require_chosen_rule(actor)
    return issue_paper(
        actor=actor,
        now=now,
        key=key,
        kind=PaperKind.REGISTER,
        build=lambda: build_list(actor, now, rule, chosen),
        paper_size=paper_size,
    )


def choose_rule(*, actor: Membership, now: datetime, rule: str, checked_on: date, citation: str = "") -> ChosenRule:
    """Choose the rule whose columns the list of chemicals has, in place of the one so far.

    ``checked_on`` is when somebody compared its line with the law that holds here. A line that was written down from
    memory needs the citation.
    """
    require_owner(actor)
    found = find_rule(rule)
    row = ChosenRule(
        workshop=actor.workshop, rule=rule, citation=citation, checked_on=checked_on, chosen_at=now, chosen_by=actor
    )
    errors = check_row(row, leave_out=["rule"])
    if found is None:
        errors.append(FieldError("rule", "There is no such rule here. Choose one from the list."))
    elif found.from_memory and not row.citation:
        errors.append(FieldError("citation", "This line was written from memory. Write where you read the rule."))
    if checked_on > now.astimezone(actor.workshop.zone).date():
        errors.append(FieldError("checked_on", "This day is still to come. Write when it was compared."))
    if errors:
        raise InvalidInputError(errors)
    with transaction.atomic(), scope(workshop=actor.workshop):
        Workshop.objects.select_for_update().get(pk=actor.workshop_id)
        ChosenRule.objects.all().delete()
        row.save()
        return row


def put_away(
    *, actor: Membership, now: datetime, vessels: Sequence[Vessel], note: str = "", confirmed: bool = False
) -> list[Vessel]:
    """Note that empty stock containers are gone: rinsed, reused, rubbish, returned, as the ``note`` says. All or none.

    ``confirmed``: somebody looked at what the hazards of the contents were, where none are entered. Raises
    InvalidInputError for what is not known to be empty, and for what stays a waste until it is handed over.
    """
    require_writer(actor)
    require_same_workshop(actor, *vessels)
    with transaction.atomic(), scope(workshop=actor.workshop):
        lock_chain(actor)  # nothing is poured in between the answer and the note
        if get_recomputed_to(actor.workshop) is not None:
            raise ConflictError("The books are being recomputed: nobody knows yet what is empty. Try again later.")
        errors = [
            FieldError("vessels", f"{vessel.name} is no stock container. Leave it out.")
            for vessel in vessels
            if vessel.kind != VesselKind.STOCK
        ]
        empties = list_empties_for(actor, [vessel.uuid for vessel in vessels])
        errors += [error for empty in empties for error in _check_empty(empty, confirmed=confirmed)]
        if errors:
            raise InvalidInputError(errors)
        return change_vessels(actor=actor, now=now, vessels=vessels, care=CareInput(gone=True, note=note))


def _check_empty(empty: Empty, *, confirmed: bool) -> Iterator[FieldError]:
    if empty.stays_waste:
        remedy = "Put it on a drop-off, or hand it over."
        yield FieldError("vessels", f"{empty.vessel.name} stays here. {empty.why} {remedy}")
    elif empty.must_ask and not confirmed:
        remedy = "Enter its hazards, or confirm that you read label and sheet and that it was not very toxic."
        yield FieldError("confirmed", f"{empty.vessel.name} stays here. {empty.why} {remedy}")


def bring_back(*, actor: Membership, now: datetime, vessels: Sequence[Vessel]) -> list[Vessel]:
    """Note that containers that were put away are here again. What was handed over comes back by cancelling that."""
    return change_vessels(actor=actor, now=now, vessels=vessels, care=CareInput(gone=False))
