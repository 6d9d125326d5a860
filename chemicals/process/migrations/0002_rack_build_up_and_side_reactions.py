from django.db import migrations, models
import django.db.models.deletion


class Migration(migrations.Migration):

    dependencies = [
        ('ledger', '0002_kinds_and_running_state'),
        ('process', '0001_initial'),
    ]

    operations = [
        migrations.AddField(
            model_name='tank',
            name='side_reaction',
            field=models.CharField(blank=True, choices=[('acid', 'acid is made (acid bath)'), ('alkali', 'alkali is used up (alkaline bath)'), ('chromium(VI)', 'chromium(VI) is used up (chromium bath)')], default='', max_length=12, verbose_name='side reaction'),
            preserve_default=False,
        ),
        migrations.AddField(
            model_name='tank',
            name='racks',
            field=models.ForeignKey(blank=True, null=True, on_delete=django.db.models.deletion.PROTECT, related_name='+', to='ledger.vessel'),
        ),
        migrations.AddField(
            model_name='tank',
            name='rack_share',
            field=models.PositiveIntegerField(blank=True, null=True, verbose_name='share that grows on racks'),
        ),
        migrations.AddConstraint(
            model_name='tank',
            constraint=models.CheckConstraint(condition=models.Q(('side_reaction', ''), ('anode_kind', 'inert'), _connector='OR'), name='tank_side_reaction_inert'),
        ),
        migrations.AddConstraint(
            model_name='tank',
            constraint=models.CheckConstraint(condition=models.Q(('rack_share', None), models.Q(('rack_share__lt', 1000000), ('racks__isnull', False)), _connector='OR'), name='tank_rack_share_of_racks'),
        ),
    ]
