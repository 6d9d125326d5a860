from django.db import migrations, models

from chemicals.workshop.texts import searchable


def fill(apps, schema_editor):
    for row in apps.get_model("register", "Substance").objects.all():
        row.searched = searchable(row.name, *map(str, row.synonyms), row.cas_number, row.ec_number, row.formula)
        row.save(update_fields=["searched"])
    for row in apps.get_model("register", "Product").objects.all():
        row.searched = searchable(row.name, row.supplier)
        row.save(update_fields=["searched"])


class Migration(migrations.Migration):

    dependencies = [
        ('journal', '0003_longer_media_type'),
        ('register', '0004_supplier_telephone'),
        ('workshop', '0004_searched_places'),
    ]

    operations = [
        migrations.RemoveConstraint(
            model_name='productrevision',
            name='revision_form',
        ),
        migrations.AddField(
            model_name='product',
            name='searched',
            field=models.TextField(blank=True, default='', editable=False),
        ),
        migrations.AddField(
            model_name='substance',
            name='searched',
            field=models.TextField(blank=True, default='', editable=False),
        ),
        migrations.AlterField(
            model_name='productrevision',
            name='form',
            field=models.CharField(choices=[('solid', 'solid'), ('liquid', 'liquid'), ('gas', 'gas')], max_length=8, verbose_name='physical form'),
        ),
        migrations.AddConstraint(
            model_name='productrevision',
            constraint=models.CheckConstraint(condition=models.Q(('form__in', ['solid', 'liquid', 'gas'])), name='revision_form'),
        ),
        migrations.RunPython(fill, migrations.RunPython.noop, elidable=True),
    ]
