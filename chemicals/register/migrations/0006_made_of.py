from django.db import migrations, models

from chemicals.workshop.texts import searchable


def fill(apps, schema_editor):
    lines = apps.get_model("register", "CompositionLine")
    for product in apps.get_model("register", "Product").objects.all():
        current = product.revisions.order_by("-number").first()
        used = [line.substance for line in lines.objects.filter(revision=current).select_related("substance")]
        names = ((row.name, *map(str, row.synonyms), row.cas_number, row.ec_number, row.formula) for row in used)
        product.made_of = searchable(*(text for texts in names for text in texts))
        product.save(update_fields=["made_of"])


class Migration(migrations.Migration):

    dependencies = [
        ('register', '0005_searched_and_gas'),
    ]

    operations = [
        migrations.AddField(
            model_name='product',
            name='made_of',
            field=models.TextField(blank=True, default='', editable=False),
        ),
        migrations.RunPython(fill, migrations.RunPython.noop, elidable=True),
    ]
