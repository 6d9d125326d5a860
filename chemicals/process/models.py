"""Set-up of the process: baths with their figures, rack types, routes. Plain settings; matter is in the journal."""

import uuid

from django.core.validators import MaxValueValidator, MinValueValidator
from django.db import models
from django.utils.translation import gettext_lazy as _
from django_scopes import ScopedManager

from chemicals.jobs.models import Job, State
from chemicals.journal.models import Attachment, Entry
from chemicals.ledger.models import Vessel
from chemicals.science.reading import MEASURED
from chemicals.workshop.models import Membership, Place, Workshop

LONGEST_TYPED = 40
"""Characters of a mark, and of an uncertainty as typed."""


class AnodeKind(models.TextChoices):
    """What an anode does: a soluble one gives its metal to the bath, an inert one nothing."""

    SOLUBLE = "soluble", _("soluble")
    INERT = "inert", _("inert")


class SideReaction(models.TextChoices):
    """What the current at an inert anode does to a bath besides taking its metal out."""

    ACID = "acid", _("acid is made (acid bath)")
    ALKALI = "alkali", _("alkali is used up (alkaline bath)")
    CHROMIUM_VI = "chromium(VI)", _("chromium(VI) is used up (chromium bath)")


class Tank(models.Model):
    """A vessel that parts go through. A bath has a metal with its valence; a rinse has none.

    ``mark`` in nanolitres, ``efficiency`` and its uncertainty in parts per million. ``racks`` stands for what grows on
    racks: ``rack_share`` of the deposit (parts per million; None is not known) instead of on parts.
    """

    vessel = models.OneToOneField(Vessel, on_delete=models.PROTECT, related_name="tank")
    mark = models.BigIntegerField(_("volume at the mark"), null=True, blank=True)
    bath_type = models.CharField(_("bath type"), max_length=80, blank=True)
    metal = models.CharField(_("metal"), max_length=2, blank=True)
    valence = models.PositiveSmallIntegerField(_("valence"), null=True, blank=True)
    efficiency = models.PositiveIntegerField(_("current efficiency"), default=1_000_000)
    efficiency_sd = models.PositiveIntegerField(_("its uncertainty"), default=30_000)
    anode_kind = models.CharField(_("anode"), max_length=8, choices=AnodeKind.choices, blank=True)
    anode = models.ForeignKey(Vessel, null=True, blank=True, on_delete=models.PROTECT, related_name="+")
    side_reaction = models.CharField(_("side reaction"), max_length=12, choices=SideReaction.choices, blank=True)
    racks = models.ForeignKey(Vessel, null=True, blank=True, on_delete=models.PROTECT, related_name="+")
    rack_share = models.PositiveIntegerField(_("share that grows on racks"), null=True, blank=True)

    objects: "models.Manager[Tank]" = ScopedManager(workshop="vessel__workshop")

    class Meta:
        constraints = [
            models.CheckConstraint(
                condition=models.Q(metal="", valence=None)
                | (~models.Q(metal="") & models.Q(valence__isnull=False, valence__gte=1)),
                name="tank_metal_with_valence",
            ),
            models.CheckConstraint(
                condition=~models.Q(anode_kind="soluble") | models.Q(anode__isnull=False), name="tank_soluble_anode_set"
            ),
            models.CheckConstraint(condition=models.Q(efficiency__gt=0), name="tank_efficiency_above_zero"),
            models.CheckConstraint(
                condition=models.Q(side_reaction="") | models.Q(anode_kind="inert"), name="tank_side_reaction_inert"
            ),
            models.CheckConstraint(
                condition=models.Q(rack_share=None) | models.Q(racks__isnull=False, rack_share__lt=1_000_000),
                name="tank_rack_share_of_racks",
            ),
        ]

    def __str__(self) -> str:
        return self.vessel.name


class TankChange(models.Model):
    """Who changed what of how a tank is set up, and when: before and after as people read them. ``note`` says why."""

    tank = models.ForeignKey(Tank, on_delete=models.PROTECT, related_name="changes")
    fact = models.CharField(max_length=16)
    before = models.CharField(max_length=80, blank=True)
    after = models.CharField(max_length=80, blank=True)
    note = models.CharField(max_length=200, blank=True, default="")
    changed_at = models.DateTimeField()
    changed_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[TankChange]" = ScopedManager(workshop="tank__vessel__workshop")

    def __str__(self) -> str:
        return f"{self.tank}: {self.fact}"


class LevelMark(models.Model):
    """A row of a tank's level table: a height, or a mark with a name, and the volume that it stands for at 20 °C.

    ``height`` in nanometres, None where the ``mark`` has a name only; ``volume`` in nanolitres. ``hot`` rows are for
    liquid at its working temperature, the others for cold.
    """

    vessel = models.ForeignKey(Vessel, on_delete=models.PROTECT, related_name="level_marks")
    hot = models.BooleanField(default=False)
    mark = models.CharField(_("height or mark"), max_length=LONGEST_TYPED)
    height = models.BigIntegerField(null=True)
    volume = models.BigIntegerField(_("volume"))
    entered_at = models.DateTimeField()
    entered_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[LevelMark]" = ScopedManager(workshop="vessel__workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["vessel", "hot", "mark"], name="level_mark_once"),
            models.UniqueConstraint(fields=["vessel", "hot", "height"], name="level_mark_height_once"),
            models.CheckConstraint(
                condition=models.Q(volume__gte=0) & (models.Q(height=None) | models.Q(height__gte=0)),
                name="level_mark_not_negative",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.vessel}: {self.mark}"


class Instrument(models.Model):
    """What something is measured with, or by which method, and how sure it is.

    It ``measures`` one quantity of science.reading; a meter of three is entered three times, for each has its own
    uncertainty. That is ``sd`` in base units, or ``relative_sd`` in parts per million, or both; what was typed stays
    beside it. Entries keep the figures that they relied on.
    """

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="instruments")
    name = models.CharField(_("name"), max_length=80)
    measures = models.CharField(_("measures"), max_length=16, choices=[(name, name) for name in MEASURED])
    sd_typed = models.CharField(_("standard uncertainty"), max_length=LONGEST_TYPED, blank=True)
    sd = models.BigIntegerField(null=True, blank=True)
    relative_typed = models.CharField(_("standard uncertainty as a share"), max_length=LONGEST_TYPED, blank=True)
    relative_sd = models.BigIntegerField(null=True, blank=True)
    calibrated_on = models.DateField(_("calibrated on"), null=True, blank=True)
    valid_until = models.DateField(_("calibration valid until"), null=True, blank=True)
    picture = models.ForeignKey(Attachment, null=True, blank=True, on_delete=models.PROTECT, related_name="+")
    retired = models.BooleanField(_("retired"), default=False)
    changed_at = models.DateTimeField()
    changed_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[Instrument]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["workshop", "name"], name="instrument_name_once"),
            models.CheckConstraint(condition=models.Q(measures__in=list(MEASURED)), name="instrument_measures"),
            models.CheckConstraint(
                condition=(models.Q(sd=None, sd_typed="") | models.Q(sd__isnull=False, sd__gte=0))
                & (
                    models.Q(relative_sd=None, relative_typed="")
                    | models.Q(relative_sd__isnull=False, relative_sd__gte=0)
                ),
                name="instrument_uncertainty_as_typed",
            ),
            models.CheckConstraint(
                condition=models.Q(calibrated_on=None)
                | models.Q(valid_until=None)
                | models.Q(valid_until__gte=models.F("calibrated_on")),
                name="instrument_days_in_order",
            ),
        ]

    def __str__(self) -> str:
        return self.name


class RackType(models.Model):
    """Parts on a rack: drag-out per load in nanolitres with its relative uncertainty in ppm, area in mm2."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="rack_types")
    name = models.CharField(_("name"), max_length=80)
    area = models.BigIntegerField(_("area"), null=True, blank=True)
    drag_out = models.BigIntegerField(_("drag-out per load"), validators=[MinValueValidator(0)])
    drag_out_sd = models.PositiveIntegerField(
        _("its uncertainty"), default=300_000, validators=[MaxValueValidator(2_000_000)]
    )

    objects: "models.Manager[RackType]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["workshop", "name"], name="rack_type_name_once"),
            models.CheckConstraint(condition=models.Q(drag_out__gte=0), name="rack_type_drag_out_not_negative"),
        ]

    def __str__(self) -> str:
        return self.name


class Route(models.Model):
    """The tanks that a load goes through, in order, on its usual rack type; the first tank plates."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="routes")
    name = models.CharField(_("name"), max_length=80)
    rack = models.ForeignKey(RackType, on_delete=models.PROTECT, related_name="routes", verbose_name=_("rack type"))

    objects: "models.Manager[Route]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["workshop", "name"], name="route_name_once")]

    def __str__(self) -> str:
        return self.name


class RouteStep(models.Model):
    """One tank of a route."""

    route = models.ForeignKey(Route, on_delete=models.PROTECT, related_name="steps")
    position = models.PositiveSmallIntegerField()
    vessel = models.ForeignKey(Vessel, on_delete=models.PROTECT, related_name="+")

    class Meta:
        ordering = ["position"]
        constraints = [models.UniqueConstraint(fields=["route", "position"], name="route_position_once")]

    def __str__(self) -> str:
        return f"{self.position} {self.vessel}"


class Subject(models.TextChoices):
    """What is in a file: entries of the past, or the register with its containers."""

    ENTRIES = "entries", _("entries of the past")
    REGISTER = "register", _("the register: products and containers")


class Import(models.Model):
    """A file of past records or of the register. ``mapping`` says what its columns mean, and who said so when.

    It is imported once. ``errors`` are rows of (row, column, message) that a job found, the first of ``wrong``.
    ``first`` and ``last`` are the sequences of its entries, None where a file of the register names no amounts;
    ``made`` counts what such a file made.
    """

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="imports")
    subject = models.CharField(_("what is in the file"), max_length=8, choices=Subject.choices, default=Subject.ENTRIES)
    file = models.ForeignKey(Attachment, on_delete=models.PROTECT, related_name="+")
    mapping = models.JSONField(default=dict)
    changed_at = models.DateTimeField()
    changed_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")
    job = models.ForeignKey(Job, null=True, on_delete=models.PROTECT, related_name="+")
    errors = models.JSONField(default=list)
    wrong = models.PositiveIntegerField(default=0)
    imported_at = models.DateTimeField(null=True)
    first = models.BigIntegerField(null=True)
    last = models.BigIntegerField(null=True)
    made = models.JSONField(default=dict)

    objects: "models.Manager[Import]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["workshop", "file", "subject"], name="import_file_once"),
            models.CheckConstraint(condition=models.Q(subject__in=Subject.values), name="import_subject"),
            models.CheckConstraint(
                condition=models.Q(imported_at=None, first=None, last=None)
                | models.Q(imported_at__isnull=False, first__isnull=False, last__gte=models.F("first"))
                | models.Q(imported_at__isnull=False, first=None, last=None, subject=Subject.REGISTER),
                name="import_with_its_entries",
            ),
        ]

    def __str__(self) -> str:
        return self.file.name

    @property
    def waits(self) -> bool:
        """Say whether a job is about to import it."""
        return self.job is not None and self.job.state in (State.QUEUED, State.RUNNING)

    @property
    def failed(self) -> bool:
        """Say whether the job gave up."""
        return self.job is not None and self.job.state == State.FAILED


class CountDay(models.Model):
    """Somebody walks along the shelves of a ``place`` (None: of the whole workshop) and says what is there.

    It is over once it is finished, or ``abandoned`` without an entry. ``unseen`` names what nobody had seen by then.
    """

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="count_days")
    place = models.ForeignKey(Place, null=True, blank=True, on_delete=models.PROTECT, related_name="+")
    note = models.CharField(_("note"), max_length=200, blank=True)
    started_at = models.DateTimeField()
    started_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")
    finished_at = models.DateTimeField(null=True)
    finished_by = models.ForeignKey(Membership, null=True, on_delete=models.PROTECT, related_name="+")
    abandoned = models.BooleanField(default=False)
    unseen = models.JSONField(default=list)

    objects: "models.Manager[CountDay]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["workshop", "place"], condition=models.Q(finished_at=None), name="count_day_open_once_at_place"
            ),
            models.UniqueConstraint(
                fields=["workshop"], condition=models.Q(finished_at=None, place=None), name="count_day_open_once_of_all"
            ),
            models.CheckConstraint(
                condition=models.Q(finished_at=None, finished_by=None, abandoned=False)
                | models.Q(finished_at__isnull=False, finished_by__isnull=False),
                name="count_day_finished_by_somebody",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.place or self.workshop}: {self.started_at}"


class Seen(models.TextChoices):
    """What was said of a container on a count day: an amount, that the books are right, or that it is not there."""

    AMOUNT = "amount", _("counted")
    AGREES = "agrees", _("as the books say")
    MISSING = "missing", _("not there")


class CountLine(models.Model):
    """A container was seen on a count day, or was not there. What is said again takes the earlier line back.

    ``base`` and its standard uncertainty ``sd`` in micrograms or nanolitres, as the ``dimension`` says; ``typed`` and
    ``typed_sd`` are what somebody wrote. ``entry`` is the count that followed once the day was finished.
    """

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    day = models.ForeignKey(CountDay, on_delete=models.PROTECT, related_name="lines")
    vessel = models.ForeignKey(Vessel, on_delete=models.PROTECT, related_name="count_lines")
    said = models.CharField(max_length=8, choices=Seen.choices)
    typed = models.CharField(max_length=60, blank=True)
    dimension = models.CharField(max_length=8, blank=True)
    base = models.BigIntegerField(null=True)
    typed_sd = models.CharField(max_length=60, blank=True)
    sd = models.BigIntegerField(null=True)
    remark = models.CharField(_("remark"), max_length=200, blank=True)
    seen_at = models.DateTimeField()
    seen_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")
    taken_back_at = models.DateTimeField(null=True)
    taken_back_by = models.ForeignKey(Membership, null=True, on_delete=models.PROTECT, related_name="+")
    entry = models.OneToOneField(Entry, null=True, on_delete=models.PROTECT, related_name="count_line")

    objects: "models.Manager[CountLine]" = ScopedManager(workshop="day__workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["day", "vessel"], condition=models.Q(taken_back_at=None), name="count_line_once"
            ),
            models.CheckConstraint(
                condition=models.Q(said=Seen.AMOUNT, base__isnull=False, base__gte=0, dimension__in=("mass", "volume"))
                | models.Q(said__in=(Seen.AGREES, Seen.MISSING), base=None, sd=None, dimension=""),
                name="count_line_amount_or_word",
            ),
            models.CheckConstraint(
                condition=models.Q(taken_back_at=None, taken_back_by=None)
                | models.Q(taken_back_at__isnull=False, taken_back_by__isnull=False, entry=None),
                name="count_line_taken_back_by_somebody",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.vessel}: {self.typed or self.get_said_display()}"
