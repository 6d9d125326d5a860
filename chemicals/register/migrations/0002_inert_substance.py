from django.db import migrations, models


class Migration(migrations.Migration):

    dependencies = [
        ('register', '0001_initial'),
    ]

    operations = [
        migrations.AddField(
            model_name='substance',
            name='inert',
            field=models.BooleanField(default=False, verbose_name='reacts with nothing here'),
        ),
    ]
