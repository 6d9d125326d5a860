"""The workshop's own lines: the rule of its list of chemicals, limits, what is kept apart, what was assessed."""

import uuid

from django.db import models
from django.utils.translation import gettext_lazy as _
from django_scopes import ScopedManager

from chemicals.ledger.models import LARGEST
from chemicals.workshop.models import Membership, Place, Workshop


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


class Line(models.Model):
    """A line of a workshop's own rules: where it was read, when somebody last compared it, who entered it and when."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="+")
    citation = models.CharField(_("citation"), max_length=200)
    checked_on = models.DateField(_("checked on"))
    entered_at = models.DateTimeField()
    entered_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    class Meta:
        abstract = True


class Measure(models.TextChoices):
    """As what an amount is limited: base units are nanolitres, or micrograms."""

    VOLUME = "volume", _("volume")
    MASS = "mass", _("mass")


class QuantityLimit(Line):
    """How much of a sort (`sorts.list_sorts`) may stand in a place; ``amount`` in base units, ``typed`` as written."""

    place = models.ForeignKey(Place, on_delete=models.PROTECT, related_name="limits")
    sort = models.CharField(_("of what"), max_length=80)
    measure = models.CharField(max_length=6, choices=Measure.choices)
    amount = models.BigIntegerField()
    typed = models.CharField(_("at most"), max_length=80)

    objects: "models.Manager[QuantityLimit]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.CheckConstraint(condition=~models.Q(sort="") & ~models.Q(citation=""), name="limit_of_what_by_whom"),
            models.CheckConstraint(condition=models.Q(measure__in=Measure.values), name="limit_measure"),
            models.CheckConstraint(condition=models.Q(amount__gte=0, amount__lte=LARGEST), name="limit_amount_range"),
        ]

    def __str__(self) -> str:
        return f"{self.sort}: {self.typed}"


class Reach(models.TextChoices):
    """What two vessels share that stand together."""

    PLACE = "place", _("the same place")
    BUND = "bund", _("the same bund")
    DUCT = "duct", _("the same exhaust duct")


class KeepApart(Line):
    """Two sorts that must not stand together, as the workshop's own line says."""

    first = models.CharField(_("this"), max_length=80)
    second = models.CharField(_("that"), max_length=80)
    reach = models.CharField(_("never in"), max_length=5, choices=Reach.choices)

    objects: "models.Manager[KeepApart]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.CheckConstraint(
                condition=~models.Q(first="") & ~models.Q(citation="") & ~models.Q(first=models.F("second")),
                name="keep_apart_two_sorts_by_whom",
            ),
            models.CheckConstraint(condition=models.Q(reach__in=Reach.values), name="keep_apart_reach"),
        ]

    def __str__(self) -> str:
        return f"{self.first} / {self.second}"


class Assessment(models.Model):
    """What somebody decided of two sorts that stand together at one place, over one bund or under one duct.

    It hides nothing: what stands there is shown as assessed, until the day is over. ``shared`` names the bund or duct.
    """

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="+")
    first = models.CharField(max_length=80)
    second = models.CharField(max_length=80)
    reach = models.CharField(max_length=5, choices=Reach.choices)
    place = models.ForeignKey(Place, null=True, blank=True, on_delete=models.PROTECT, related_name="+")
    shared = models.CharField(max_length=80, blank=True)
    assessed_by = models.CharField(_("assessed by"), max_length=120)
    until = models.DateField(_("until"))
    reason = models.TextField(_("why"), max_length=1000)
    entered_at = models.DateTimeField()
    entered_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[Assessment]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.CheckConstraint(
                condition=models.Q(reach="place", place__isnull=False, shared="")
                | (models.Q(reach__in=["bund", "duct"], place=None) & ~models.Q(shared="")),
                name="assessment_place_or_shared",
            )
        ]

    def __str__(self) -> str:
        return f"{self.assessed_by}: {self.first} / {self.second}"
