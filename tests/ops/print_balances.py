"""A program that prints, as JSON, the chain and what every vessel holds now and held at the moment it is given."""

import json
import os
import sys
from datetime import datetime
from typing import Any

import django


def read_books(before: datetime) -> dict[str, Any]:
    """Return the books of every workshop."""
    from django_scopes import scope

    from chemicals.journal.models import Entry
    from chemicals.ledger.models import Holding
    from chemicals.ledger.selectors import get_balances_before
    from chemicals.workshop.models import Workshop

    books = {}
    for workshop in Workshop.objects.all():
        with scope(workshop=workshop):
            then = get_balances_before(workshop, before)
            holdings = Holding.objects.values_list("vessel__code", "component__code", "amount", "variance")
            books[workshop.name] = {
                "chain": [
                    bytes(digest).hex() for digest in Entry.objects.order_by("sequence").values_list("hash", flat=True)
                ],
                "then": sorted([vessel, component, amount] for (vessel, component), amount in then.items()),
                "now": sorted(list(row) for row in holdings),
            }
    return books


if __name__ == "__main__":
    os.environ.setdefault("DJANGO_SETTINGS_MODULE", "compliance.settings")
    django.setup()
    sys.stdout.write(json.dumps(read_books(datetime.fromisoformat(sys.argv[1]))))
