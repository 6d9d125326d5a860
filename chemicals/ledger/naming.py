"""Names of several vessels alike: a running number at the end."""

import re
from collections.abc import Iterator
from itertools import count

from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.workshop.models import Membership

LONGEST = 80
"""Characters of the name of a vessel."""


def list_free_names(member: Membership, stem: str, start: int = 1) -> Iterator[str]:
    """Yield numbered names that no vessel of the workshop has. One query."""
    with scope(workshop=member.workshop):
        taken = set(Vessel.objects.filter(name__startswith=stem[: LONGEST // 2]).values_list("name", flat=True))
    return (name for name in number_names(stem, start) if name not in taken)


def number_names(stem: str, start: int = 1) -> Iterator[str]:
    """Yield the stem with running numbers from a start on; one that is too long gives way to the number."""
    return (f"{stem[: LONGEST - 1 - len(str(number))].rstrip()} {number}" for number in count(start))


def split_number(name: str) -> tuple[str, int]:
    """Return a name without the number at its end, and that number; 1 if there is none."""
    match = re.fullmatch(r"(.*\S)\s+([0-9]{1,6})", name)
    return (name, 1) if match is None else (match[1], int(match[2]))
