from django.db import migrations, models

from chemicals.workshop.texts import searchable


def fill(apps, schema_editor):
    place = apps.get_model("workshop", "Place")
    for row in place.objects.all():
        row.searched = searchable(row.name)
        row.save(update_fields=["searched"])


class Migration(migrations.Migration):

    dependencies = [
        ('workshop', '0003_emergency_numbers'),
    ]

    operations = [
        migrations.AddField(
            model_name='place',
            name='searched',
            field=models.TextField(blank=True, default='', editable=False),
        ),
        migrations.RunPython(fill, migrations.RunPython.noop, elidable=True),
    ]
