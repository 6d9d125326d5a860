"""Files of past records: the upload, and what each column means."""

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
from chemicals.process.importing.table import LARGEST_FILE, Broken, Row
from compliance.web import words
from compliance.web.forms.base import WebForm
from compliance.web.forms.fields import REQUIRED, Text, WordField

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

    file = TableField(
        label=gettext_lazy("File"),
        help_text=gettext_lazy(
            "CSV in UTF-8, or XLSX, up to 50 MB: one row for each entry, the headings of the columns in the first row."
        ),
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
    """What happened in every row, how dates and numbers are written, and what each column says.

    ``seen`` is the column map that the preview on the page was made with.
    """

    seen = forms.CharField(widget=forms.HiddenInput, required=False)

    def __init__(
        self, headings: Sequence[str], chosen: ColumnMap, rows: Sequence[Row], data: Any = None, **kwargs: Any
    ) -> None:
        super().__init__(data, **kwargs)
        self.headings = headings
        verbs = [(verb, label) for kind, label in words.KINDS.items() if (verb := words.verb_of(kind)) in VERBS]
        self.fields["verb"] = forms.ChoiceField(
            choices=[("", _("a column says what happened")), *verbs],
            initial=chosen.verb,
            required=False,
            label=_("In every row"),
        )
        self.fields["dates"] = WordField(DATES.items(), initial=chosen.dates, label=_("Dates are written as"))
        self.fields["decimal"] = WordField(DECIMALS.items(), initial=chosen.decimal, label=_("Decimals are written as"))
        groups = _group_targets(chosen, data)
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
        return ColumnMap(columns, said["verb"], said["dates"] or ISO, said["decimal"] or POINT)


def _group_targets(chosen: ColumnMap, data: Any) -> dict[Text, dict[str, Text]]:
    """Return what a column may say: of the verb that is chosen, else of all of them."""
    verb = chosen.verb if data is None else data.get("verb", "")
    targets = list_targets([verb] if verb in VERBS else VERBS)
    for target in chosen.used.values():  # more groups of fields than are offered
        targets.setdefault(target, target)
    fields = {target: label for target, label in targets.items() if target not in GENERAL}
    return {_("Every file"): dict(GENERAL), _("What was written down"): fields}


def _show_cells(rows: Sequence[Row], place: int) -> str:
    texts = list(_list_cells(rows, place))
    return _("For example: %(cells)s") % {"cells": " · ".join(texts)} if texts else _("The first rows are empty here.")


def _list_cells(rows: Sequence[Row], place: int) -> Iterator[str]:
    for row in rows[:EXAMPLES]:
        cell = row.cells[place] if row.cells else ""
        text = _("a formula, or an error") if isinstance(cell, Broken) else str(cell)
        if text:
            yield text if len(text) <= LONGEST_EXAMPLE else f"{text[: LONGEST_EXAMPLE - 1]}…"
