"""What can be found by what stands in it: a column of text as it is searched, kept by every save."""

from collections.abc import Iterable
from typing import Any

from django.db import models

from chemicals.workshop.texts import searchable


class Searched(models.Model):
    """Base of rows that a search looks through. Whoever writes rows in bulk calls ``note_searched`` first.

    The column is there because SQLite folds the case of ASCII letters only.
    """

    searched = models.TextField(editable=False, blank=True, default="")

    class Meta:
        abstract = True

    def save(self, *args: Any, **kwargs: Any) -> None:
        self.note_searched()
        if kwargs.get("update_fields") is not None:
            kwargs["update_fields"] = {*kwargs["update_fields"], "searched"}
        super().save(*args, **kwargs)

    def search_texts(self) -> Iterable[str]:
        """Return the texts by which this is found."""
        raise NotImplementedError

    def note_searched(self) -> None:
        """Bring the searched text up to date with the rest of the row."""
        self.searched = searchable(*self.search_texts())
