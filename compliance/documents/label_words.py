"""The sentences of labels of vessels."""

from typing import Literal

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from compliance.documents.shapes import FactData, LabelSort, VesselLabelData
from compliance.documents.words import known

PrintedSet = Literal["all", "short", "codes", "least"]
_SORTS = {
    "tank": gettext_lazy("Tank"),
    "bottle": gettext_lazy("Container"),
    "secondary container": gettext_lazy("Decanted, for use at once"),
}
_FACTS = {
    "note": gettext_lazy("note"),
    "revision": gettext_lazy("revision"),
    "lot": gettext_lazy("lot"),
    "received": gettext_lazy("received"),
    "opened": gettext_lazy("opened"),
    "keeps until": gettext_lazy("keeps until"),
    "decanted": gettext_lazy("decanted"),
    "decanted by": gettext_lazy("decanted by"),
    "mark": gettext_lazy("volume at the mark"),
    "place": gettext_lazy("place"),
    "supplier": gettext_lazy("supplier"),
    "supplier's telephone": gettext_lazy("supplier's telephone"),
}
_PRINTED = {
    "all": gettext_lazy("The printed label says all of this."),
    "short": gettext_lazy("Shortened for this label: cautions and further precautions stand behind the code."),
    "codes": gettext_lazy("Shortened for this label: the statements in words stand behind the code."),
    "least": gettext_lazy("Shortened for this label: hazard statements and precautions stand behind the code."),
}


def vessel_label_title(sort: LabelSort) -> str:
    """What is labelled."""
    return str(_SORTS[sort])


def fact_name(line: FactData) -> str:
    """What a fact is about."""
    return str(_FACTS[line["what"]])


def fact(line: FactData) -> str:
    """One fact with its name."""
    return f"{fact_name(line)}: {known(line['value'])}"


def more_behind_the_code() -> str:
    """Said on a label that leaves something out."""
    return _("more behind the code")


def shortened(printed: PrintedSet) -> str:
    """How much of the paper's facts a small label says."""
    return str(_PRINTED[printed])


def cautions(label: VesselLabelData) -> list[str]:
    """The cautions of a label: whose hazards stand on it, what to take care of, and who decides."""
    decide = _("Local rules and licensed practice decide how this is kept and handled.")
    return [merged(label["sort"]), *label["cautions"], decide]


def merged(sort: LabelSort) -> str:
    """Whose hazards stand on the label."""
    if sort == "tank":
        return _("Hazards of everything poured in since it was last empty, as entered; the mixture may differ.")
    if sort == "bottle":
        return _("Hazards as entered for the product.")
    return _("Hazards as entered for what this was taken from; a dilution may differ.")
