import json
from datetime import UTC, datetime

from django.db import migrations, models
from django.db.models import Q


def settle(apps, schema_editor):
    """What was handed over, and into which nothing was put since, is gone since then."""
    entry, content, vessel = (apps.get_model(*name) for name in (
        ("journal", "Entry"), ("ledger", "Content"), ("ledger", "Vessel")
    ))
    cancelled = set(entry.objects.filter(kind="cancellation").values_list("about_id", flat=True))
    last = {}
    for row in entry.objects.filter(kind="hand-over").order_by("occurred_at", "sequence"):
        if row.pk not in cancelled:
            last[json.loads(bytes(row.body))["payload"]["observed"]["container"]] = row
    for uuid, row in last.items():
        after = Q(occurred_at__gt=row.occurred_at) | Q(occurred_at=row.occurred_at, sequence__gt=row.sequence)
        something = ~Q(component__code="") & ~Q(amount=0) | Q(amount=None)
        if not content.objects.filter(after, something, vessel__uuid=uuid).exists():
            vessel.objects.filter(uuid=uuid).update(gone_at=row.occurred_at)


class Migration(migrations.Migration):

    dependencies = [
        ('journal', '0003_longer_media_type'),
        ('ledger', '0004_care_of_containers'),
    ]

    operations = [
        migrations.AddField(
            model_name='vesselchange',
            name='note',
            field=models.CharField(blank=True, default='', max_length=200),
        ),
        migrations.RunPython(settle, migrations.RunPython.noop, elidable=True),
    ]
