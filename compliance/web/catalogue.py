"""What pages say of substances and products: what follows from a formula, hazards in words, the state of sheets."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from decimal import Decimal

from django.utils.functional import Promise
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.register.models import ExposureLimit, ProductRevision, Substance
from chemicals.register.selectors import get_makeup
from chemicals.register.sheets import Mark, mark_of
from chemicals.science.ghs import MESSAGES, find_class, standard_text
from chemicals.science.quantity import show
from chemicals.workshop.models import Workshop

SHEET_MARKS: Mapping[Mark, Promise] = {
    "none": gettext_lazy("no sheet"),
    "undated": gettext_lazy("sheet without a date"),
    "old": gettext_lazy("sheet older than %(years)s years"),
}


@dataclass(frozen=True)
class Described:
    """A substance with what follows from its formula, as text."""

    substance: Substance
    molar_mass: str
    metals: str

    @classmethod
    def of(cls, substance: Substance) -> "Described":
        """Return a substance with its molar mass, and each of its metals in %."""
        makeup = get_makeup(substance)
        mass = "" if makeup.molar_mass is None else f"{makeup.molar_mass.quantize(Decimal('0.01'))} g/mol"
        metals = (f"{metal} {show(round(part * 10**6), 'fraction')}" for metal, part in makeup.metals.items())
        return cls(substance, mass, ", ".join(metals))


@dataclass(frozen=True)
class Statement:
    """A statement as typed; where only its code was, the standard's words as well."""

    typed: str
    words: str


@dataclass(frozen=True)
class HazardLines:
    """The hazards of a revision as a page shows them."""

    classes: Sequence[tuple[str, str]]
    """Short name, and class with category in words."""
    statements: Sequence[Statement]
    contradictions: Sequence[str]

    @classmethod
    def of(cls, revision: ProductRevision) -> "HazardLines":
        """Return classes and statements with their words, and what does not go together as sentences."""
        return cls(
            [(kind, _class_words(kind)) for kind in revision.hazard_classes],
            [Statement(text, standard_text(text)) for text in revision.statements],
            [_(MESSAGES[each.code]) % each.params for each in revision.contradictions],
        )


def _class_words(kind: str) -> str:
    known = find_class(kind)
    return "" if known is None else f"{known.hazard_class}, {known.category}"


def sheet_mark(revision: ProductRevision, today: date, workshop: Workshop) -> str:
    """Return what is to be said of a revision's sheet, empty if nothing."""
    mark = mark_of(revision, today, workshop.sheet_years)
    return str(SHEET_MARKS[mark]) % {"years": workshop.sheet_years} if mark else ""


def limit_words(limit: ExposureLimit) -> str:
    """Return an exposure limit in one line: of what, how much, of which kind, where it stands."""
    of_what = "" if limit.substance is None else f"{limit.substance}: "
    return f"{of_what}{limit.value} ({limit.get_kind_display()}; {limit.source})"
