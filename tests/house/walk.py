"""Every address of the service, filled in with things of the demo workshop that could leak."""

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any
from uuid import UUID

from django.urls import URLPattern, URLResolver, get_resolver

from chemicals.balance.selectors import list_metals_for
from chemicals.journal.models import Attachment
from chemicals.journal.selectors import list_entries_for
from chemicals.ledger.selectors import list_periods_for, list_vessels_for
from chemicals.process.counting.selectors import list_count_days_for, list_lines_of
from chemicals.process.inputs import INPUTS
from chemicals.process.instruments import list_instruments_for
from chemicals.process.models import CountDay
from chemicals.process.selectors import list_imports_for, list_rack_types_for, list_routes_for, list_tanks_for
from chemicals.register.selectors import list_products_for, list_substances_for
from chemicals.science.calculations import CALCULATIONS
from chemicals.workshop.models import Membership
from chemicals.workshop.selectors import list_members_for, list_places_for
from compliance.documents.selectors import list_papers_for
from compliance.dropoffs.selectors import list_drop_offs_for, list_receivers_for
from compliance.premises.violations import list_keep_apart_for, list_limits_for
from compliance.waste.selectors import list_containers_for, list_streams_for

METHODS = ("get", "head", "options", "post", "put", "patch", "delete")
WRITING = ("post", "put", "patch", "delete")


@dataclass(frozen=True)
class Address:
    """A filled-in path, the pattern that it comes from, and whether it lies inside a workshop."""

    path: str
    route: str

    @property
    def in_workshop(self) -> bool:
        return "<uuid:workshop>" in self.route

    @property
    def in_api(self) -> bool:
        return self.route.startswith("api/")


def patterns(resolver: URLResolver | None = None, prefix: str = "") -> Iterator[str]:
    """Yield the route of every address."""
    for pattern in (resolver or get_resolver()).url_patterns:
        route = prefix + str(pattern.pattern)
        if isinstance(pattern, URLPattern):
            yield route
        else:
            yield from patterns(pattern, route)


def things(member: Membership, sha256: str) -> Mapping[str, list[Any]]:
    """Return uuids of everything that an address may name, under the words by which routes call them."""
    containers = list_containers_for(member)
    one_of_each_kind = list({vessel.kind: vessel for vessel in list_vessels_for(member)}.values())
    return {
        "register": [product.uuid for product in list_products_for(member)[:1]],
        "products": [product.uuid for product in list_products_for(member)[:1]],
        "substances": [row.uuid for row in list_substances_for(member)[:1]],
        "vessels": [vessel.uuid for vessel in one_of_each_kind],
        "tanks": [tank.vessel.uuid for tank in list_tanks_for(member)[:1]],
        "entries": [entry.uuid for entry in list_entries_for(member)[:1]],
        "waste": [row.vessel.uuid for row in containers[:1]],
        "waste-containers": [row.vessel.uuid for row in containers[:1]],
        "waste-streams": [row.uuid for row in list_streams_for(member)[:1]],
        "receivers": [row.uuid for row in list_receivers_for(member)[:1]],
        "drop-offs": [row.uuid for row in list_drop_offs_for(member)[:1]],
        "periods": [row.closing.uuid for row in list_periods_for(member)[:1]],
        "count": [row.uuid for row in list_open_counts(member)],
        "count-days": [row.uuid for row in list_open_counts(member)],
        "line": [list_lines_of(member, row)[0].uuid for row in list_open_counts(member)],
        "imports": [row.uuid for row in list_imports_for(member)[:1]],
        "papers": [row.uuid for row in {row.kind: row for row in list_papers_for(member)}.values()],
        "people": [row.uuid for row in list_members_for(member)[:1]],
        "places": [row.uuid for row in list_places_for(member)[:1]],
        "limits": [row.uuid for row in list_limits_for(member)[:1]],
        "apart": [row.uuid for row in list_keep_apart_for(member)[:1]],
        "keep-apart": [row.uuid for row in list_keep_apart_for(member)[:1]],
        "assessments": [member.uuid],
        "what": ["limits", "apart", "assessments"],
        "rack-types": [row.uuid for row in list_rack_types_for(member)[:1]],
        "routes": [row.uuid for row in list_routes_for(member)[:1]],
        "instruments": [row.uuid for row in list_instruments_for(member)[:1]],
        "tokens": [member.uuid],
        "sha256": [sha256],
        "rest": ["nowhere"],
        "code": [vessel.code for vessel in one_of_each_kind],
        "metal": list_metals_for(member)[:1],
        "verb": list(INPUTS),
        "name": list(CALCULATIONS),
        "kind": ["bath", "rinse"],
        "uidb64": ["MQ"],
        "token": ["set-password"],
    }


def list_open_counts(member: Membership) -> list[CountDay]:
    """Return the counts that are open: a line of one is named with it."""
    return list(list_count_days_for(member).filter(finished_at=None)[:1])


PARAMETER = re.compile(r"<(?:\w+:)?(\w+)>")


def addresses(member: Membership, sha256: str) -> list[Address]:
    """Return every address, filled in with each of the member's things that fits."""
    known = things(member, sha256)
    return [
        Address("/" + path, route)
        for route in patterns()
        if not route.startswith("static")
        for path in _fill(route, known, member.workshop.uuid)
    ]


def _fill(route: str, known: Mapping[str, list[Any]], workshop: UUID) -> Iterator[str]:
    match = PARAMETER.search(route)
    if match is None:
        yield route.strip("^$")
        return
    if match[1] == "workshop":
        values: list[Any] = [workshop]
    elif match[1] in known:
        values = known[match[1]]
    else:
        before = [part for part in route[: match.start()].split("/") if part and "<" not in part]
        values = known[before[-1]]
    assert values, f"nothing to fill {route} with"
    for value in values:
        yield from _fill(route[: match.start()] + str(value) + route[match.end() :], known, workshop)


def secrets_of(member: Membership) -> set[str]:
    """Return words that only members may ever see: names of the workshop's own things."""
    words = {member.workshop.name}
    words |= {product.name for product in list_products_for(member)}
    words |= {vessel.name for vessel in list_vessels_for(member)}
    words |= {receiver.name for receiver in list_receivers_for(member)}
    words |= {str(row.user.email) for row in list_members_for(member)}
    words |= {row.sha256 for row in Attachment.objects.filter(workshop=member.workshop)}
    return {word for word in words if len(word) > 5}
