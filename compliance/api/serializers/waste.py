"""Waste streams and containers, receivers, drop-offs, papers, files."""

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.science.ghs import PICTOGRAMS, SIGNAL_WORDS
from chemicals.science.reactivity import REACTS_AS
from compliance.api.fields import BaseUnits, Choice, Day, Identifier, MomentOrDay, Strict, Text, Words
from compliance.api.serializers.base import Estimate, Figure, Named, Person, Shape, choices_of
from compliance.api.serializers.register import KINDS_HELP, STATEMENT_HELP
from compliance.api.serializers.vessels import CAPACITY_HELP, VesselShape
from compliance.documents.models import PaperKind
from compliance.dropoffs.models import Mode, State
from compliance.waste.models import WasteContainer
from compliance.waste.selectors import read_fill


class StreamShape(Shape):
    """What a receiver approved."""

    uuid = serializers.UUIDField(help_text=_("The stream's identifier."))
    name = serializers.CharField(help_text=_("Its name."))
    origin = serializers.CharField(help_text=_("The process that the waste comes from."))
    profile_number = serializers.CharField(help_text=_("The receiver's profile number."))
    code = serializers.CharField(help_text=_("The waste code as the workshop chose it."))
    reactivity = serializers.ListField(
        child=choices_of(REACTS_AS, KINDS_HELP), help_text=_("What the stream may react as.")
    )
    signal_word = serializers.CharField(help_text=_("Danger, Warning or nothing, as entered."))
    pictograms = serializers.ListField(
        child=choices_of(PICTOGRAMS, _("One pictogram.")), help_text=_("The hazard pictograms on its labels.")
    )
    statements = serializers.ListField(
        child=serializers.CharField(help_text=STATEMENT_HELP), help_text=_("The hazard statements on its labels.")
    )


class StreamInput(Strict):
    """A new waste stream."""

    name = Text(max_length=80, help_text=_("A name that no other stream here has."))
    origin = Text(max_length=120, help_text=_("The process that the waste comes from."))
    profile_number = Text(required=False, allow_blank=True, max_length=40, help_text=_("The receiver's number."))
    code = Text(required=False, allow_blank=True, max_length=40, help_text=_("The waste code as you chose it."))
    reactivity = Words(
        child=Choice(choices=list(REACTS_AS.items()), help_text=KINDS_HELP),
        required=False,
        help_text=_("What the stream may react as. It decides what must never be poured in."),
    )
    signal_word = Choice(
        choices=[(word, word) for word in SIGNAL_WORDS],
        required=False,
        allow_blank=True,
        help_text=_("For the label; empty for none."),
    )
    pictograms = Words(
        child=Choice(choices=[(code, code) for code in PICTOGRAMS], help_text=_("One pictogram.")),
        required=False,
        help_text=_("For the label."),
    )
    statements = Words(
        child=Text(max_length=300, help_text=STATEMENT_HELP), required=False, help_text=_("For the label.")
    )


def _filled(container: WasteContainer) -> Estimate:
    return Estimate(read_fill(container).volume, 0, "volume")


class ContainerShape(Shape):
    """One filling of one waste stream."""

    vessel = VesselShape(help_text=_("The container as a vessel."))
    stream = Named(help_text=_("The waste stream that it is for."))
    material = serializers.CharField(help_text=_("What the container is made of."))
    tare = Figure(allow_null=True, help_text=_("What it weighs empty; null where not said."))
    gross = Figure(allow_null=True, help_text=_("What it weighed when it was closed; null while it is open."))
    closed_at = serializers.DateTimeField(allow_null=True, help_text=_("When it was closed; null while it is open."))
    volume = Figure(source="*", of=_filled, help_text=_("What is in it by the entries."))
    drop_off = serializers.UUIDField(
        source="vessel.drop_off_container.drop_off.uuid",
        default=None,
        allow_null=True,
        help_text=_("The drop-off that it goes along on; null for none."),
    )


class ContainerInput(Strict):
    """A new, empty waste container."""

    name = Text(max_length=80, help_text=_("A name that no other vessel here has."))
    stream = Identifier(help_text=_("The waste stream that it is for."))
    place = Identifier(required=False, allow_null=True, help_text=_("Where it stands."))
    capacity = BaseUnits("volume", example="25 L", required=False, allow_null=True, help_text=CAPACITY_HELP)
    material = Text(required=False, allow_blank=True, max_length=60, help_text=_("What it is made of."))
    tare = BaseUnits("mass", example="1.2 kg", required=False, allow_null=True, help_text=_("What it weighs empty."))


class CloseInput(Strict):
    """The weight of a full container."""

    gross = BaseUnits("mass", example="22.4 kg", help_text=_("Gross weight: the scale rules."))


class ReceiverShape(Shape):
    """Who takes waste containers."""

    uuid = serializers.UUIDField(help_text=_("The receiver's identifier."))
    name = serializers.CharField(help_text=_("Its name."))
    address = serializers.CharField(help_text=_("Its address, as the manifest prints it."))
    reference = serializers.CharField(help_text=_("The workshop's number there."))


class ReceiverInput(Strict):
    """A new receiver."""

    name = Text(max_length=120, help_text=_("A name that no other receiver here has."))
    address = Text(required=False, allow_blank=True, max_length=500, help_text=_("As the manifest shall print it."))
    reference = Text(required=False, allow_blank=True, max_length=60, help_text=_("The workshop's number there."))


class PaperNumber(Shape):
    """A paper by its identifier and number."""

    uuid = serializers.UUIDField(help_text=_("The paper's identifier."))
    number = serializers.IntegerField(help_text=_("Its number, counted by kind."))


class LoadRow(Shape):
    """A waste container, or a stock container, on a drop-off."""

    vessel = serializers.UUIDField(source="vessel.uuid", help_text=_("The container, by its vessel."))
    name = serializers.CharField(source="vessel.name", help_text=_("Its name."))
    stream = serializers.CharField(
        source="vessel.waste_container.stream.name",
        default=None,
        allow_null=True,
        help_text=_("Its waste stream; null of a stock container."),
    )
    product = serializers.CharField(
        source="vessel.product.name",
        default=None,
        allow_null=True,
        help_text=_("The product of a stock container; null of a waste container."),
    )
    gross = Figure(
        source="vessel.waste_container.gross",
        default=None,
        allow_null=True,
        help_text=_("What it weighed when it was closed; null of a stock container."),
    )


class DropOffShape(Shape):
    """A delivery of waste containers to a receiver."""

    uuid = serializers.UUIDField(help_text=_("The drop-off's identifier."))
    receiver = Named(help_text=_("Who takes the containers."))
    mode = choices_of(Mode.values, _("How they get there."))
    planned_for = serializers.DateField(help_text=_("The day it is planned for."))
    state = choices_of(State.values, _("How far it is."))
    manifest = PaperNumber(allow_null=True, help_text=_("Its manifest; null until it is packed."))
    containers = LoadRow(many=True, help_text=_("What goes along."))
    created_at = serializers.DateTimeField(help_text=_("When it was drafted."))


class DropOffInput(Strict):
    """A new drop-off: a draft."""

    receiver = Identifier(help_text=_("Who takes the containers."))
    mode = Choice(choices=Mode.choices, required=False, help_text=_("How they get there; brought if left out."))
    planned_for = Day(help_text=_("The day it is planned for."))
    containers = Words(
        child=Identifier(help_text=_("A closed waste container, by its vessel.")),
        required=False,
        help_text=_("Which waste containers go along."),
    )
    stock = Words(
        child=Identifier(help_text=_("A stock container, empty or not.")),
        required=False,
        help_text=_("Which stock containers go along: empties that stay a waste, what has kept long enough."),
    )


class NothingInput(Strict):
    """Nothing has to be said: an empty object, or no body."""


class HandOverTime(Strict):
    """When the containers were handed over."""

    occurred_at = MomentOrDay(
        required=False, allow_null=True, help_text=_("A time with its offset, or only the day; now if left out.")
    )


class PaperShape(Shape):
    """An issued paper."""

    uuid = serializers.UUIDField(help_text=_("The paper's identifier."))
    kind = choices_of(PaperKind.values, _("What paper it is."))
    number = serializers.IntegerField(help_text=_("Its number, counted by kind."))
    issued_at = serializers.DateTimeField(help_text=_("When it was issued."))
    issued_by = Person(help_text=_("Who issued it."))
    entry = serializers.UUIDField(source="entry.uuid", help_text=_("The entry that proves it."))
    pdf_sha256 = serializers.CharField(help_text=_("SHA-256 of the issued PDF, in hex."))


class PaperDetail(PaperShape):
    """An issued paper with what it says."""

    content = serializers.DictField(
        help_text=_("The frozen data that it was drawn from; its fields follow from its kind.")
    )


class AttachmentShape(Shape):
    """A file of the workshop."""

    sha256 = serializers.CharField(help_text=_("SHA-256 of the bytes in hex: entries and revisions name it by this."))
    name = serializers.CharField(help_text=_("The file's name as it was uploaded first."))
    media_type = serializers.CharField(help_text=_("What the bytes are, told by their beginning."))
    size = serializers.IntegerField(help_text=_("How many bytes."))
    added_at = serializers.DateTimeField(help_text=_("When it was uploaded first."))
    added_by = Person(help_text=_("Who uploaded it."))


class AttachmentInput(Strict):
    """A file to keep."""

    file = serializers.FileField(
        help_text=_("A PDF, PNG or JPEG file of at most 20 MB, told by its content."),
        error_messages={"required": _("This is missing. Send the file as multipart/form-data under this name.")},
    )
