"""By what products and containers are sifted: one table, of which the pages make forms and the API parameters."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, fields
from typing import Any
from uuid import UUID

from django.utils.functional import Promise, lazy
from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _

from chemicals.register.models import Form
from chemicals.science.ghs import PICTOGRAMS, SIGNAL_WORDS, list_classes
from chemicals.science.reactivity import REACTS_AS
from compliance.documents.words import symbol_name
from compliance.premises.expiry import SOON

LONGEST_TEXT = 200
"""Characters that may be looked for at once."""
NONE = "none"
_shows: Callable[[str], Any] = lazy(symbol_name, str)  # type: ignore[assignment]  # the nine codes alone are asked


@dataclass(frozen=True)
class Filter:
    """One thing to choose by: its label, what it means, and what may be chosen, each with its label."""

    label: str | Promise
    meaning: str | Promise
    choices: Mapping[str, str | Promise]


FILTERS: Mapping[str, Filter] = {
    "state": Filter(
        _("In stock"),
        _("Whether something is in a container, or may be; left out: all that is not gone."),
        {
            "stock": _("something is in it, or may be"),
            "empty": _("known to be empty"),
            "gone": _("gone"),
            "all": _("all, what is gone too"),
        },
    ),
    "keeps": Filter(
        _("Keeps until"),
        _("Until when a container keeps."),
        {"passed": _("the day has passed"), "soon": format_lazy(_("within {days} days"), days=SOON)},
    ),
    "opened": Filter(
        _("Opened"), _("Whether a container was noted as opened."), {"yes": _("opened"), "no": _("not noted as opened")}
    ),
    "form": Filter(_("Physical form"), _("The physical form of the product as bought."), dict(Form.choices)),
    "signal_word": Filter(
        _("Signal word"),
        _("The signal word entered of the product; none where none is."),
        {**{word: word for word in reversed(SIGNAL_WORDS) if word}, NONE: _("no signal word")},
    ),
    "pictogram": Filter(
        _("Pictogram"),
        _("A pictogram entered of the product."),
        {code: format_lazy("{} {}", code, _shows(code)) for code in PICTOGRAMS},
    ),
    "hazard_class": Filter(
        _("Hazard class"),
        _("A hazard class entered of the product, by the short name that sheets print."),
        {each.kind: f"{each.kind}: {each.hazard_class}" for each in list_classes()},
    ),
    "reacts_as": Filter(_("Reacts as"), _("What the product was declared to react as."), REACTS_AS),
    "sheet": Filter(
        _("Safety data sheet"),
        _("What is to be said of the product's safety data sheet."),
        {
            NONE: _("no sheet"),
            "undated": _("without a date"),
            "old": _("older than the workshop likes"),
            "fine": _("not old"),
        },
    ),
    "hazards": Filter(
        _("Hazards"),
        _("Whether anything was entered of the product's hazards."),
        {"missing": _("nothing is entered"), "entered": _("something is entered")},
    ),
}
"""Of the current revision of the product, save the first three, which speak of containers."""


@dataclass(frozen=True)
class Wanted:
    """What is looked for: what fits everything that is said here; what is left empty does not matter.

    ``text`` as typed. ``place`` is where a container stands, ``supplier`` the whole name. The rest: see FILTERS.
    """

    text: str = ""
    place: UUID | None = None
    supplier: str = ""
    state: str = ""
    keeps: str = ""
    opened: str = ""
    form: str = ""
    signal_word: str = ""
    pictogram: str = ""
    hazard_class: str = ""
    reacts_as: str = ""
    sheet: str = ""
    hazards: str = ""

    @classmethod
    def of(cls, said: Mapping[str, Any]) -> "Wanted":
        """Return what was chosen, by the names under which an address says it; the text is called ``q`` there."""
        named = {**said, "text": said.get("q")}
        return cls(**{each.name: named[each.name] for each in fields(cls) if named.get(each.name)})

    @property
    def asks_for_containers(self) -> bool:
        """Whether only what stands in some container fits."""
        return bool(self.place or self.state or self.keeps or self.opened)
