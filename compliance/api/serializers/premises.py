"""Labels of vessels, the emergency sheet, the numbers to call, the list of chemicals and its rule."""

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.workshop.services import MOST_EMERGENCY_NUMBERS
from compliance.api.fields import Choice, Day, Identifier, Strict, Text, Whole, Words, rows
from compliance.api.serializers.base import Person, Shape, choices_of
from compliance.documents.stock import ALL_STOCKS, PAGES
from compliance.premises.rules import COLUMNS, list_rules
from compliance.premises.services import LONGEST_NOTE, MOST_LABELS

START_HELP = _("The first free label on the sheet, 1 being top left, counted along the rows; 1 if left out.")
MOST_ON_A_SHEET = max(stock.labels for stock in ALL_STOCKS)


class StockInput(Strict):
    """On which sheet of labels, from where on, how many of each."""

    stock = Choice(choices=[(stock.name, stock.name) for stock in ALL_STOCKS], help_text=_("The label stock."))
    start = Whole(required=False, min_value=1, max_value=MOST_ON_A_SHEET, help_text=START_HELP)
    copies = Whole(required=False, min_value=1, max_value=MOST_LABELS, help_text=_("Of each; 1 if left out."))


class LabelsInput(StockInput):
    """Labels of vessels as they are now."""

    vessels = Words(
        child=Identifier(help_text=_("A vessel; waste containers have labels of their own.")),
        max_length=MOST_LABELS,
        help_text=_("What shall have a label, in the order in which they lie on the sheet."),
    )


class DecantedInput(StockInput):
    """The label of a small container that was filled from a vessel today."""

    note = Text(
        required=False,
        allow_blank=True,
        max_length=LONGEST_NOTE,
        help_text=_("What else is to be known, such as a dilution."),
    )


class IssueInput(Strict):
    """On which paper."""

    paper_size = Choice(
        choices=[(size, size) for size in PAGES], required=False, help_text=_("A4 or Letter; A4 if left out.")
    )


class EmergencySheetShape(Shape):
    """What the emergency sheet would say now."""

    content = serializers.DictField(
        help_text=_("Whom to call; totals by hazard; bunds and ducts; places with what stands there. null is unknown.")
    )


class EmergencyNumberShape(Shape):
    """Whom to call in an emergency."""

    label = serializers.CharField(  # type: ignore[assignment]  # a field, not the serializer's own attribute
        help_text=_("Who answers.")
    )
    number = serializers.CharField(help_text=_("The number, as it is dialled from the workshop."))
    entered_at = serializers.DateTimeField(help_text=_("When it was entered."))
    entered_by = Person(help_text=_("Who entered it."))


class EmergencyNumbersShape(Shape):
    """All of them, in the order in which the sheet prints them."""

    numbers = EmergencyNumberShape(many=True, help_text=_("The most important first."))


class EmergencyNumberInput(Strict):
    """Whom to call."""

    label = Text(  # type: ignore[assignment]  # a field, not the serializer's own attribute
        max_length=80, help_text=_("Who answers.")
    )
    number = Text(max_length=60, help_text=_("The number, as it is dialled from the workshop."))


class EmergencyNumbersInput(Strict):
    """All of them: they take the place of those so far."""

    numbers = rows(EmergencyNumberInput, most=MOST_EMERGENCY_NUMBERS, help_text=_("In the order of the sheet."))


class RuleShape(Shape):
    """A rule that asks for a list of chemicals, with the columns that it names."""

    code = serializers.CharField(help_text=_("Its short name here."))
    area = serializers.CharField(help_text=_("Where it holds: the country's two letters."))
    provision = serializers.CharField(help_text=_("The provision."))
    asks_for = serializers.CharField(help_text=_("What it asks for, in short."))
    columns = serializers.ListField(
        child=choices_of(COLUMNS, _("One column.")), help_text=_("The columns of the list that say it.")
    )
    source = serializers.CharField(  # type: ignore[assignment]  # a field, not the serializer's own attribute
        help_text=_("Where the line was read, or who remembers it.")
    )
    edition = serializers.CharField(help_text=_("Which edition."))
    read = choices_of(("read", "memory"), _("Whether it was read there or written from memory."))


class ChosenShape(Shape):
    """The rule that the workshop chose."""

    rule = serializers.CharField(help_text=_("Its short name."))
    citation = serializers.CharField(help_text=_("Where the workshop read it; printed on the list."))
    checked_on = serializers.DateField(help_text=_("When somebody there compared it with the law."))
    chosen_at = serializers.DateTimeField(help_text=_("When it was chosen."))
    chosen_by = Person(help_text=_("Who chose it."))


class RulesShape(Shape):
    """The rules that there are, and the one that the workshop chose."""

    rules = RuleShape(many=True, help_text=_("Every line; none applies by itself."))
    chosen = ChosenShape(allow_null=True, help_text=_("The chosen one; null while there is none."))


class RuleInput(Strict):
    """The choice of a rule: it takes the place of the one so far."""

    rule = Choice(choices=[(rule.code, str(rule)) for rule in list_rules()], help_text=_("Its short name."))
    checked_on = Day(help_text=_("When somebody here compared the line with the law that holds here."))
    citation = Text(
        required=False,
        allow_blank=True,
        max_length=200,
        help_text=_("Where it was read; needed for a line that was written from memory."),
    )


def _cell(text: object) -> serializers.ListField:
    return serializers.ListField(child=serializers.CharField(help_text=_("One line.")), help_text=text)  # type: ignore[arg-type]


class ChemicalShape(Shape):
    """One product of the list, in the words of the paper: each column holds its lines."""

    name = _cell(_("The product, and its supplier."))
    classification = _cell(_("Signal word, classes, codes of the statements, as entered."))
    quantities = _cell(_("The ranges of what is here and of what was used in twelve months."))
    areas = _cell(_("The places where it stands, or a bath or waste that it was poured into."))
    sheet = _cell(_("Which safety data sheet is kept."))


class ChemicalsShape(Shape):
    """The list of chemicals as it is now."""

    columns = serializers.ListField(
        child=choices_of(COLUMNS, _("One column.")), help_text=_("The columns that the chosen rule names.")
    )
    rows = ChemicalShape(many=True, help_text=_("A row for each product that is here or was used in twelve months."))
    left_out = serializers.IntegerField(help_text=_("How many products of the register are left off."))
