"""A column for integers of any size, kept as text: variances reach the square of a bigint."""

from typing import TYPE_CHECKING, Any

from django.db import models

if TYPE_CHECKING:
    _Text = models.CharField[int, int]
else:
    _Text = models.CharField  # only the type stubs know it as generic


class ExactIntegerField(_Text):
    """An exact integer of up to 64 digits. Not for sums in SQL."""

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        kwargs["max_length"] = 64
        super().__init__(*args, **kwargs)

    def deconstruct(self) -> tuple[str, str, Any, Any]:
        name, path, args, kwargs = super().deconstruct()
        del kwargs["max_length"]
        return name, path, args, kwargs

    def from_db_value(self, value: str | None, *_: Any) -> int | None:
        return None if value is None else int(value)

    def to_python(self, value: Any) -> int | None:
        return None if value is None else int(value)

    def get_prep_value(self, value: Any) -> str | None:
        return None if value is None else str(int(value))
