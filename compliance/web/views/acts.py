"""What most views do: show a form, do what it says, and go on; or show everything that is wrong with it."""

from collections.abc import Callable
from typing import Any, TypeVar

from django.http import HttpRequest, HttpResponse, HttpResponseRedirect
from django.urls import reverse

from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership
from compliance.web.door import show
from compliance.web.forms.base import WebForm

F = TypeVar("F", bound=WebForm)


def address(name: str, member: Membership, *args: object) -> str:
    """Return the address of a page of the member's workshop."""
    return reverse(name, args=[member.workshop.uuid, *args])


def fill_in(
    request: HttpRequest,
    member: Membership | None,
    form: F,
    act: Callable[[F], str],
    *,
    template: str = "web/form.html",
    **context: Any,
) -> HttpResponse:
    """Show the form, or do what it says and go to the address that ``act`` returns."""
    if not form.is_bound:
        return show(request, member, template, form=form, **context)
    if "more" in form.data:
        form.hush()
        return show(request, member, template, form=form, **context)
    if form.is_valid():
        try:
            return HttpResponseRedirect(act(form))
        except InvalidInputError as error:
            form.add_domain_errors(error)
    return show(request, member, template, form=form, status=400, **context)


def sent(request: HttpRequest) -> Any:
    """Return what a form sent, or None where the page is only asked for."""
    return request.POST if request.method == "POST" else None
