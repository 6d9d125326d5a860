"""Every vessel, and the projection of the journal: postings, contents, holdings, findings.

All but vessels and components can be rebuilt from the journal; what belongs to a closed period is kept as it was folded
then, and proved by its digest. Amounts are integers: micrograms, nanolitres.
"""

import uuid
from collections.abc import Iterable
from datetime import datetime

from django.db import models
from django.utils.translation import gettext_lazy as _
from django_scopes import ScopedManager

from chemicals.books.events import ASSUMED, BOUNDARIES, COMPUTED, OBSERVED
from chemicals.jobs.models import Job
from chemicals.journal.models import Entry
from chemicals.ledger.fields import ExactIntegerField
from chemicals.register.models import Product
from chemicals.workshop.models import Membership, Place, Workshop
from chemicals.workshop.searched import Searched

LARGEST = 10**15
"""The largest amount: a tonne of metal, or a thousand cubic metres."""
LONGEST_NOTE = 200
"""Characters that may be said of a change."""


class VesselKind(models.TextChoices):
    """What a vessel is."""

    STOCK = "stock", _("stock container")
    BATH = "bath", _("bath")
    RINSE = "rinse", _("rinse")
    ANODE = "anode", _("anode set")
    FILTER = "filter", _("filter")
    CARBON = "carbon", _("carbon")
    RESIN = "resin", _("resin")
    RECOVERY_CELL = "recovery cell", _("recovery cell")
    RACKS = "racks", _("rack build-up")
    SLUDGE = "sludge", _("sludge")
    WASTE = "waste", _("waste container")


class Vessel(Searched):
    """Anything that holds matter. ``code`` is short, typed or scanned, and unique everywhere.

    Of a stock container also when it was opened and until when what is in it keeps. One that is ``gone`` stands nowhere
    any more. What changes here is noted as `VesselChange`.
    """

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="vessels")
    code = models.CharField(_("code"), max_length=8, unique=True)
    kind = models.CharField(_("kind"), max_length=16, choices=VesselKind.choices)
    name = models.CharField(_("name"), max_length=80)
    place = models.ForeignKey(Place, null=True, blank=True, on_delete=models.PROTECT, related_name="vessels")
    product = models.ForeignKey(Product, null=True, blank=True, on_delete=models.PROTECT, related_name="vessels")
    capacity = models.BigIntegerField(_("capacity"), null=True, blank=True)
    opened_on = models.DateField(_("opened"), null=True, blank=True)
    expires_on = models.DateField(_("keeps until"), null=True, blank=True)
    gone_at = models.DateTimeField(_("gone since"), null=True, blank=True)
    created_at = models.DateTimeField()
    created_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[Vessel]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["workshop", "name"], name="vessel_name_once"),
            models.CheckConstraint(condition=models.Q(kind__in=VesselKind.values), name="vessel_kind"),
        ]

    def __str__(self) -> str:
        return self.name

    def search_texts(self) -> Iterable[str]:
        return (self.name, self.code)


class VesselFact(models.TextChoices):
    """What of a vessel may change without anything being poured."""

    NAME = "name", _("name")
    PLACE = "place", _("place")
    OPENED = "opened", _("opened")
    EXPIRES = "expires", _("keeps until")
    GONE = "gone", _("gone")


class VesselChange(models.Model):
    """Who changed what of a vessel, and when: before and after as people read them, empty where nothing was.

    ``note`` says why, or how.
    """

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="vessel_changes")
    vessel = models.ForeignKey(Vessel, on_delete=models.PROTECT, related_name="changes")
    fact = models.CharField(max_length=8, choices=VesselFact.choices)
    before = models.CharField(max_length=80, blank=True)
    after = models.CharField(max_length=80, blank=True)
    note = models.CharField(max_length=LONGEST_NOTE, blank=True, default="")
    changed_at = models.DateTimeField()
    changed_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[VesselChange]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.CheckConstraint(condition=models.Q(fact__in=VesselFact.values), name="vessel_change_fact")
        ]

    def __str__(self) -> str:
        return f"{self.vessel}: {self.get_fact_display()}"


class ComponentKind(models.TextChoices):
    """What is balanced; only metals and solutes are conserved.

    A solute was declared inert; a species reacts away. ``everything`` stands for all components that an incomplete
    list does not name.
    """

    METAL = "metal", _("metal")
    SOLUTE = "solute", _("solute")
    SPECIES = "species", _("species with reactions")
    VOLUME = "volume", _("volume")
    GROSS_MASS = "gross mass", _("gross mass")
    EVERYTHING = "everything", _("everything else")


class Component(models.Model):
    """What is balanced in a workshop.

    The code is the element's symbol, the solute's formula, the name of a species, ``volume`` or ``gross mass``.
    """

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="components")
    code = models.CharField(max_length=40, blank=True)
    kind = models.CharField(max_length=12, choices=ComponentKind.choices)

    objects: "models.Manager[Component]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["workshop", "code"], name="component_code_once"),
            models.CheckConstraint(condition=models.Q(kind__in=ComponentKind.values), name="component_kind"),
        ]

    def __str__(self) -> str:
        return self.code


class Basis(models.TextChoices):
    """Where a figure comes from."""

    OBSERVED = OBSERVED, _("observed")
    COMPUTED = COMPUTED, _("computed")
    ASSUMED = ASSUMED, _("assumed")


class Posting(models.Model):
    """The signed amount of one component on one vessel or boundary that follows from an entry.

    Two postings of one ``transfer`` sum to zero.
    """

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="postings")
    entry = models.ForeignKey(Entry, on_delete=models.PROTECT, related_name="postings")
    transfer = models.PositiveSmallIntegerField()
    component = models.ForeignKey(Component, on_delete=models.PROTECT, related_name="postings")
    vessel = models.ForeignKey(Vessel, null=True, on_delete=models.PROTECT, related_name="postings")
    boundary = models.CharField(max_length=12, blank=True)
    amount = models.BigIntegerField()
    sd = models.BigIntegerField()
    basis = models.CharField(max_length=8, choices=Basis.choices)
    occurred_at = models.DateTimeField()

    objects: "models.Manager[Posting]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["entry", "transfer", "vessel"], name="posting_vessel_once"),
            models.UniqueConstraint(
                fields=["entry", "transfer", "boundary"], condition=models.Q(vessel=None), name="posting_boundary_once"
            ),
            models.CheckConstraint(
                condition=models.Q(vessel=None, boundary__in=sorted(BOUNDARIES))
                | models.Q(vessel__isnull=False, boundary=""),
                name="posting_vessel_or_boundary",
            ),
            models.CheckConstraint(
                condition=models.Q(amount__gte=-LARGEST, amount__lte=LARGEST), name="posting_amount_range"
            ),
            models.CheckConstraint(condition=models.Q(sd__gte=0), name="posting_sd_not_negative"),
            models.CheckConstraint(condition=models.Q(basis__in=Basis.values), name="posting_basis"),
        ]
        indexes = [
            models.Index(fields=["vessel", "component", "occurred_at", "amount"], name="posting_balance"),
            models.Index(fields=["workshop", "component", "occurred_at"], name="posting_by_component"),
        ]

    def __str__(self) -> str:
        return f"{self.amount} {self.component} {self.vessel or self.boundary}"


class Holding(models.Model):
    """What a vessel holds of a component now: the fold's state. ``amount`` None is unknown, not zero.

    ``known_part`` is what the postings sum to while the amount is unknown, else 0.
    """

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="holdings")
    vessel = models.ForeignKey(Vessel, on_delete=models.PROTECT, related_name="holdings")
    component = models.ForeignKey(Component, on_delete=models.PROTECT, related_name="holdings")
    amount = models.BigIntegerField(null=True)
    variance = ExactIntegerField()
    known_part = models.BigIntegerField(default=0)

    objects: "models.Manager[Holding]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["vessel", "component"], name="holding_once")]

    def __str__(self) -> str:
        return f"{self.vessel}: {self.amount} {self.component}"


class Memory(models.Model):
    """What the fold remembers of a vessel as a whole: is its list incomplete, what was poured in since last empty."""

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="memories")
    vessel = models.OneToOneField(Vessel, on_delete=models.PROTECT, related_name="memory")
    incomplete = models.BooleanField(default=False)
    poured = models.JSONField(default=list)

    objects: "models.Manager[Memory]" = ScopedManager(workshop="workshop")

    def __str__(self) -> str:
        return str(self.vessel)


class Content(models.Model):
    """What a vessel held of a component just after an entry: the running content with its variance.

    ``known_part`` as in Holding. ``poured``, on the row of everything else, is what the vessel remembered then: the
    last rows before a moment are the fold's whole state at that moment.
    """

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="contents")
    entry = models.ForeignKey(Entry, on_delete=models.PROTECT, related_name="contents")
    vessel = models.ForeignKey(Vessel, on_delete=models.PROTECT, related_name="contents")
    component = models.ForeignKey(Component, on_delete=models.PROTECT, related_name="contents")
    occurred_at = models.DateTimeField()
    sequence = models.BigIntegerField()
    amount = models.BigIntegerField(null=True)
    variance = ExactIntegerField()
    known_part = models.BigIntegerField(default=0)
    poured = models.JSONField(null=True)

    objects: "models.Manager[Content]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["entry", "vessel", "component"], name="content_once")]
        indexes = [
            models.Index(fields=["vessel", "component", "occurred_at", "sequence"], name="content_running"),
            models.Index(fields=["workshop", "occurred_at"], condition=models.Q(amount=None), name="content_unknown"),
        ]

    def __str__(self) -> str:
        return f"{self.vessel}: {self.amount} {self.component}"


class Finding(models.Model):
    """What a person should know about an entry: a code and the ends it concerns (vessel identifiers or boundaries)."""

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="findings")
    entry = models.ForeignKey(Entry, on_delete=models.PROTECT, related_name="findings")
    code = models.CharField(max_length=24)
    component = models.CharField(max_length=40, blank=True)
    source = models.CharField(max_length=36, blank=True)
    target = models.CharField(max_length=36, blank=True)
    occurred_at = models.DateTimeField()

    objects: "models.Manager[Finding]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["entry", "code", "component", "source", "target"], name="finding_once")
        ]

    def __str__(self) -> str:
        return self.code


class Books(models.Model):
    """How far the projection of a workshop has come.

    While ``recomputed_to`` is None the books stand: they say all that the journal says. Else they say what the entries
    before (``recomputed_to``, ``recomputed_sequence``) in fold order say, and ``job`` works on the rest.
    """

    workshop = models.OneToOneField(Workshop, on_delete=models.PROTECT, related_name="books")
    fold_version = models.PositiveSmallIntegerField()
    recomputed_to = models.DateTimeField(null=True)
    recomputed_sequence = models.BigIntegerField(null=True)
    job = models.ForeignKey(Job, null=True, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[Books]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.CheckConstraint(
                condition=models.Q(recomputed_to=None, recomputed_sequence=None, job=None)
                | models.Q(recomputed_to__isnull=False, recomputed_sequence__isnull=False, job__isnull=False),
                name="books_recomputed_by_a_job",
            )
        ]

    def __str__(self) -> str:
        return f"{self.workshop}: {self.recomputed_to or 'all'}"

    @property
    def position(self) -> tuple[datetime, int] | None:
        """Return the place in the fold before which the books stand; None if they stand altogether."""
        if self.recomputed_to is None or self.recomputed_sequence is None:
            return None
        return self.recomputed_to, self.recomputed_sequence


class Period(models.Model):
    """A closed period: from ``after`` (None: the beginning) until just before ``until``; a copy of its closing entry.

    ``reopening`` is the entry that opened it again: then what stands here is superseded.
    """

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="periods")
    closing = models.OneToOneField(Entry, on_delete=models.PROTECT, related_name="period")
    reopening = models.OneToOneField(Entry, null=True, on_delete=models.PROTECT, related_name="reopened_period")
    after = models.DateTimeField(null=True)
    until = models.DateTimeField()
    sequence = models.BigIntegerField()
    fold_version = models.PositiveSmallIntegerField()
    followed_sha256 = models.CharField(max_length=64)
    holdings_sha256 = models.CharField(max_length=64)

    objects: "models.Manager[Period]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["workshop", "until"], condition=models.Q(reopening=None), name="period_until_once"
            ),
            models.CheckConstraint(
                condition=models.Q(after=None) | models.Q(after__lt=models.F("until")), name="period_after_before_until"
            ),
        ]

    def __str__(self) -> str:
        return f"until {self.until}"


class ClosingHolding(models.Model):
    """What a vessel held of a component at the end of a closed period: the state from which the next one folds.

    Columns as in Content: the row of everything else says whether the list is incomplete, and what was poured in.
    """

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="closing_holdings")
    period = models.ForeignKey(Period, on_delete=models.PROTECT, related_name="holdings")
    vessel = models.ForeignKey(Vessel, on_delete=models.PROTECT, related_name="closing_holdings")
    component = models.ForeignKey(Component, on_delete=models.PROTECT, related_name="closing_holdings")
    amount = models.BigIntegerField(null=True)
    variance = ExactIntegerField()
    known_part = models.BigIntegerField(default=0)
    poured = models.JSONField(null=True)

    objects: "models.Manager[ClosingHolding]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["period", "vessel", "component"], name="closing_holding_once")]

    def __str__(self) -> str:
        return f"{self.vessel}: {self.amount} {self.component}"
