"""Imports of past records and of the register: the file, what its columns mean, what its rows say."""

from typing import Any

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.books.occurred import PRECISIONS
from chemicals.process.importing.columns import DATES, DECIMALS, FLAG_OPTIONS, ISO, POINT, VERBS, ColumnMap
from chemicals.process.importing.table import MOST_COLUMNS
from chemicals.process.models import Subject
from compliance.api.fields import Choice, Flag, Strict, Text
from compliance.api.serializers.base import Person, Shape, choices_of
from compliance.api.serializers.doors import EchoRow
from compliance.api.serializers.entries import PayloadShape

LONGEST_HEADING = 500


class ImportInput(Strict):
    """A file to look at."""

    subject = Choice(
        choices=Subject.choices,
        required=False,
        help_text=_("What is in the file: entries of the past (if left out), or the register."),
    )
    file = serializers.FileField(
        help_text=_("A CSV file in UTF-8, or an XLSX file, of at most 50 MB, told by its content."),
        error_messages={"required": _("This is missing. Send the file as multipart/form-data under this name.")},
    )


class Columns(serializers.DictField):
    """Headings with what their columns say."""

    def __init__(self, **options: Any) -> None:
        child = Text(max_length=80, help_text=_("What the column says: one of the targets."))
        super().__init__(child=child, **options)

    def to_internal_value(self, data: Any) -> Any:
        """Return the columns; there are only so many."""
        if isinstance(data, dict) and len(data) > MOST_COLUMNS:
            raise serializers.ValidationError(_("These are too many. Leave out columns that say nothing."))
        return super().to_internal_value(data)


class ColumnMapInput(Strict):
    """What the columns of a file mean."""

    verb = Choice(
        choices=[("", _("a column says so")), *((verb, data.title) for verb, data in VERBS.items())],
        required=False,
        allow_null=True,
        help_text=_("What happened in every row; left out where a column says so."),
    )
    dates = Choice(
        choices=list(DATES.items()),
        required=False,
        allow_null=True,
        help_text=_("How dates are written, where they are no ISO dates; iso if left out."),
    )
    decimal = Choice(
        choices=list(DECIMALS.items()),
        required=False,
        allow_null=True,
        help_text=_("The decimal sign of texts; a point if left out. Numbers of a spreadsheet need none."),
    )
    revise = Flag(
        required=False,
        help_text=_("Of the register: rows that say something else revise products that are here; else refused."),
    )
    add_places = Flag(
        required=False, help_text=_("Of the register: places that are not here yet are added; else refused.")
    )
    columns = Columns(help_text=_("What the columns say, by their headings; columns that are not named are left out."))


def build_map(said: dict[str, Any]) -> ColumnMap:
    """Return the column map that validated values describe."""
    flags = {name: said.get(name, False) for name in FLAG_OPTIONS}
    return ColumnMap(said["columns"], said.get("verb", ""), said.get("dates", ISO), said.get("decimal", POINT), **flags)


class ColumnMapShape(Shape):
    """What the columns of a file mean."""

    verb = serializers.CharField(help_text=_("What happened in every row; empty where a column says so."))
    dates = choices_of(DATES, _("How dates are written."))
    decimal = choices_of(DECIMALS, _("The decimal sign of texts."))
    revise = serializers.BooleanField(
        required=False, help_text=_("Only of the register: whether rows revise products; left out where they do not.")
    )
    add_places = serializers.BooleanField(
        required=False, help_text=_("Only of the register: whether places are added; left out where they are not.")
    )
    columns = serializers.DictField(
        child=serializers.CharField(help_text=_("What a column says.")),
        help_text=_("What the columns say, by their headings."),
    )


class RowErrorShape(Shape):
    """One thing that is wrong with a file."""

    row = serializers.IntegerField(help_text=_("The row as a spreadsheet counts it; 0 where the file is meant."))
    column = serializers.CharField(help_text=_("The heading of the column; empty where no single one is meant."))
    message = serializers.CharField(help_text=_("What is wrong, and what to do."))


class CountsShape(Shape):
    """How many things a file of the register makes."""

    products = serializers.IntegerField(help_text=_("New products."))
    revisions = serializers.IntegerField(help_text=_("Next revisions of products that are here."))
    containers = serializers.IntegerField(help_text=_("New containers."))
    substances = serializers.IntegerField(help_text=_("New substances."))
    places = serializers.IntegerField(help_text=_("New places."))


class ImportShape(Shape):
    """A file of past records or of the register."""

    subject = choices_of(Subject.values, _("What is in the file."))
    uuid = serializers.UUIDField(help_text=_("Its identifier."))
    name = serializers.CharField(source="file.name", help_text=_("The file's name."))
    sha256 = serializers.CharField(source="file.sha256", help_text=_("SHA-256 of its bytes in hex."))
    changed_at = serializers.DateTimeField(help_text=_("When somebody last said what its columns mean."))
    changed_by = Person(help_text=_("Who said so, or uploaded it."))
    waits = serializers.BooleanField(help_text=_("Whether a job is about to import it."))
    failed = serializers.BooleanField(help_text=_("Whether the job gave up: record it again."))
    imported_at = serializers.DateTimeField(allow_null=True, help_text=_("When it was imported; null if it is not."))
    first = serializers.IntegerField(allow_null=True, help_text=_("The sequence of its first entry, if any."))
    last = serializers.IntegerField(allow_null=True, help_text=_("The sequence of its last entry, if any."))
    made = serializers.DictField(
        child=serializers.IntegerField(help_text=_("How many.")),
        help_text=_("How many things of each kind a file of the register made; empty of entries."),
    )
    wrong = serializers.IntegerField(help_text=_("How many things a job found wrong; then nothing was recorded."))


class ImportDetail(ImportShape):
    """A file with its columns."""

    headings = serializers.ListField(
        child=serializers.CharField(help_text=_("One heading.")), help_text=_("The headings of its columns.")
    )
    unread = serializers.ListField(
        child=serializers.CharField(help_text=_("One sheet.")), help_text=_("Its sheets that are not read.")
    )
    mapping = ColumnMapShape(help_text=_("What its columns mean: as it was said, else as the headings suggest."))
    targets = serializers.ListField(
        child=serializers.CharField(help_text=_("One target.")),
        help_text=_("What a column may say; in numbered ones any number stands."),
    )
    errors = RowErrorShape(many=True, help_text=_("The first of what a job found wrong."))  # type: ignore[assignment]  # a field of the answer


class UnderstoodRow(Shape):
    """A row as it was understood."""

    row = serializers.IntegerField(help_text=_("The row as a spreadsheet counts it."))
    verb = serializers.CharField(help_text=_("What happened."))
    uuid = serializers.UUIDField(help_text=_("The entry that it would make."))
    occurred_at = serializers.DateTimeField(help_text=_("When it happened, in UTC."))
    precision = choices_of(PRECISIONS, _("How finely that is known."))
    echo = EchoRow(many=True, help_text=_("Every amount as it was understood."))
    payload = PayloadShape(help_text=_("What the entry would say."))


class RegisterContainer(Shape):
    """A container as it was understood."""

    name = serializers.CharField(source="vessel.name", help_text=_("Its name."))
    place = serializers.CharField(help_text=_("Where it stands; empty where that is not said."))
    amount = EchoRow(allow_null=True, help_text=_("What is in it; null where that is not said."))
    lot = serializers.CharField(help_text=_("The lot; empty where that is not said."))
    received_on = serializers.DateField(
        allow_null=True, help_text=_("When that was received; null: it is only known to be there now.")
    )
    opened_on = serializers.DateField(source="vessel.opened_on", allow_null=True, help_text=_("When it was opened."))
    expires_on = serializers.DateField(source="vessel.expires_on", allow_null=True, help_text=_("Until when it keeps."))


class RegisterRow(Shape):
    """A row of the register as it was understood."""

    row = serializers.IntegerField(help_text=_("The row as a spreadsheet counts it."))
    product = serializers.CharField(help_text=_("The product."))
    supplier = serializers.CharField(help_text=_("Its supplier."))
    state = choices_of(
        ("new", "revised", "here"), _("What becomes of the product: it is new, revised, or all of it is here already.")
    )
    composition = serializers.ListField(
        child=serializers.CharField(help_text=_("A substance with its content.")), help_text=_("What is in it.")
    )
    hazard_classes = serializers.ListField(
        child=serializers.CharField(help_text=_("A class.")), help_text=_("Its hazard classes.")
    )
    statements = serializers.ListField(
        child=serializers.CharField(help_text=_("A statement.")), help_text=_("Its statements.")
    )
    containers = RegisterContainer(many=True, help_text=_("Its containers of this row."))


class UnderstoodShape(Shape):
    """A file as it was understood. Nothing was written."""

    rows = serializers.IntegerField(help_text=_("How many rows were read."))
    all_read = serializers.BooleanField(help_text=_("Whether these are all rows; of a large file only the first are."))
    entries = serializers.IntegerField(help_text=_("How many entries they would make."))
    wrong = serializers.IntegerField(help_text=_("How many things are wrong; then nothing is recorded."))
    errors = RowErrorShape(many=True, help_text=_("Everything that is wrong, by row and column."))  # type: ignore[assignment]  # a field of the answer
    first = UnderstoodRow(many=True, help_text=_("Of entries: the first rows that are right."))
    makes = CountsShape(allow_null=True, help_text=_("Of the register: what the file makes; null of entries."))
    substances = serializers.ListField(
        child=serializers.CharField(help_text=_("A name.")), help_text=_("The substances that it adds.")
    )
    places = serializers.ListField(
        child=serializers.CharField(help_text=_("A name.")), help_text=_("The places that it adds.")
    )
    remarks = RowErrorShape(many=True, help_text=_("What is worth a look, and stops nothing."))
    rows_of_register = RegisterRow(many=True, help_text=_("Of the register: the first rows that are right."))
