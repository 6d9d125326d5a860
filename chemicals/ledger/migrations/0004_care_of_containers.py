import django.db.models.deletion
from django.db import migrations, models

from chemicals.workshop.texts import searchable


def fill(apps, schema_editor):
    vessel = apps.get_model("ledger", "Vessel")
    for row in vessel.objects.all():
        row.searched = searchable(row.name, row.code)
        row.save(update_fields=["searched"])


class Migration(migrations.Migration):

    dependencies = [
        ('ledger', '0003_periods_and_late_entries'),
        ('workshop', '0004_searched_places'),
    ]

    operations = [
        migrations.AddField(
            model_name='vessel',
            name='expires_on',
            field=models.DateField(blank=True, null=True, verbose_name='keeps until'),
        ),
        migrations.AddField(
            model_name='vessel',
            name='gone_at',
            field=models.DateTimeField(blank=True, null=True, verbose_name='gone since'),
        ),
        migrations.AddField(
            model_name='vessel',
            name='opened_on',
            field=models.DateField(blank=True, null=True, verbose_name='opened'),
        ),
        migrations.AddField(
            model_name='vessel',
            name='searched',
            field=models.TextField(blank=True, default='', editable=False),
        ),
        migrations.CreateModel(
            name='VesselChange',
            fields=[
                ('id', models.BigAutoField(auto_created=True, primary_key=True, serialize=False, verbose_name='ID')),
                ('fact', models.CharField(choices=[('name', 'name'), ('place', 'place'), ('opened', 'opened'), ('expires', 'keeps until'), ('gone', 'gone')], max_length=8)),
                ('before', models.CharField(blank=True, max_length=80)),
                ('after', models.CharField(blank=True, max_length=80)),
                ('changed_at', models.DateTimeField()),
                ('changed_by', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='+', to='workshop.membership')),
                ('vessel', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='changes', to='ledger.vessel')),
                ('workshop', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='vessel_changes', to='workshop.workshop')),
            ],
            options={
                'constraints': [models.CheckConstraint(condition=models.Q(('fact__in', ['name', 'place', 'opened', 'expires', 'gone'])), name='vessel_change_fact')],
            },
        ),
        migrations.RunPython(fill, migrations.RunPython.noop, elidable=True),
    ]
