"""The sentences of the papers, and the few figures derived from frozen data: one place for PDF and HTML twin alike.

What only one kind of paper says stands in label_words, emergency_words and register_words.
"""

from collections.abc import Mapping, Sequence
from decimal import Decimal
from typing import Any, Literal

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy, ngettext

from compliance.documents.shapes import AvoidData, HazardData, ManifestContainerData, Pictogram, SignalWord

_SYMBOL_NAMES = {
    "GHS01": gettext_lazy("exploding bomb"),
    "GHS02": gettext_lazy("flame"),
    "GHS03": gettext_lazy("flame over circle"),
    "GHS04": gettext_lazy("gas cylinder"),
    "GHS05": gettext_lazy("corrosion"),
    "GHS06": gettext_lazy("skull and crossbones"),
    "GHS07": gettext_lazy("exclamation mark"),
    "GHS08": gettext_lazy("health hazard"),
    "GHS09": gettext_lazy("environment"),
}
_KINDS = {
    "waste-label": gettext_lazy("Label"),
    "manifest": gettext_lazy("Manifest"),
    "labels": gettext_lazy("Labels"),
    "emergency": gettext_lazy("Emergency sheet"),
    "register": gettext_lazy("List of chemicals"),
}
_SIGNAL_WORDS = {"Danger": gettext_lazy("Danger"), "Warning": gettext_lazy("Warning"), "": ""}


def symbol_name(code: Pictogram) -> str:
    """What a pictogram shows, by the standard's name."""
    return str(_SYMBOL_NAMES[code])


def signal_word(word: SignalWord) -> str:
    """The signal word in the reader's language, empty if there is none."""
    return str(_SIGNAL_WORDS[word])


def known(text: str | None) -> str:
    """The text, or "unknown": never an empty cell or a 0."""
    return text or _("unknown")


def has_hazards(hazards: HazardData) -> bool:
    """Whether anything at all was entered."""
    return bool(hazards["signal_word"] or hazards["pictograms"] or hazards["statements"])


def paper_title(kind: str, data: Mapping[str, Any]) -> str:
    """Kind and number of a paper."""
    return f"{_KINDS[kind]} {data['number']}"


def label_title(hazards: HazardData) -> str:
    """The headline of a waste label: without entered hazards it does not claim that there are none."""
    return _("Hazardous waste") if has_hazards(hazards) else _("Waste, hazards not entered")


def no_hazards() -> str:
    """Said where hazards are missing."""
    return _("No hazards have been entered. That does not mean there are none: ask before handling.")


def no_contents() -> str:
    """Said where contents are missing."""
    return _("Contents unknown: treat as if they could react with anything.")


def origin(container: ManifestContainerData) -> str:
    """Where a container's waste comes from; of a stock container what it is."""
    return container.get("note") or _("from: %s") % known(container["origin"])


def nothing_listed(container: ManifestContainerData) -> str:
    """Said of a container of which nothing is listed: of a stock container its note says what it is."""
    return _("Nothing by the books; what is left in it is as hazardous.") if "note" in container else no_contents()


def nothing_to_avoid() -> str:
    """Said where nothing was named that must not meet."""
    return _("nothing named: ask before adding or mixing anything")


def no_consignment_note() -> str:
    """What a manifest is not; stands on its head."""
    return _(
        "This manifest is the workshop's own record of the load. It is no legal consignment note: where the law asks "
        "for one, that note must go along as well."
    )


def ask_locally() -> str:
    """Who decides; the last caution of every paper."""
    return _("Local rules and licensed practice decide how this waste is stored, carried and treated.")


def uncertainty(text: str | None) -> str:
    """A standard uncertainty, or that none was stated."""
    return f"± {text}" if text else _("not stated")


def gross_kg(text: str | None) -> str:
    """Kilograms of one container."""
    return f"{text} kg" if text else _("unknown")


def total_gross(containers: Sequence[ManifestContainerData]) -> str:
    """Kilograms of the whole load; with an unknown container in it, only what is at least there."""
    weights = [each["gross_kg"] for each in containers]
    total = sum((Decimal(weight) for weight in weights if weight), Decimal(0))
    unknown = sum(not weight for weight in weights)
    if not unknown:
        return f"{total} kg"
    return _("unknown: %(total)s kg and %(count)d not weighed") % {"total": total, "count": unknown}


def load(containers: Sequence[ManifestContainerData]) -> str:
    """The headline over the containers: how many, how heavy."""
    total = total_gross(containers)
    count = len(containers)
    if _has_stock(containers):
        text = ngettext(
            "The load: %(count)d container, gross %(total)s", "The load: %(count)d containers, gross %(total)s", count
        )
    else:
        text = ngettext(
            "The load: %(count)d waste container, gross %(total)s",
            "The load: %(count)d waste containers, gross %(total)s",
            count,
        )
    return text % {"count": count, "total": total}


def never_together(containers: Sequence[ManifestContainerData]) -> list[tuple[str, str]]:
    """Each thing that must not be met, with the containers that must not meet it."""
    found: dict[str, list[str]] = {}
    for container in containers:
        for other in container["must_not_meet"]:
            found.setdefault(other, []).append(container["code"])
    every = _("all %d containers") if _has_stock(containers) else _("all %d waste containers")
    total = len(containers)
    return [(other, every % total if len(codes) == total > 3 else ", ".join(codes)) for other, codes in found.items()]


def _has_stock(containers: Sequence[ManifestContainerData]) -> bool:
    """Say whether a load has stock containers in it, which are told by a note, and not waste alone."""
    return any("note" in each for each in containers)


def mode(mode: Literal["brought", "picked up"]) -> str:
    """How the load changes hands."""
    return _("picked up here") if mode == "picked up" else _("brought to the receiver")


def signatories(mode: Literal["brought", "picked up"]) -> list[str]:
    """Who signs, in the order of custody."""
    carrier = [_("Picked up by")] if mode == "picked up" else []
    return [_("Handed over by"), *carrier, _("Received by")]


def chain_meaning(sequence: int) -> str:
    """Why a hash stands on the paper."""
    return _(
        "Entry %(sequence)d of the workshop's journal ends with this hash. Whoever keeps this sheet can tell later "
        "whether that entry or an earlier one was changed."
    ) % {"sequence": sequence}


def grouped(digest: str) -> str:
    """A hash in groups of four, to be read aloud and compared."""
    return " ".join(digest[start : start + 4] for start in range(0, len(digest), 4))


def witness(sequence: int, digest: str) -> str:
    """What the code beside the chain head contains: the entry's number and the hash."""
    return f"{sequence} {digest}"


def not_entered(names: Sequence[str]) -> str:
    """Said where hazards of a part of the contents are missing."""
    return _("Hazards not entered for: %s. That does not mean there are none.") % ", ".join(names)


def contents(text: str | None) -> str:
    """What is inside, in words."""
    return text or _("contents unknown")


def must_never_meet(others: Sequence[AvoidData], *, brief: bool = False) -> str:
    """What must never come together with the contents; unless ``brief`` with what that would give."""
    names = [avoid(other, brief=brief) for other in others]
    return _("Must never meet: %s") % (", ".join(names) or nothing_to_avoid())


def avoid(other: AvoidData, *, brief: bool = False) -> str:
    """One thing that must not be met."""
    return other["what"] if brief or not other["gives"] else f"{other['what']} ({other['gives']})"


def issued(kind: str, data: Mapping[str, Any]) -> str:
    """Number, time and person of a paper, for its foot."""
    return _("%(paper)s, issued %(at)s by %(by)s") % {
        "paper": paper_title(kind, data),
        "at": data["issued_at"],
        "by": data["issued_by"],
    }
