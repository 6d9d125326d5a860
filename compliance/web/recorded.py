"""An entry as it was recorded: each figure as typed and as understood, each figure relied on with its source."""

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, replace
from datetime import datetime
from typing import Any

from django.utils.translation import gettext as _

from chemicals.books import events
from chemicals.ledger.components import dimension_of, dimension_per_litre
from chemicals.science.quantity import pretty
from chemicals.science.units import find_elsewhere
from compliance.documents.words import grouped
from compliance.web.words import Ends, component_name, in_one_unit, moment
from compliance.web.words.fields import DIMENSIONS, LABELS, place_of
from compliance.web.words.readings import gauge_doubt, quantity_name, result_amount

REFERENCES = ("entry", "analysis", "closing")
"""Fields that hold the identifier of another entry."""

SPELLED: Mapping[str, Callable[[Any], str]] = {
    **dict.fromkeys(("component", "metal", "expressed_as", "consumed", "species"), component_name),
    **dict.fromkeys(("reported_at", "after", "until"), lambda text: moment(datetime.fromisoformat(text))),
    "loads": lambda number: _("loads: %(number)s") % {"number": number},
}
"""How the fields that hold a component, a moment or a number of things are spelled."""

Payload = Mapping[str, Any]


@dataclass(frozen=True)
class Told:
    """A line of what was recorded: a name, a text, and where a figure that was relied on comes from."""

    label: str
    text: str
    source: str = ""
    is_hash: bool = False


class Teller:
    """Tells a payload of any kind and version, in the order in which the journal keeps it.

    ``about`` is the number of the entry that this one speaks of.
    """

    def __init__(self, payload: Payload, ends: Ends, about: int | None = None) -> None:
        self.payload, self.ends, self.about = payload, ends, about
        self.both: Payload = {**payload["observed"], **payload["used"]}

    def observed(self) -> list[Told]:
        """Return what was observed."""
        return list(self.tell_all(self.payload["observed"]))

    def used(self) -> list[Told]:
        """Return the figures relied on."""
        return list(self.tell_all(self.payload["used"]))

    def tell_all(self, part: Payload) -> Iterator[Told]:
        """Yield the lines of all fields of a part."""
        for name in sorted(part, key=place_of):
            yield from self.tell(name, part[name])

    def tell(self, name: str, value: Any) -> Iterator[Told]:
        """Yield the lines of a field; nothing for one that is empty."""
        if value is None or value in ("", [], {}):
            return
        if name in TELLERS:
            yield from TELLERS[name](self, value)
        elif name.endswith("sha256"):
            yield Told(label_of(name), grouped(value), is_hash=True)
        elif name == "route" or not isinstance(value, Mapping | list):
            yield Told(label_of(name), self.word(name, value))
        elif isinstance(value, Mapping):
            yield self.figure(label_of(name), name, value)
        else:
            for number, row in enumerate(value, 1):
                yield self.row(label_of(name, number if len(value) > 1 else None), name, row)

    def figure(self, label: str, name: str, value: Payload, component: str = "") -> Told:
        """Return a figure as a line; its component tells its dimension, where that is needed."""
        dimension = self.dimension(name, value, component)
        if "typed" in value:
            return Told(label, _as_typed(value, dimension))
        return Told(label, in_one_unit(value["base"], value["sd"], dimension), value["source"])

    def dimension(self, name: str, value: Payload, component: str) -> str:
        """Return the dimension of a figure."""
        component = component or self.both.get("component", "")
        if name == "amount":
            return dimension_of(component)
        if name == "concentration":
            return dimension_per_litre(component)
        found = find_elsewhere(value.get("unit", ""))
        return DIMENSIONS.get(name) or (found.name if found else "mass")

    def row(self, label: str, name: str, row: Any) -> Told:
        """Return one of several as a line, the words before the figures: "Copper sulfate tub, 4 kg"."""
        if not isinstance(row, Mapping):
            return Told(label, self.word(name, row))
        component = row.get("component", "")
        parts = [(inner, row[inner]) for inner in sorted(row, key=place_of) if row[inner] is not None]
        said = [self.word(inner, value) for inner, value in parts if not isinstance(value, Mapping)]
        figures = [
            self.figure("", inner, value, component).text for inner, value in parts if isinstance(value, Mapping)
        ]
        return Told(label, ", ".join([*said, *figures]))

    def word(self, name: str, value: Any) -> str:
        """Return what is no figure: a vessel by its name, a yes or no, a moment, another entry by its number."""
        if isinstance(value, bool):
            return _flag(name, value=value)
        if isinstance(value, list):
            return self.ends.names(value)
        if name in REFERENCES and self.about is not None:
            return _("entry %(number)s") % {"number": self.about}
        return SPELLED[name](value) if name in SPELLED else self.thing(str(value))

    def thing(self, text: str) -> str:
        """Return the name of a vessel, a boundary, a product and its revision; any other text as it is."""
        if text.startswith(events.UNKNOWN_LIQUID):
            return _("a liquid that nobody can name")
        product, slash, number = text.partition("/")
        if slash and product in self.ends.vessels:
            return _("%(product)s, revision %(number)s") % {"product": self.ends.name(product), "number": number}
        return self.ends.name(text)


def tell_taken(event: events.Event, ends: Ends) -> list[Told]:
    """Return what nobody typed of a reading: what it was taken for, and how sure its instrument is."""
    is_baume = isinstance(event, events.DensityReading) and event.density.unit.endswith("degBe")
    has_marks = isinstance(event, events.LevelReading) and event.marks
    if not (isinstance(event, events.Reading) or is_baume or has_marks or getattr(event, "gauge", None)):
        return []
    teller = Teller(events.encode(event), ends)
    names = [name for name in ("volume", "marks", "mass", "density", "result", "gauge") if name in teller.both]
    return [line for name in names for line in teller.tell(name, teller.both[name])]


def label_of(name: str, number: int | None = None) -> str:
    """Return what a field is called, with a number where there are several."""
    label = str(LABELS.get(name, name.replace("_", " ")))
    return label if number is None else f"{label} {number}"


def _flag(name: str, *, value: bool) -> str:
    if name == "solid":
        return _("solid") if value else _("liquid")
    if name == "found":
        return _("more than the books said") if value else _("less than the books said")
    return _("yes") if value else _("no")


def _as_typed(value: Payload, dimension: str) -> str:
    """Return a figure as typed and, where that says more, as it was understood: "2.5 gal = 9.464 L"."""
    typed = value["typed"] if any(map(str.isalpha, value["typed"])) else f"{value['typed']} {pretty(value['unit'])}"
    shown = in_one_unit(value["base"], value["sd"] or 0, dimension)
    same_unit = not value["sd"] and typed.split()[-1] == shown.split()[-1]
    return str(typed) if same_unit else f"{typed} = {shown}"


def _tell_drag_out(teller: Teller, value: Any) -> Iterator[Told]:
    """Yield the drag-out of each tank of the route; of a day sheet for each row of racks."""
    several = isinstance(value[0], list)
    routes = [row["route"] for row in teller.both["racks"]] if several else [teller.both["route"]]
    for number, (route, figures) in enumerate(zip(routes, value if several else [value], strict=True), 1):
        for tank, figure in zip(route, figures, strict=True):
            label = _("drag-out of %(tank)s") % {"tank": teller.ends.name(tank)}
            yield teller.figure(f"{label}, {label_of('racks')} {number}" if several else label, "drag_out", figure)


def _tell_deposit(teller: Teller, value: Any) -> Iterator[Told]:
    yield from teller.tell_all(value)


def _tell_plating(teller: Teller, value: Any) -> Iterator[Told]:
    """Yield what plates first, then what grows on racks, then what else the current does."""
    yield from teller.tell_all(value["deposit"])
    yield from teller.tell("anode", value["anode"])
    if value["racks"] is not None:
        yield Told(_("rack build-up"), teller.ends.name(value["racks"]))
    yield from teller.tell("rack_share", value["rack_share"])
    yield from teller.tell("conversions", value["conversions"])


def _tell_platings(teller: Teller, value: Any) -> Iterator[Told]:
    for charge, plating in zip(teller.both["charges"], value, strict=True):
        for line in _tell_plating(teller, plating):
            yield replace(line, label=f"{teller.ends.name(charge['bath'])}, {line.label}")


def _tell_conversions(teller: Teller, value: Any) -> Iterator[Told]:
    for row in value:
        label = _("%(species)s made") if row["made"] else _("%(species)s used up")
        rate = row["per_kilocoulomb"]
        text = f"{in_one_unit(rate['base'], rate['sd'], 'amount_of_substance')} / kC"
        yield Told(label % {"species": component_name(row["species"])}, text, rate["source"])


def _tell_recipe(teller: Teller, value: Any) -> Iterator[Told]:
    """Yield the product by the name that it had then, and what it holds."""
    name = _("%(product)s, revision %(number)s") % {"product": value["name"], "number": value["revision"]}
    yield Told(label_of("product"), name)
    yield Told(label_of("form"), _flag("solid", value=value["solid"]))
    yield Told(label_of("every_metal"), _flag("complete", value=value["complete"]))
    for share in value["shares"]:
        text = f"{in_one_unit(share['amount'], share['sd'], dimension_of(share['component']))} / {share['per']}"
        yield Told(label_of("shares"), f"{component_name(share['component'])}: {text}")
    yield from teller.tell("density", value["density"])


def _tell_dissolved(teller: Teller, value: Any) -> Iterator[Told]:
    """Yield what an analysis found dissolved; of a make-up how much room each ingredient needs."""
    if "component" in value[0]:
        for row in value:
            yield teller.row(_("found in the filtrate"), "dissolved", row)
        return
    for ingredient, figure in zip(teller.both["ingredients"], value, strict=True):
        label = _("a kilogram of %(stock)s swells it by") % {"stock": teller.ends.name(ingredient["stock"])}
        yield teller.figure(label, "dissolved", figure)


def _tell_result(teller: Teller, value: Any) -> Iterator[Told]:
    """Yield the result of a reading as typed and as understood; of an analysis its figure."""
    if "least" not in value:
        yield teller.figure(label_of("result"), "result", value)
        return
    result = events.Result(**value)
    understood = result_amount(result, teller.both["quantity"])
    same = result.typed == understood
    yield Told(label_of("result"), understood if same else f"{result.typed} = {understood}")


def _tell_quantity(teller: Teller, value: Any) -> Iterator[Told]:
    yield Told(label_of("quantity"), quantity_name(value))


def _tell_gauge(teller: Teller, value: Any) -> Iterator[Told]:
    """Yield the instrument by the name that it had then, and how sure it was taken to be."""
    measures = teller.both.get("quantity") or next(GAUGED[name] for name in GAUGED if name in teller.both)
    gauge = events.Gauge(**value)
    yield Told(label_of("gauge"), gauge.name, gauge_doubt(gauge, measures))


def _tell_marks(teller: Teller, value: Any) -> Iterator[Told]:
    rows = [f"{row['mark']}: {in_one_unit(row['volume'], 0, 'volume')}" for row in value]
    yield Told(label_of("marks"), ", ".join(rows))


def _tell_hot(teller: Teller, value: Any) -> Iterator[Told]:
    if value:
        yield Told(label_of("hot"), _flag("hot", value=True))


def _tell_nothing(teller: Teller, value: Any) -> Iterator[Told]:
    """Yield nothing: the figures relied on name the instrument as it was called then."""
    yield from ()


GAUGED = {
    "volume": "level",
    "mass": "weight",
    "weight_before": "weight",
    "density": "density",
    "result": "analysis",
}
"""What an instrument measured, by the field that it gave."""

TELLERS: Mapping[str, Callable[[Teller, Any], Iterator[Told]]] = {
    "drag_out": _tell_drag_out,
    "plating": _tell_plating,
    "deposit": _tell_deposit,
    "platings": _tell_platings,
    "conversions": _tell_conversions,
    "recipe": _tell_recipe,
    "dissolved": _tell_dissolved,
    "result": _tell_result,
    "quantity": _tell_quantity,
    "gauge": _tell_gauge,
    "instrument": _tell_nothing,
    "marks": _tell_marks,
    "hot": _tell_hot,
}
"""Fields that are told in their own way."""
