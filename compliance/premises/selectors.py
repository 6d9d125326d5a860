"""What stands where, how much of it, and how hazardous: reads of everything together, in a fixed number of queries."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from uuid import UUID

from django.db.models import Exists, OuterRef, Q, QuerySet, Subquery
from django_scopes import scope

from chemicals.books.events import UNKNOWN_LIQUID
from chemicals.ledger.care import CONTAINERS
from chemicals.ledger.codes import tidy_code
from chemicals.ledger.models import Holding, Memory, Vessel
from chemicals.ledger.selectors import Contents, Held, list_contents_for, list_vessels_for
from chemicals.process.models import Tank
from chemicals.process.selectors import list_tanks_for
from chemicals.register.models import ProductRevision
from chemicals.register.selectors import recipe_key
from chemicals.science.reactivity import UNKNOWN, declared
from chemicals.workshop.errors import ConflictError, InvalidInputError
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.selectors import list_places_for
from compliance.documents.models import Paper, PaperKind
from compliance.documents.selectors import list_papers_for, list_papers_naming, read_data
from compliance.documents.stock import ALL_STOCKS
from compliance.premises.hazards import Hazards, Part, merge, part_of
from compliance.premises.models import ChosenRule
from compliance.premises.rules import ListRule, find_rule
from compliance.waste.models import WasteContainer, WasteStream
from compliance.waste.selectors import list_containers_for

UNNAMED = "a liquid that nobody can name"
MOST_SHOWN = 5
BRIEF = ("uuid", "workshop", "code", "kind", "name", "place", "product")
"""Columns of a vessel."""
FIRST_STOCK = "8 per A4"
"""What is offered before a workshop has printed any label: large enough for what most labels say."""


@dataclass(frozen=True)
class Standing:
    """A vessel with what it holds and what was poured in since it was last empty.

    Of a stock container that nothing was poured into, ``revisions`` is its product as it is known now. ``unnamed``:
    something that nobody can name was poured in.
    """

    vessel: Vessel
    contents: Contents | None
    revisions: tuple[ProductRevision, ...]
    unnamed: bool = False
    stream: WasteStream | None = None
    tank: Tank | None = None

    @property
    def parts(self) -> list[Part]:
        """What was entered of the hazards, one by one; of a waste container what its stream says, if that says any."""
        stream = [] if self.stream is None else [part_of(self.stream)]
        if any(part.entered for part in stream):
            return stream
        unnamed = [Part(UNNAMED)] if self.unnamed else []
        return [*stream, *(part_of(revision) for revision in self.revisions), *unnamed]

    @property
    def hazards(self) -> Hazards:
        """The hazards of everything in it together, as entered."""
        return merge(self.parts)

    @property
    def kinds(self) -> frozenset[str]:
        """What it may react as: everything that was poured in, and what a stream may hold, not today's balance."""
        found = {kind for revision in self.revisions for kind in declared(revision.reactivity)}
        if self.stream is not None:
            found |= declared(self.stream.reactivity)
        return frozenset(found | ({UNKNOWN} if self.unnamed else set()))

    @property
    def names(self) -> list[str]:
        """The names of the products in it, each once, in order."""
        return sorted({revision.product.name for revision in self.revisions})

    @cached_property
    def held(self) -> list[Held]:
        """What the books say of volume, mass and the rest, in this order."""
        if self.contents is None:
            return []
        first = [part for part in (self.contents.volume, self.contents.mass) if part is not None]
        return [*first, *self.contents.metals]

    @cached_property
    def is_here(self) -> bool:
        """Whether it holds something, or may: unknown is not nothing, and nor is a product nobody measured."""
        if not self.held:
            return self.vessel.product_id is not None or (self.contents is not None and self.contents.incomplete)
        return any(part.amount is None or part.amount > 0 for part in self.held)


def list_standing_for(
    member: Membership,
    vessels: Iterable[UUID] | None = None,
    *,
    near: Iterable[Place] | None = None,
    brief: bool = False,
) -> list[Standing]:
    """Return every vessel of the member's workshop, or those named, or near some places, by name. Eight queries.

    Near is what shares the place, its bund or its exhaust duct.
    What is gone stands nowhere, unless it is named, or holds something by the books: that must not be hidden. With
    ``brief`` no more of a vessel is read than by which name and code it stands where, and what it is for: faster with
    many vessels, for one query more.
    """
    with scope(workshop=member.workshop):
        rows = list_vessels_for(member)
        if vessels is not None:
            rows = rows.filter(uuid__in=list(vessels))
        else:
            something = Holding.objects.filter(Q(amount=None) | Q(amount__gt=0), vessel=OuterRef("pk"))
            rows = rows.filter(Q(gone_at=None) | Exists(something), Q() if near is None else _is_near(near))
        found = list(rows.select_related(None).only(*BRIEF) if brief else rows)
        poured = dict(Memory.objects.filter(vessel__in=rows.order_by()).values_list("vessel_id", "poured"))
        revisions = _read_revisions(rows, poured)
        tanks = {tank.vessel_id: tank for tank in list_tanks_for(member).filter(vessel__in=rows.order_by())}
        if brief:
            _join(found, {place.pk: place for place in list_places_for(member)}, revisions)
    everything = vessels is None and near is None
    contents = list_contents_for(member, None if everything else [vessel.pk for vessel in found])
    streams = _read_streams(member)
    return [
        Standing(
            vessel=vessel,
            contents=contents.get(vessel.pk),
            revisions=revisions.of(vessel, poured.get(vessel.pk, ())),
            unnamed=any(key.startswith(UNKNOWN_LIQUID) for key in poured.get(vessel.pk, ())),
            stream=streams.get(vessel.pk),
            tank=tanks.get(vessel.pk),
        )
        for vessel in found
    ]


def _is_near(places: Iterable[Place]) -> Q:
    """Return the condition of sharing one of the places, its bund or its exhaust duct."""
    listed = list(places)
    bunds = {place.bund for place in listed} - {""}
    ducts = {place.exhaust_duct for place in listed} - {""}
    shares = Q(place__bund__in=bunds) | Q(place__exhaust_duct__in=ducts)
    return Q(place__in=[place.pk for place in listed]) | shares


def _join(vessels: Iterable[Vessel], places: Mapping[int, Place], revisions: "_Revisions") -> None:
    """Give each vessel its place and product; one object of each serves all, where a join would make one for each."""
    for vessel in vessels:
        vessel.place = None if vessel.place_id is None else places[vessel.place_id]
        vessel.product = None if vessel.product_id is None else revisions.current[vessel.product_id].product


@dataclass(frozen=True)
class _Revisions:
    """Revisions by the key that a vessel remembers, and the current one of each product."""

    by_key: Mapping[str, ProductRevision]
    current: Mapping[int, ProductRevision]

    def of(self, vessel: Vessel, poured: Iterable[str]) -> tuple[ProductRevision, ...]:
        """Return what was poured into a vessel; else, of a stock container, what it is set up for."""
        found = [self.by_key[key] for key in poured if key in self.by_key]
        if not found and vessel.product_id is not None:
            found = [self.current[vessel.product_id]]
        if len(found) < 2:
            return tuple(found)
        return tuple(sorted(found, key=lambda row: (row.product.name, row.number)))


def _read_revisions(vessels: QuerySet[Vessel], poured: Mapping[int, Iterable[str]]) -> _Revisions:
    """Read the revisions that were poured in, and the current ones of what the vessels are set up for. One query."""
    named = {key.partition("/")[0] for keys in poured.values() for key in keys if not key.startswith(UNKNOWN_LIQUID)}
    newest = ProductRevision.objects.filter(product=OuterRef("product")).order_by("-number").values("pk")[:1]
    set_up = Q(product__in=vessels.exclude(product=None).order_by().values("product"), pk=Subquery(newest))
    rows = ProductRevision.objects.filter(Q(product__uuid__in=named) | set_up)
    listed = list(rows.select_related("product", "safety_data_sheet").order_by("product_id", "number"))
    return _Revisions({recipe_key(row): row for row in listed}, {row.product_id: row for row in listed})


def _read_streams(member: Membership) -> dict[int, WasteStream]:
    rows: QuerySet[WasteContainer] = list_containers_for(member)
    return {row.vessel_id: row.stream for row in rows}


def group_by_place(standing: Iterable[Standing]) -> dict[int | None, list[Standing]]:
    """Return what stands together, by the place's primary key; None where nobody said where."""
    found: dict[int | None, list[Standing]] = {}
    for each in standing:
        found.setdefault(each.vessel.place_id, []).append(each)
    return found


def is_stock(vessel: Vessel) -> bool:
    """Say whether a vessel holds one product as bought."""
    return vessel.kind in CONTAINERS


def find_chosen_rule(member: Membership) -> tuple[ListRule, ChosenRule] | None:
    """Return the rule that the workshop chose for its list of chemicals; None while there is none. One query."""
    with scope(workshop=member.workshop):
        chosen = ChosenRule.objects.select_related("chosen_by__user").first()
    rule = find_rule(chosen.rule) if chosen else None
    return None if chosen is None or rule is None else (rule, chosen)


def require_chosen_rule(member: Membership) -> tuple[ListRule, ChosenRule]:
    """Return the chosen rule, or say what is to be done first."""
    found = find_chosen_rule(member)
    if found is None:
        raise ConflictError("No rule is chosen for the list of chemicals. An owner chooses one on its page first.")
    return found


def find_vessels_by_code(member: Membership, codes: Sequence[str]) -> list[Vessel]:
    """Return the vessels that typed codes name, in that order, each as often. One query.

    Raises InvalidInputError with every code that names nothing here.
    """
    tidied = [tidy_code(code) for code in codes]
    found = {vessel.code: vessel for vessel in list_vessels_for(member).filter(code__in=tidied)}
    missing = [typed for typed, code in zip(codes, tidied, strict=True) if code not in found]
    if missing:
        raise InvalidInputError.of("codes", f"Nothing here has the code {', '.join(missing[:10])}. Read it again.")
    return [found[code] for code in tidied]


def read_next_label(member: Membership) -> tuple[str, int]:
    """Return the label stock that was used last, and its first free position. One query."""
    last = list_papers_for(member).filter(kind=PaperKind.LABELS).first()
    if last is None:
        return FIRST_STOCK, 1
    data = read_data(last)
    stock = next(stock for stock in ALL_STOCKS if stock.name == data["stock"])
    return stock.name, (data["start"] - 1 + len(data["labels"])) % stock.labels + 1


def list_labels_of(vessel: Vessel, member: Membership) -> list[Paper]:
    """Return the labels that were issued of a vessel, the latest first, at most MOST_SHOWN. One query."""
    return list(list_papers_naming(member, vessel.code).filter(kind=PaperKind.LABELS)[:MOST_SHOWN])
