"""What may stand in an address after the question mark."""

from django.utils.translation import gettext_lazy as _

from compliance.api.fields import PageSize, Strict, Text
from compliance.api.pagination import LARGEST_PAGE


class NoQuery(Strict):
    """Nothing."""


class PageQuery(Strict):
    """Which page of a list."""

    cursor = Text(required=False, max_length=200, help_text=_("Where the page begins: from next or previous."))
    page_size = PageSize(
        required=False, min_value=1, max_value=LARGEST_PAGE, help_text=_("Rows of a page; 50 if left out.")
    )
