"""The register and its containers: lists that answer while somebody types, and addresses that can be passed on."""

from collections.abc import Callable, Iterator, Sequence
from typing import Any

from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse, HttpResponseBase
from django.utils import timezone
from django.utils.cache import patch_vary_headers

from chemicals.register.models import ProductRevision
from chemicals.workshop.models import Membership
from compliance.premises.expiry import Keeping
from compliance.premises.finding import find_containers, find_products, list_keys, tell_containers, tell_products
from compliance.premises.selectors import Standing
from compliance.web.catalogue import sheet_mark
from compliance.web.contents import CONTENT_COLUMNS, parts_of
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.finding import FindForm
from compliance.web.views.acts import address
from compliance.web.views.register import COLUMNS

Tell = Callable[[Sequence[int]], list[Any]]
"""Primary keys of one page -> its rows."""
PER_PAGE = 50
BATCH = 500
"""How many rows of a file are read at once."""
CONTAINER_COLUMNS = (
    Column("container", lambda row: row.vessel.name),
    Column("code", lambda row: row.vessel.code),
    Column("kind", lambda row: row.vessel.kind),
    Column("product", lambda row: row.vessel.product.name if row.vessel.product else ""),
    Column("supplier", lambda row: row.vessel.product.supplier if row.vessel.product else ""),
    Column("place", lambda row: row.vessel.place.name if row.vessel.place else ""),
    Column("opened", lambda row: row.vessel.opened_on),
    Column("keeps until", lambda row: row.vessel.expires_on),
    Column("gone since", lambda row: row.vessel.gone_at),
    Column("signal word", lambda row: row.hazards.signal_word),
    Column("pictograms", lambda row: " ".join(row.hazards.pictograms)),
    Column("hazard statements", lambda row: "; ".join(row.hazards.statements)),
    Column("hazards not entered", lambda row: "; ".join(row.hazards.not_entered)),
)


@page()
def register(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List the products that are looked for, as they are known now, each with where it stands."""
    form = FindForm(member, request.GET, address("register", member))
    if not form.is_valid():
        return show(request, member, "web/register.html", here="register", status=400, form=form)
    wanted, today = form.wanted, timezone.localdate()
    keys = list_keys(find_products(member, wanted, today))

    def revisions() -> Iterator[ProductRevision]:
        for some in _batches(keys):
            yield from (row.revision for row in tell_products(member, some, wanted, today))

    def tell(some: Sequence[int]) -> list[Any]:
        shelved = tell_products(member, some, wanted, today)
        return [(row, sheet_mark(row.revision, today, member.workshop)) for row in shelved]

    file = wanted_file(request, products=(COLUMNS, revisions))
    return file or _list(request, member, "register", form, keys, tell)


@page()
def containers(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List the stock containers and anode sets that are looked for: what, where, how much, how hazardous."""
    form = FindForm(member, request.GET, address("containers", member))
    if not form.is_valid():
        return show(request, member, "web/containers.html", here="register", status=400, form=form)
    today = timezone.localdate()
    keys = list_keys(find_containers(member, form.wanted, today))

    def rows() -> Iterator[Standing]:
        for some in _batches(keys):
            yield from tell_containers(member, some)

    def tell(some: Sequence[int]) -> list[Any]:
        return [(row, row.hazards, Keeping.of(row.vessel, today)) for row in tell_containers(member, some)]

    file = wanted_file(
        request,
        containers=(CONTAINER_COLUMNS, rows),
        stock=(CONTENT_COLUMNS, lambda: parts_of((row.vessel, row.contents) for row in rows())),
    )
    return file or _list(request, member, "containers", form, keys, tell)


def _batches(keys: Sequence[int]) -> Iterator[Sequence[int]]:
    return (keys[start : start + BATCH] for start in range(0, len(keys), BATCH))


def _list(  # noqa: PLR0917  (a page is made of all of them)
    request: HttpRequest, member: Membership, name: str, form: FindForm, keys: Sequence[int], tell: Tell
) -> HttpResponse:
    """Show one page of what was found: all of it, or only the list to whoever types along."""
    listed = Paginator(keys, PER_PAGE).get_page(request.GET.get("page"))
    htmx: Any = getattr(request, "htmx", None)
    along = bool(htmx) and not htmx.history_restore_request
    rows = tell(list(listed.object_list))
    context: dict[str, Any] = {"form": form, "listed": listed, "rows": rows, "kept": form.kept, "along": along}
    template = f"web/_{name}_found.html" if along else f"web/{name}.html"
    response = show(request, member, template, here="register", **context)
    patch_vary_headers(response, ["HX-Request"])
    if along:
        response.headers["HX-Push-Url"] = f"{request.path}?{form.kept}" if form.kept else request.path
    return response
