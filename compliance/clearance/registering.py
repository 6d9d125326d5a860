"""From the plan of a file of the register to its rows and to the facts that say what is in the containers."""

from collections.abc import Iterator
from datetime import datetime

from django.db import IntegrityError, transaction

from chemicals.books.clearance import Clearance, not_asked
from chemicals.books.events import Recipe
from chemicals.books.occurred import Occurred
from chemicals.journal.services import Fact
from chemicals.ledger.models import Vessel
from chemicals.ledger.services import create_vessels
from chemicals.process.build import build
from chemicals.process.build.stock import build_found
from chemicals.process.draft import Known
from chemicals.process.importing.register.plan import Container, Plan
from chemicals.process.inputs import ReceiptInput
from chemicals.register.selectors import build_recipe
from chemicals.register.together import write_catalogue
from chemicals.workshop.errors import ConflictError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.services import create_place


def imported_from(row: int, sha256: str) -> Clearance:
    """Return the answer of an entry that nobody was asked about: which row of which file says it."""
    return not_asked(f"imported from row {row} of the file {sha256}: nobody was asked")


def write_plan(*, actor: Membership, now: datetime, plan: Plan, sha256: str) -> list[Fact]:
    """Write places, substances, products, revisions and containers; return what is in the containers, as facts.

    Call it inside the transaction of the whole import. Raises ConflictError if a name was taken meanwhile.
    """
    try:
        with transaction.atomic():
            places = {name: create_place(actor=actor, name=name) for name in plan.places}
            checked = [planned.checked for planned in plan.products if planned.checked is not None]
            write_catalogue(actor=actor, now=now, substances=plan.substances, revisions=checked)
            for each in plan.containers:
                each.vessel.place = places.get(each.new_place, each.vessel.place)
            create_vessels(actor=actor, now=now, vessels=[each.vessel for each in plan.containers])
    except (IntegrityError, InvalidInputError) as error:
        raise ConflictError("Somebody wrote to the register meanwhile. Look at the file again.") from error
    return list(_list_facts(actor, now, plan, sha256))


def _list_facts(actor: Membership, now: datetime, plan: Plan, sha256: str) -> Iterator[Fact]:
    """Yield a receipt of what was received on a day, an opening of what is there; nothing of an empty container."""
    known = Known()
    for each in plan.containers:
        if each.amount is None:
            continue
        recipe = known.once((Recipe, each.product.revision.product.pk), lambda each=each: _recipe(each))  # type: ignore[misc]  # asked at once
        clearance = imported_from(each.row, sha256)
        if each.received_on is None:
            event, when = build_found(each.vessel, each.amount, recipe), Occurred(now)
            yield Fact(each.key, event, when, clearance, (sha256,))
        else:
            known.once((Vessel, each.vessel.uuid), lambda each=each: each.vessel)  # type: ignore[misc]  # asked at once
            data = ReceiptInput(vessel=each.vessel.uuid, amount=each.amount, lot=each.lot)
            when = Occurred.on_day(each.received_on, actor.workshop.zone)
            yield Fact(each.key, build(actor, now, data, when, known).event, when, clearance, (sha256,))


def _recipe(each: Container) -> Recipe:
    return build_recipe(each.product.revision, each.product.lines)
