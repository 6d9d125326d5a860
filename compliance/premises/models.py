"""Which rule's columns the workshop's list of chemicals has."""

from django.db import models
from django.utils.translation import gettext_lazy as _
from django_scopes import ScopedManager

from chemicals.workshop.models import Membership, Workshop


class ChosenRule(models.Model):
    """The rule that a workshop chose for its list of chemicals; ``rule`` is a code of `rules.list_rules`.

    ``checked_on`` is the day on which somebody there compared the line with the law that holds for them.
    """

    workshop = models.OneToOneField(Workshop, on_delete=models.PROTECT, related_name="chosen_rule")
    rule = models.CharField(_("rule"), max_length=40)
    citation = models.CharField(_("citation"), max_length=200, blank=True)
    checked_on = models.DateField(_("checked on"))
    chosen_at = models.DateTimeField()
    chosen_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[ChosenRule]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.CheckConstraint(condition=~models.Q(rule=""), name="chosen_rule_named")]

    def __str__(self) -> str:
        return self.rule
