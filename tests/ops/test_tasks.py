"""The service's own background tasks."""

from datetime import UTC, datetime, timedelta

import pytest
from django.contrib.sessions.models import Session

from compliance.ops.tasks import clear_sessions

NOW = datetime(2026, 3, 1, 9, 0, tzinfo=UTC)


@pytest.mark.django_db
def test_only_sessions_that_have_run_out_are_cleared() -> None:
    for key, date in (("over", NOW - timedelta(seconds=1)), ("open", NOW + timedelta(seconds=1))):
        Session.objects.create(session_key=key, session_data="", expire_date=date)
    clear_sessions({}, now=NOW)()
    assert list(Session.objects.values_list("session_key", flat=True)) == ["open"]
