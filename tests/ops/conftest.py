"""The demo, loaded once for a module; each test rolls back to it."""

from collections.abc import Iterator
from datetime import UTC, datetime

import pytest
from django.db import transaction
from django.test import override_settings
from pytest_django import DjangoDbBlocker

from compliance.ops.demo import DemoUser, load_demo

LOADED_AT = datetime(2026, 3, 2, 15, 0, tzinfo=UTC)


@pytest.fixture(scope="module")
def people(
    django_db_setup: None, django_db_blocker: DjangoDbBlocker, tmp_path_factory: pytest.TempPathFactory
) -> Iterator[list[DemoUser]]:
    """Load the demo and return who can sign in; mark the tests with django_db."""
    folder = tmp_path_factory.mktemp("attachments")
    with django_db_blocker.unblock(), override_settings(ATTACHMENTS=folder), transaction.atomic():
        yield load_demo(now=LOADED_AT)
        transaction.set_rollback(True)
