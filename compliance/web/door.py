"""The way into every page: who asks, in which workshop, with which role; and what errors look like."""

from collections.abc import Callable
from functools import wraps
from typing import Any, Concatenate, ParamSpec
from uuid import UUID

from django.contrib.auth.views import redirect_to_login
from django.http import Http404, HttpRequest, HttpResponse, HttpResponseBase, HttpResponseNotAllowed
from django.shortcuts import render
from django.utils import timezone
from django.utils.cache import patch_cache_control
from django.utils.translation import gettext_lazy as _
from django_scopes import scope

from chemicals.workshop.errors import (
    ConflictError,
    DomainError,
    InvalidInputError,
    NotFoundError,
    NotPermittedError,
)
from chemicals.workshop.models import Membership, Role, User
from chemicals.workshop.selectors import get_membership_for

P = ParamSpec("P")
View = Callable[Concatenate[HttpRequest, Membership, P], HttpResponseBase]
Need = Callable[[Membership], None]

PAGES = (
    ("today", _("Today")),
    ("register", _("Register")),
    ("tanks", _("Tanks")),
    ("entries", _("Entries")),
    ("balance", _("Balance")),
    ("waste", _("Waste")),
    ("drop-offs", _("Drop-offs")),
    ("workshop", _("Workshop")),
)
"""The pages of a workshop in the order of the navigation; each key is also the name of its address."""

REFUSALS: tuple[tuple[type[DomainError], int, Any], ...] = (
    (NotPermittedError, 403, _("This is not yours to do")),
    (ConflictError, 409, _("This cannot be done now")),
    (InvalidInputError, 400, _("Something is wrong")),
    (DomainError, 500, _("This did not work")),
)


def anybody(member: Membership) -> None:
    """Let every member in: reading is open to all three roles."""


def page(*methods: str, need: Need = anybody) -> Callable[[View[P]], Callable[..., HttpResponseBase]]:
    """Turn a view of a member into a view of a request.

    An anonymous visitor is sent to the sign-in page, a stranger gets 404, a wrong role 403. The view runs inside the
    workshop's scope and time zone, its rendering included. ``methods`` GET by default.
    """
    allowed = methods or ("GET",)

    def decorate(view: View[P]) -> Callable[..., HttpResponseBase]:
        @wraps(view)
        def enter(request: HttpRequest, workshop: UUID, *args: P.args, **kwargs: P.kwargs) -> HttpResponseBase:
            if not isinstance(request.user, User):
                return redirect_to_login(request.get_full_path())
            try:
                member = get_membership_for(request.user, workshop)
            except NotFoundError as error:
                raise Http404(str(error)) from error
            if _method(request) not in allowed:
                return HttpResponseNotAllowed(allowed)
            with scope(workshop=member.workshop), timezone.override(member.workshop.zone):
                response = _answer(request, member, lambda: _run(view, need, request, member, *args, **kwargs))
            patch_cache_control(response, private=True, no_cache=True)
            return response

        return enter

    return decorate


def signed_in(*methods: str) -> Callable[[Callable[..., HttpResponseBase]], Callable[..., HttpResponseBase]]:
    """Guard a page that belongs to no workshop: only the sign-in is asked for."""
    allowed = methods or ("GET",)

    def decorate(view: Callable[..., HttpResponseBase]) -> Callable[..., HttpResponseBase]:
        @wraps(view)
        def enter(request: HttpRequest, *args: Any, **kwargs: Any) -> HttpResponseBase:
            if not isinstance(request.user, User):
                return redirect_to_login(request.get_full_path())
            if _method(request) not in allowed:
                return HttpResponseNotAllowed(allowed)
            response = _answer(request, None, lambda: view(request, *args, **kwargs))
            patch_cache_control(response, private=True, no_cache=True)
            return response

        return enter

    return decorate


def _method(request: HttpRequest) -> str:
    return "GET" if request.method == "HEAD" else request.method or ""


def _run(
    view: Callable[..., HttpResponseBase],
    need: Need,
    request: HttpRequest,
    member: Membership,
    *args: Any,
    **kwargs: Any,
) -> HttpResponseBase:
    need(member)
    return view(request, member, *args, **kwargs)


def _answer(request: HttpRequest, member: Membership | None, act: Callable[[], HttpResponseBase]) -> HttpResponseBase:
    """Return what the view answers, or the page of its error."""
    try:
        return act()
    except NotFoundError as error:
        raise Http404(str(error)) from error
    except DomainError as error:
        return refuse(request, member, error)


def refuse(request: HttpRequest, member: Membership | None, error: DomainError) -> HttpResponse:
    """Return the page of an error: what, why, and a way back."""
    status, title = next((code, text) for kind, code, text in REFUSALS if isinstance(error, kind))
    messages = [each.message for each in error.errors] if isinstance(error, InvalidInputError) else [str(error)]
    return show(request, member, "web/refused.html", status=status, heading=title, reasons=messages)


def show(
    request: HttpRequest,
    member: Membership | None,
    template: str,
    *,
    here: str = "",
    status: int = 200,
    **context: Any,
) -> HttpResponse:
    """Render a page at once, inside the scope; ``here`` is the key of the page that the navigation marks."""
    complete = {
        "member": member,
        "workshop": member and member.workshop,
        "can_write": member is not None and member.role != Role.OBSERVER,
        "is_owner": member is not None and member.role == Role.OWNER,
        "pages": PAGES,
        "here": here,
        **context,
    }
    return render(request, template, complete, status=status)
