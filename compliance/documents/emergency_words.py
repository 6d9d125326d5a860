"""The sentences of the emergency sheet."""

from collections.abc import Sequence

from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from compliance.documents.shapes import (
    EmergencyData,
    EmergencyPlaceData,
    EmergencyThingData,
    HazardTotalData,
    SharedData,
)
from compliance.documents.words import known, must_never_meet


def follow_the_fire_brigade() -> str:
    """Who decides in an emergency; stands on every page of the sheet."""
    return _("Follow local rules and the fire brigade's instructions. What is here is what was recorded.")


def unknown_is_not_none() -> str:
    """How to read what is missing."""
    return _('"Unknown" means that nobody measured it: it may be much. Hazards are those that the workshop entered.')


def no_calls() -> str:
    """Said where no emergency number was entered."""
    return _("No emergency number has been entered: write them on this sheet before it is hung up.")


def amount(text: str | None, doubt: str | None) -> str:
    """An amount with its uncertainty in words."""
    if text is None:
        return _("amount unknown")
    if doubt is None:
        return _("%s, how sure is not stated") % text
    return _("%(amount)s, give or take %(doubt)s") % {"amount": text, "doubt": doubt}


def place(name: str | None) -> str:
    """Where something stands."""
    return name or _("Place not stated")


def bund_and_duct(bund: str, exhaust_duct: str) -> str:
    """What a place shares with others."""
    parts = (_("bund: %s") % bund if bund else "", _("exhaust duct: %s") % exhaust_duct if exhaust_duct else "")
    return ", ".join(part for part in parts if part)


def un_numbers(numbers: Sequence[str]) -> str:
    """UN numbers as typed."""
    return ", ".join(f"UN {number}" for number in numbers)


def reactions(thing: EmergencyThingData) -> list[str]:
    """What must never be met, and what water and acid do: one line for each that is known."""
    lines = [must_never_meet(thing["must_not_meet"])]
    if thing["with_water"]:
        lines.append(_("With water: %s") % "; ".join(thing["with_water"]))
    if thing["with_acid"]:
        lines.append(_("With acid: %s") % "; ".join(thing["with_acid"]))
    return lines


def together_in_places(places: Sequence[EmergencyPlaceData]) -> list[tuple[str, list[str]]]:
    """Each place in which things stand together that must never meet, with them."""
    return [(place(each["name"]), each["together"]) for each in places if each["together"]]


def together_shared(shared: Sequence[SharedData]) -> list[tuple[str, list[str]]]:
    """Each bund and exhaust duct with what must never meet there."""
    found = []
    for each in shared:
        if each["together"]:
            sort = _("bund") if each["sort"] == "bund" else _("exhaust duct")
            found.append((f"{sort} {each['name']} ({', '.join(each['places'])})", each["together"]))
    return found


def nothing_together() -> str:
    """Said where nothing was found that stands together and must never meet."""
    return _("Nothing found by what the workshop declared.")


def total_columns() -> list[str]:
    """The columns of the totals."""
    return [_("Hazard"), _("Liquids"), _("Solids"), _("Vessels"), _("Amount unknown in")]


def total_cells(total: HazardTotalData) -> list[str]:
    """One line of the totals; an unknown amount makes every sum a least one."""
    amounts = [
        _least(total["volume"], total["volume_doubt"], total["unknown"]),
        _least(total["mass"], total["mass_doubt"], total["unknown"]),
    ]
    return [total["hazard"], *amounts, str(total["vessels"]), str(total["unknown"] or _("none"))]


def _least(text: str | None, doubt: str | None, unknown: int) -> str:
    if text is None:
        return "–"
    known_part = amount(text, doubt)
    return _("at least %s") % known_part if unknown else known_part


def counted_whole() -> str:
    """How the totals were made."""
    return _(
        "A vessel counts whole for every hazard of anything poured in since it was last empty, however diluted. One "
        "with several hazards counts for each: the lines do not add up."
    )


def left_out(count: int) -> str:
    """How many vessels the sheet leaves out; nothing where it is none."""
    if not count:
        return ""
    text = ngettext(
        "%(count)d vessel that holds nothing by the books is left out.",
        "%(count)d vessels that hold nothing by the books are left out.",
        count,
    )
    return text % {"count": count}


def cautions(said: Sequence[str]) -> list[str]:
    """The cautions of the sheet."""
    return [*said, unknown_is_not_none()]


def calls(data: EmergencyData) -> list[tuple[str, str]]:
    """Whom to call with the number: what was entered, and the workshop itself last."""
    here = (_("Here: %s") % data["workshop"]["name"], known(data["workshop"]["telephone"]))
    return [*((row["label"], row["call"]) for row in data["calls"]), here]


def together(data: EmergencyData) -> list[tuple[str, list[str]]]:
    """Everything that stands together and must never meet, by where it stands."""
    return [*together_in_places(data["places"]), *together_shared(data["shared"])]
