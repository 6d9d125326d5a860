"""The sentences of the list of chemicals."""

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy, ngettext

from compliance.documents.shapes import ListColumn, ListRuleData, RegisterData

_COLUMNS = {
    "name": gettext_lazy("Name, as on the safety data sheet"),
    "classification": gettext_lazy("Classification and hazards, as entered"),
    "quantities": gettext_lazy("Quantity ranges"),
    "areas": gettext_lazy("Work areas"),
    "sheet": gettext_lazy("Safety data sheet"),
}


def list_column(column: ListColumn) -> str:
    """Heading of a column."""
    return str(_COLUMNS[column])


def columns_after(rule: ListRuleData) -> str:
    """After which rule the workshop chose the columns."""
    return _("Columns after %(provision)s: %(asks_for)s.") % rule


def list_is_no_verdict() -> str:
    """What the list is not."""
    return _("It shows what was recorded. Whether that is what a rule asks for, it does not say.")


def ask_about_list() -> str:
    """Who decides about the list."""
    return _(
        "Local rules and licensed practice decide what such a list must hold, who may see it and how long it is kept."
    )


def left_off(count: int) -> str:
    """How many products the list leaves off."""
    text = ngettext(
        "%(count)d product of the register, of which nothing is here or was used in twelve months, is left off.",
        "%(count)d products of the register, of which nothing is here or was used in twelve months, are left off.",
        count,
    )
    return text % {"count": count}


def chosen(rule: ListRuleData) -> str:
    """Where the line of the rule comes from, and who chose it."""
    text = _("Rule line from: %(source)s (%(edition)s). Chosen by %(chosen_by)s, checked on %(checked_on)s.") % rule
    return f"{text} {_('Cited as: %s') % rule['citation']}" if rule["citation"] else text


def notes(data: RegisterData) -> list[str]:
    """What stands below the list."""
    off = [left_off(data["left_out"])] if data["left_out"] else []
    return [*off, *data["cautions"], ask_about_list(), chosen(data["rule"])]
