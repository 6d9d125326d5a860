"""Forms of instruments and of level tables."""

from collections.abc import Mapping, Sequence
from functools import partial
from typing import Any

from django import forms
from django.utils.translation import gettext_lazy as _

from chemicals.journal.models import Attachment
from chemicals.process.instruments import LARGEST_PICTURE, InstrumentInput
from chemicals.process.levels import MarkInput
from chemicals.process.models import LONGEST_TYPED, Instrument, LevelMark
from chemicals.science.quantity import spell
from chemicals.science.reading import MEASURED
from chemicals.workshop.errors import FieldError, InvalidInputError
from compliance.web.forms.base import Row, Rows, WebForm
from compliance.web.forms.fields import AmountField, DayField, FlagField, LineField, WordField
from compliance.web.words.readings import quantity_name


class InstrumentForm(WebForm):
    """An instrument, or a method; of one that is there, what it measures stays."""

    def __init__(self, row: Instrument | None, data: Any = None, files: Any = None) -> None:
        super().__init__(data, files, initial={} if row is None else _initial(row))
        self.row = row
        self.fields["name"] = LineField(
            label=_("Name"), max_length=80, help_text=_("As people call it, for example blue pH meter.")
        )
        if row is None:
            measures = [(name, quantity_name(name)) for name in MEASURED]
            self.fields["measures"] = WordField(
                measures,
                label=_("What it measures"),
                help_text=_("A meter of several is entered for each: each has its own uncertainty."),
            )
        more: dict[str, forms.Field] = {
            "sd": LineField(
                label=_("Standard uncertainty"),
                required=False,
                max_length=LONGEST_TYPED,
                help_text=_("In its own unit: 0.1 L, 0.05 for pH, 0.5 °C. If a sheet gives ± limits, divide by 1.73."),
            ),
            "relative_sd": LineField(
                label=_("And as a share"),
                required=False,
                max_length=LONGEST_TYPED,
                help_text=_("Of what is read, for example 1 %. Of an analysis or a test strip only this."),
            ),
            "calibrated_on": DayField(label=_("Calibrated on"), required=False),
            "valid_until": DayField(
                label=_("Valid until"),
                required=False,
                help_text=_("After this day a reading comes with a caution; it is never refused."),
            ),
            "picture": forms.FileField(
                label=_("Picture"),
                required=False,
                widget=forms.FileInput(attrs={"accept": "image/png,image/jpeg"}),
                help_text=_("PNG or JPEG, up to 5 MB: shown where it is chosen. Empty leaves the one there is."),
            ),
        }
        self.fields.update(more)
        if row is not None and row.picture is not None:
            self.fields["no_picture"] = FlagField(label=_("Take the picture away"))
        if row is not None:
            self.fields["retired"] = FlagField(label=_("Retired"), help_text=_("It is not offered any more."))

    def clean_picture(self) -> Any:
        """Refuse a picture that is too large before it is kept."""
        upload = self.cleaned_data["picture"]
        if upload is not None and (upload.size or 0) > LARGEST_PICTURE:
            raise forms.ValidationError(_("This picture is larger than 5 MB. Make it smaller."))
        return upload

    def to_instrument(self, kept: Attachment | None) -> InstrumentInput:
        """Return the instrument; ``kept`` is the picture that was sent."""
        cleaned = self.cleaned_data
        before = None if self.row is None or cleaned.get("no_picture") else self.row.picture
        return InstrumentInput(
            name=cleaned["name"],
            measures=cleaned["measures"] if self.row is None else self.row.measures,
            sd=cleaned["sd"],
            relative_sd=cleaned["relative_sd"],
            calibrated_on=cleaned["calibrated_on"],
            valid_until=cleaned["valid_until"],
            picture=kept or before,
            retired=cleaned.get("retired", False),
        )


def _initial(row: Instrument) -> dict[str, Any]:
    names = ("name", "calibrated_on", "valid_until", "retired")
    return {**{name: getattr(row, name) for name in names}, "sd": row.sd_typed, "relative_sd": row.relative_typed}


class MarkRow(Row):
    """A row of a level table."""

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(**kwargs)
        self.fields["mark"] = LineField(label=_("Height or mark"), max_length=LONGEST_TYPED)
        self.fields["volume"] = AmountField(["volume"], example="18 L", label=_("Volume at 20 °C"))


class LevelTableForm(WebForm):
    """The level table of a tank: cold rows, and hot ones where they are known."""

    LISTS: Mapping[str, bool] = {"cold": False, "warm": True}

    def __init__(self, marks: Sequence[LevelMark], data: Any = None) -> None:
        initial = {
            name: [{"mark": row.mark, "volume": spell(row.volume, "volume")} for row in marks if row.hot is hot]
            for name, hot in self.LISTS.items()
        }
        super().__init__(data, initial_rows=initial)
        text = _("A height such as 32 cm, or the name of a mark. Clear a row to take it away.")
        hot = _("If the tank is read at its working temperature: which volume it is once it has cooled to 20 °C.")
        self.add_rows(Rows("cold", _("Cold row"), text, partial(MarkRow), blank=4))
        self.add_rows(Rows("warm", _("Hot row"), hot, partial(MarkRow), blank=2))

    def to_marks(self) -> list[MarkInput]:
        """Return the rows of both tables, the cold ones first."""
        return [
            MarkInput(mark=row.cleaned_data["mark"], volume=row.cleaned_data["volume"].base, hot=hot)
            for name, hot in self.LISTS.items()
            for row in self.rows[name].filled
        ]

    def add_domain_errors(self, error: InvalidInputError) -> None:
        """Put the error of a row where the row stands: hot rows are counted after the cold ones."""
        cold = len(self.rows["cold"].filled)
        super().add_domain_errors(InvalidInputError([self._place(each, cold) for each in error.errors]))

    @staticmethod
    def _place(each: FieldError, cold: int) -> FieldError:
        name, *path = each.field.split(".")
        if name != "marks" or not path:
            return each
        number = int(path[0])
        place = f"cold.{number}" if number < cold else f"warm.{number - cold}"
        return FieldError(f"{place}.{path[1]}", each.message)
