"""Ratios measured in one run: `make bench`. DATABASE_URL chooses the engine. Prints a table, fails on a missed aim."""

import os
import sys

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "compliance.settings.test")

import django

django.setup()

from django.db import connection
from django.test.utils import setup_databases, teardown_databases

from tests.bench import balances, entries, imports, late, queries

if __name__ == "__main__":
    old = setup_databases(verbosity=0, interactive=False)
    try:
        print(f"engine: {connection.vendor}")
        missed = [
            *entries.measure(),
            *imports.measure(),
            *late.measure(),
            *queries.measure(),
            *balances.measure(),
        ]
    finally:
        teardown_databases(old, verbosity=0)
    for line in missed:
        print(f"MISSED: {line}")
    sys.exit(bool(missed))
