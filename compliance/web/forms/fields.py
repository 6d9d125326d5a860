"""Form fields of the trade: amounts as typed, moments of the workshop's zone, choices of its things."""

from collections.abc import Iterable, Mapping, Sequence
from datetime import date, time
from typing import Any
from uuid import UUID
from zoneinfo import ZoneInfo

from django import forms
from django.core.exceptions import ValidationError
from django.core.validators import MaxLengthValidator, MaxValueValidator, MinValueValidator
from django.utils import timezone
from django.utils.functional import Promise
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.books.canonical import CanonicalError, check_text
from chemicals.books.occurred import Occurred, came_twice
from chemicals.science.quantity import MESSAGES, Quantity, QuantityError, parse
from compliance.web import moments

Text = str | Promise
REQUIRED = gettext_lazy("This is needed.")
LARGEST_FILE = 20 * 1024 * 1024
"""Bytes of the largest file that is taken."""
NO_CHOICE = gettext_lazy("Choose one from the list.")
TOO_LONG = gettext_lazy("This is too long. Write it in at most %(limit_value)s characters.")
OTHER_DAY = gettext_lazy("Write a day between 1900-01-01 and 2999-12-31.")


def check_characters(text: str) -> None:
    """Refuse control characters: they cannot be recorded."""
    try:
        check_text(text)
    except CanonicalError as error:
        raise ValidationError(str(error)) from error


class LineField(forms.CharField):
    """A line of text; with ``lines`` a few of them."""

    def __init__(self, *, lines: int = 1, **kwargs: Any) -> None:
        kwargs.setdefault("error_messages", {"required": REQUIRED})
        if lines > 1:
            kwargs["widget"] = forms.Textarea(attrs={"rows": lines})
        super().__init__(**kwargs)
        for validator in self.validators:
            if isinstance(validator, MaxLengthValidator):
                validator.message = TOO_LONG
        self.validators.append(check_characters)

    def to_python(self, value: Any) -> str | None:
        typed = super().to_python(value)
        return typed.replace("\r\n", "\n") if typed else typed


class AmountField(forms.CharField):
    """An amount as typed: a number and a unit of one of the dimensions. Cleans to a Quantity, or None."""

    def __init__(self, dimensions: Sequence[str], *, example: str = "", **kwargs: Any) -> None:
        self.dimensions = tuple(dimensions)
        help_text = str(kwargs.pop("help_text", ""))
        if example and example not in help_text:
            help_text = f"{help_text} {_('For example %(example)s.') % {'example': example}}".strip()
        attrs = {"autocomplete": "off", "autocapitalize": "off", "spellcheck": "false", "class": "amount"}
        super().__init__(
            help_text=help_text,
            widget=forms.TextInput(attrs=attrs),
            error_messages={"required": REQUIRED},
            **kwargs,
        )

    def to_python(self, value: Any) -> Any:
        typed = super().to_python(value)
        return parse_amount(typed, self.dimensions) if typed else None

    def has_changed(self, initial: Any, data: Any) -> bool:
        return bool(data and str(data).strip())


def parse_amount(typed: str, dimensions: Sequence[str]) -> Quantity:
    """Return the amount in the first dimension that it fits. Raises ValidationError with the most telling reason."""
    refused: list[QuantityError] = []
    for dimension in dimensions:
        try:
            return parse(typed, dimension)
        except QuantityError as error:
            refused.append(error)
    worst = min(refused, key=lambda error: error.code in ("wrong_dimension", "unknown_unit"))
    told = dict(worst.params)
    if all(error.code == "unknown_unit" for error in refused):
        told["known"] = ", ".join(str(error.params["known"]) for error in refused)
    raise ValidationError(_(MESSAGES[worst.code]) % told, code=worst.code)


class MomentWidget(forms.MultiWidget):
    """Date, time of day, and, where a clock showed that time twice, which of the two."""

    template_name = "web/widgets/moment.html"
    use_fieldset = True

    def __init__(self, zone: ZoneInfo) -> None:
        self.zone = zone
        which = [("", "—"), (moments.FIRST, _("the first time")), (moments.SECOND, _("the second time"))]
        super().__init__(
            {
                "date": forms.DateInput({"type": "date"}, format="%Y-%m-%d"),
                "time": forms.TimeInput({"type": "time"}, format="%H:%M"),
                "which": forms.Select(choices=which),
            }
        )

    def decompress(self, value: Any) -> list[Any]:
        if not isinstance(value, Occurred):
            return [None, None, ""]
        local = timezone.localtime(value.at, self.zone)
        return [local.date(), local.time() if value.precision == "minute" else None, ""]

    def get_context(self, name: str, value: Any, attrs: Any) -> dict[str, Any]:
        context: dict[str, Any] = super().get_context(name, value, attrs)
        context["asks_which"] = isinstance(value, list) and self._is_ambiguous(value)
        return context

    def _is_ambiguous(self, value: list[Any]) -> bool:
        try:
            day, clock = date.fromisoformat(value[0] or ""), time.fromisoformat(value[1] or "")
        except (TypeError, ValueError):
            return False
        return came_twice(day, clock, self.zone)


class MomentField(forms.MultiValueField):
    """A moment in the workshop's zone. Cleans to Occurred, or None where nothing is written."""

    def __init__(self, zone: ZoneInfo, **kwargs: Any) -> None:
        self.zone = zone
        iso_day = {"invalid": _("Write the date like 2026-03-02.")}
        iso_time = {"invalid": _("Write the time like 14:30.")}
        super().__init__(
            fields=(
                forms.DateField(required=False, input_formats=["%Y-%m-%d"], error_messages=iso_day),
                forms.TimeField(required=False, input_formats=["%H:%M", "%H:%M:%S"], error_messages=iso_time),
                forms.ChoiceField(required=False, choices=[(word, word) for word in ("", "first", "second")]),
            ),
            widget=MomentWidget(zone),
            require_all_fields=False,
            **kwargs,
        )

    def compress(self, data_list: Any) -> Occurred | None:
        day, clock, which = data_list or (None, None, "")
        if day is None and clock is None:
            return None
        try:
            return moments.read_moment(day or timezone.localdate(timezone=self.zone), clock, which, self.zone)
        except moments.MomentError as error:
            raise ValidationError(str(error)) from error


class ThingField(forms.TypedChoiceField):
    """One thing of the workshop, chosen by its uuid. Cleans to the UUID, or None.

    ``missing`` says what to do first where there is nothing to choose from.
    """

    def __init__(
        self, things: Iterable[tuple[UUID, Text]], *, empty: Text = "", missing: Text = "", **kwargs: Any
    ) -> None:
        listed = [(str(uuid), label) for uuid, label in things]
        if missing and not listed:
            kwargs["help_text"] = missing
        required = kwargs.get("required", True)
        if required and len(listed) == 1:
            kwargs.setdefault("initial", listed[0][0])
        blank = empty or (_("Choose…") if required else "—")
        self.labels = dict(listed)
        super().__init__(
            choices=[("", blank), *listed],
            coerce=UUID,
            empty_value=None,
            error_messages={"required": NO_CHOICE, "invalid_choice": NO_CHOICE},
            **kwargs,
        )


class PictureSelect(forms.RadioSelect):
    """One of several things, each with its picture where there is one: value -> address."""

    def __init__(self, pictures: Mapping[str, str]) -> None:
        super().__init__()
        self.pictures = pictures

    def create_option(self, name: str, value: Any, *args: Any, **kwargs: Any) -> dict[str, Any]:
        return {**super().create_option(name, value, *args, **kwargs), "picture": self.pictures.get(str(value), "")}


class WordField(forms.ChoiceField):
    """One word of a list; ``empty`` says what none of them means."""

    def __init__(self, choices: Iterable[tuple[str, Text]], *, empty: Text = "", **kwargs: Any) -> None:
        blank = empty or (_("Choose…") if kwargs.get("required", True) else "—")
        self.labels = dict(choices)
        super().__init__(
            choices=[("", blank), *self.labels.items()],
            error_messages={"required": NO_CHOICE, "invalid_choice": NO_CHOICE},
            **kwargs,
        )


class WholeField(forms.IntegerField):
    """A whole number between two ends."""

    def __init__(self, least: int, most: int, **kwargs: Any) -> None:
        wrong = gettext_lazy("Write a whole number from %(least)s to %(most)s.") % {"least": least, "most": most}
        super().__init__(
            min_value=least,
            max_value=most,
            error_messages={"required": REQUIRED, "invalid": wrong, "min_value": wrong, "max_value": wrong},
            **kwargs,
        )


class WordsField(forms.MultipleChoiceField):
    """Any words of a list, each with a box to tick."""

    def __init__(self, choices: Iterable[tuple[str, Text]], **kwargs: Any) -> None:
        kwargs.setdefault("required", False)
        super().__init__(
            choices=list(choices),
            widget=forms.CheckboxSelectMultiple,
            error_messages={"required": NO_CHOICE, "invalid_choice": NO_CHOICE},
            **kwargs,
        )


class FlagField(forms.BooleanField):
    """Yes or no."""

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(required=False, **kwargs)


class SheetField(forms.FileField):
    """A PDF to keep, of a size that a sheet may have."""

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(required=False, widget=forms.FileInput(attrs={"accept": "application/pdf"}), **kwargs)
        self.validators.append(check_size)


def check_size(upload: Any) -> None:
    """Refuse a file that is too large to be a sheet."""
    if (upload.size or 0) > LARGEST_FILE:
        raise ValidationError(_("This file is larger than 20 MB. Ask the supplier for a smaller one."))


class DayField(forms.DateField):
    """A day, ISO 8601, in whose neighbourhood every time zone has days."""

    default_validators = [
        MinValueValidator(date(1900, 1, 1), OTHER_DAY),
        MaxValueValidator(date(2999, 12, 31), OTHER_DAY),
    ]

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(
            input_formats=["%Y-%m-%d"],
            widget=forms.DateInput({"type": "date"}, format="%Y-%m-%d"),
            error_messages={"required": REQUIRED, "invalid": gettext_lazy("Write the date like 2026-03-02.")},
            **kwargs,
        )
