"""Labels of vessels, the emergency sheet, the numbers to call, the list of chemicals."""

from typing import Any

from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.ledger.selectors import get_vessel_for
from chemicals.workshop.selectors import list_emergency_numbers_for
from chemicals.workshop.services import NumberInput, set_emergency_numbers
from compliance.api.keys import read_key
from compliance.api.serializers import premises as shapes
from compliance.api.serializers.waste import PaperShape
from compliance.api.views.base import Lookup, WorkshopView
from compliance.premises.chemicals import read_list
from compliance.premises.emergency import build_sheet
from compliance.premises.rules import list_rules
from compliance.premises.selectors import find_chosen_rule, require_chosen_rule
from compliance.premises.services import (
    choose_rule,
    issue_chemical_list,
    issue_decanted_label,
    issue_emergency_sheet,
    issue_labels,
)


class LabelsView(WorkshopView):
    """Issues labels of vessels as they are now, several on one sheet of stock."""

    shape, input_class, needs_key = PaperShape, shapes.LabelsInput, True

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Issue them; the same key returns the same paper."""
        said, key, lookup = self.read_body(request), read_key(request), Lookup(self.member)
        vessels = lookup.find_all("vessels", get_vessel_for, said.pop("vessels"))
        lookup.finish()
        return self.respond(issue_labels(actor=self.member, now=self.now, key=key, vessels=vessels, **said), 201)


class DecantedLabelView(WorkshopView):
    """Issues the label of a small container that was filled from a vessel today by the token's member."""

    shape, input_class, needs_key = PaperShape, shapes.DecantedInput, True

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Issue it; the same key returns the same paper."""
        said, key, vessel = self.read_body(request), read_key(request), get_vessel_for(self.member, kwargs["uuid"])
        return self.respond(issue_decanted_label(actor=self.member, now=self.now, key=key, vessel=vessel, **said), 201)


class EmergencySheetView(WorkshopView):
    """What is where, how much and how hazardous, whom to call: what the emergency sheet would say now."""

    shape = shapes.EmergencySheetShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return it; nothing is issued."""
        return self.respond({"content": build_sheet(self.member)})


class IssueEmergencySheetView(WorkshopView):
    """Issues the numbered emergency sheet."""

    shape, input_class, needs_key = PaperShape, shapes.IssueInput, True

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Issue it; the same key returns the same paper."""
        said, key = self.read_body(request), read_key(request)
        return self.respond(issue_emergency_sheet(actor=self.member, now=self.now, key=key, **said), 201)


class EmergencyNumbersView(WorkshopView):
    """The numbers that are called in an emergency; an owner replaces them by a POST."""

    shape, input_class = shapes.EmergencyNumbersShape, shapes.EmergencyNumbersInput
    statuses = (200,)

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return them."""
        return self.respond({"numbers": list_emergency_numbers_for(self.member)})

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Put these in the place of those so far."""
        numbers = [NumberInput(**row) for row in self.read_body(request)["numbers"]]
        set_emergency_numbers(actor=self.member, now=self.now, numbers=numbers)
        return self.respond({"numbers": list_emergency_numbers_for(self.member)})


class ListRulesView(WorkshopView):
    """The rules that ask for a list of chemicals, and the one that the workshop chose; an owner chooses by a POST."""

    shape, input_class = shapes.RulesShape, shapes.RuleInput
    statuses = (200,)

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return them."""
        return self._answer()

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Choose one."""
        choose_rule(actor=self.member, now=self.now, **self.read_body(request))
        return self._answer()

    def _answer(self) -> Response:
        found = find_chosen_rule(self.member)
        return self.respond({"rules": list_rules(), "chosen": None if found is None else found[1]})


class ChemicalsView(WorkshopView):
    """The list of chemicals with the columns of the chosen rule; 409 while none is chosen."""

    shape, read_conflicts = shapes.ChemicalsShape, True

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return it as it is now; nothing is issued."""
        rule, _chosen = require_chosen_rule(self.member)
        found = read_list(self.member, self.now)
        rows = [row.cells for row in found.rows]
        return self.respond({"columns": rule.columns, "rows": rows, "left_out": found.left_out})


class IssueChemicalsView(WorkshopView):
    """Issues the numbered list of chemicals."""

    shape, input_class, needs_key = PaperShape, shapes.IssueInput, True

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Issue it; the same key returns the same paper."""
        said, key = self.read_body(request), read_key(request)
        return self.respond(issue_chemical_list(actor=self.member, now=self.now, key=key, **said), 201)
