"""The triggers that make the journal refuse UPDATE, DELETE, replace and TRUNCATE."""

from django.db import migrations


def install(apps, schema_editor):
    from chemicals.journal import triggers

    triggers.install(schema_editor.connection)


def remove(apps, schema_editor):
    from chemicals.journal import triggers

    triggers.remove(schema_editor.connection)


class Migration(migrations.Migration):
    dependencies = [("journal", "0001_initial")]
    operations = [migrations.RunPython(install, remove)]
