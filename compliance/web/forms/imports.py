"""Files to import: the upload, and what each column means."""

from collections.abc import Iterator, Mapping, Sequence
from typing import Any

from django import forms
from django.core.exceptions import ValidationError
from django.utils.html import format_html, format_html_join
from django.utils.safestring import SafeString
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.process.importing.columns import (
    DATES,
    DECIMALS,
    GENERAL,
    ISO,
    POINT,
    VERBS,
    ColumnMap,
    list_targets,
)
from chemicals.process.importing.register.columns import OF_CONTAINER, list_register_targets
from chemicals.process.importing.table import LARGEST_FILE, Broken, Row
from chemicals.process.models import Subject
from compliance.web import words
from compliance.web.forms.base import WebForm
from compliance.web.forms.fields import NO_CHOICE, REQUIRED, FlagField, Text, WordField

EXAMPLES = 3
"""How many cells of a column are shown beside it."""

LONGEST_EXAMPLE = 40


class TableField(forms.FileField):
    """A CSV or XLSX file."""

    def __init__(self, **kwargs: Any) -> None:
        widget = forms.FileInput(attrs={"accept": ".csv,.txt,.xlsx,text/csv"})
        super().__init__(
            widget=widget, error_messages={"required": REQUIRED, "empty": _("This file is empty.")}, **kwargs
        )
        self.validators.append(_check_size)


def _check_size(upload: Any) -> None:
    if (upload.size or 0) > LARGEST_FILE:
        raise ValidationError(_("This file is larger than 50 MB. Split it."))


class UploadForm(WebForm):
    """A file to look at."""

    subject = forms.ChoiceField(
        choices=Subject.choices,
        required=False,
        label=gettext_lazy("What the rows are"),
        error_messages={"invalid_choice": NO_CHOICE},
        help_text=gettext_lazy("Each row is an entry, or a product with one of its containers."),
    )
    file = TableField(
        label=gettext_lazy("File"),
        help_text=gettext_lazy("CSV in UTF-8, or XLSX, up to 50 MB, the headings of the columns in the first row."),
    )


class TargetSelect(forms.Select):
    """A choice of what a column says. The options are written at once: a wide file has thousands of them."""

    def __init__(self, groups: Mapping[Text, Mapping[str, Text]]) -> None:
        super().__init__(choices=[(value, label) for options in groups.values() for value, label in options.items()])
        self.groups = groups

    def render(self, name: str, value: Any, attrs: Any = None, renderer: Any = None) -> SafeString:
        chosen = [""] if value is None else [str(value)]
        parts = format_html_join(
            "",
            '<optgroup label="{}">{}</optgroup>',
            ((label, self._options(options, chosen)) for label, options in self.groups.items()),
        )
        known = self.build_attrs(self.attrs, {**(attrs or {}), "name": name})
        written = format_html_join("", ' {}="{}"', ((key, text) for key, text in known.items() if text is not False))
        return format_html('<select{}><option value="">{}</option>{}</select>', written, _("leave out"), parts)

    @staticmethod
    def _options(options: Mapping[str, Text], chosen: Sequence[str]) -> SafeString:
        return format_html_join(
            "",
            '<option value="{}"{}>{}</option>',
            ((value, SafeString(" selected") if value in chosen else "", label) for value, label in options.items()),
        )


class ColumnsForm(WebForm):
    """How dates and numbers are written, what each column says, and what is the same for every row.

    ``seen`` is the column map that the preview on the page was made with.
    """

    seen = forms.CharField(widget=forms.HiddenInput, required=False)

    def __init__(
        self, headings: Sequence[str], chosen: ColumnMap, rows: Sequence[Row], data: Any = None, **kwargs: Any
    ) -> None:
        super().__init__(data, **kwargs)
        self.headings = headings
        self.fields.update(self.ask_of_all(chosen))
        self.fields["dates"] = WordField(DATES.items(), initial=chosen.dates, label=_("Dates are written as"))
        self.fields["decimal"] = WordField(DECIMALS.items(), initial=chosen.decimal, label=_("Decimals are written as"))
        groups = self.group_targets(chosen, data)
        known = {value: label for options in groups.values() for value, label in options.items()}
        for place, heading in enumerate(headings):
            self.fields[f"column-{place}"] = forms.ChoiceField(
                choices=[("", ""), *known.items()],
                initial=chosen.columns.get(heading, ""),
                required=False,
                label=heading,
                help_text=_show_cells(rows, place),
                widget=TargetSelect(groups),
                error_messages={"invalid_choice": _("Choose one from the list.")},
            )

    @property
    def chosen(self) -> ColumnMap:
        """Return the column map that the valid form describes."""
        said = self.cleaned_data
        columns = {heading: said[f"column-{place}"] for place, heading in enumerate(self.headings)}
        of_all = {name: said[name] for name in self.ask_of_all(ColumnMap({}))}
        return ColumnMap(columns, dates=said["dates"] or ISO, decimal=said["decimal"] or POINT, **of_all)

    def ask_of_all(self, chosen: ColumnMap) -> dict[str, forms.Field]:
        """Return the questions about all rows, by the names that they have in a column map."""
        verbs = [(verb, label) for kind, label in words.KINDS.items() if (verb := words.verb_of(kind)) in VERBS]
        every = forms.ChoiceField(
            choices=[("", _("a column says what happened")), *verbs],
            initial=chosen.verb,
            required=False,
            label=_("In every row"),
        )
        return {"verb": every}

    def group_targets(self, chosen: ColumnMap, data: Any) -> dict[Text, dict[str, Text]]:
        """Return what a column may say: of the verb that is chosen, else of all of them."""
        verb = chosen.verb if data is None else data.get("verb", "")
        targets = list_targets([verb] if verb in VERBS else VERBS)
        for target in chosen.used.values():  # more groups of fields than are offered
            targets.setdefault(target, target)
        fields = {target: label for target, label in targets.items() if target not in GENERAL}
        return {_("Every file"): dict(GENERAL), _("What was written down"): fields}


class RegisterColumnsForm(ColumnsForm):
    """The same of a file of the register: what rows may do to what is here."""

    def ask_of_all(self, chosen: ColumnMap) -> dict[str, forms.Field]:
        """Return the questions about all rows."""
        return {
            "revise": FlagField(
                label=_("Rows may revise products that are here"),
                help_text=_("Without this, a row that says something else than the register is refused."),
                initial=chosen.revise,
            ),
            "add_places": FlagField(
                label=_("Rows may name places that are not here yet"),
                help_text=_("They are added. Without this, a place that is not here is refused."),
                initial=chosen.add_places,
            ),
        }

    def group_targets(self, chosen: ColumnMap, data: Any) -> dict[Text, dict[str, Text]]:
        """Return what a column may say: of the product, and of a container of it."""
        targets = list_register_targets()
        for target in chosen.used.values():  # more parts of a composition than are offered
            targets.setdefault(target, target)
        product = {target: label for target, label in targets.items() if target not in OF_CONTAINER}
        return {_("Of the product"): product, _("Of a container"): dict(OF_CONTAINER)}


FORMS: Mapping[str, type[ColumnsForm]] = {Subject.ENTRIES: ColumnsForm, Subject.REGISTER: RegisterColumnsForm}
"""Forms by what is in the file."""


def _show_cells(rows: Sequence[Row], place: int) -> str:
    texts = list(_list_cells(rows, place))
    return _("For example: %(cells)s") % {"cells": " · ".join(texts)} if texts else _("The first rows are empty here.")


def _list_cells(rows: Sequence[Row], place: int) -> Iterator[str]:
    for row in rows[:EXAMPLES]:
        cell = row.cells[place] if row.cells else ""
        text = _("a formula, or an error") if isinstance(cell, Broken) else str(cell)
        if text:
            yield text if len(text) <= LONGEST_EXAMPLE else f"{text[: LONGEST_EXAMPLE - 1]}…"
