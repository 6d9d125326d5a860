"""Signing in and out, the first start, setting a password, choosing a workshop, scanning a code."""

from typing import Any
from urllib.parse import urlencode

from django.contrib import messages
from django.contrib.auth import login
from django.contrib.auth.views import LoginView, LogoutView, PasswordResetConfirmView
from django.http import Http404, HttpRequest, HttpResponse, HttpResponseBase, HttpResponseRedirect
from django.urls import reverse, reverse_lazy
from django.utils import timezone
from django.utils.translation import gettext as _
from django.views.decorators.cache import never_cache
from django.views.decorators.http import require_http_methods

from chemicals.ledger.codes import tidy_code
from chemicals.ledger.selectors import find_workshop_of_code, get_vessel_by_code_for
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.links import link_tokens
from chemicals.workshop.models import User
from chemicals.workshop.selectors import get_membership_for, list_memberships_of
from compliance.ops.first_start import FirstStartOverError, complete_first_start, token_is_valid
from compliance.web.door import refuse, show, signed_in
from compliance.web.forms.people import FirstStartForm, NewPasswordForm, SignInForm
from compliance.web.views.acts import fill_in, sent


class SignIn(LoginView):
    """The sign-in page."""

    template_name = "web/sign-in.html"
    authentication_form = SignInForm
    redirect_authenticated_user = True


class SignOut(LogoutView):
    """Signing out."""


class SetPassword(PasswordResetConfirmView):
    """The page behind a link that an owner handed over."""

    template_name = "web/set-password.html"
    form_class = NewPasswordForm
    token_generator = link_tokens
    success_url = reverse_lazy("sign-in")
    post_reset_login = False

    def form_valid(self, form: Any) -> HttpResponse:
        messages.success(self.request, _("The password is set. Sign in with it."))
        return super().form_valid(form)


def locked_out(request: HttpRequest, *_args: Any, **_kwargs: Any) -> HttpResponse:
    """Say that the door is shut after too many wrong passwords."""
    text = _("Too many wrong passwords. Wait a quarter of an hour, or ask an owner for a link to set a new one.")
    return show(request, None, "web/refused.html", status=429, heading=_("Wait a little"), reasons=[text])


@never_cache
@require_http_methods(["GET", "HEAD", "POST"])
def first_start(request: HttpRequest) -> HttpResponse:
    """Create the first owner and workshop; the address with its token stands in the terminal."""
    form = FirstStartForm(sent(request), initial={"token": request.GET.get("token", "")})
    token = request.POST.get("token", "") or request.GET.get("token", "")
    if not token_is_valid(token):
        return refuse(request, None, FirstStartOverError(_("This address is used up. See the terminal, or sign in.")))

    def act(form: FirstStartForm) -> str:
        member = complete_first_start(now=timezone.now(), **form.cleaned_data)
        login(request, member.user, backend="django.contrib.auth.backends.ModelBackend")
        return reverse("today", args=[member.workshop.uuid])

    intro = _("You read the terminal, so you become the first owner.")
    try:
        return fill_in(request, None, form, act, heading=_("First start"), intro=intro, button=_("Create the workshop"))
    except FirstStartOverError as error:
        return refuse(request, None, error)


@signed_in()
def home(request: HttpRequest) -> HttpResponse:
    """Go to the only workshop, or choose one."""
    assert isinstance(request.user, User)  # noqa: S101  (the door lets nobody else in)
    memberships = list(list_memberships_of(request.user))
    if len(memberships) == 1:
        return HttpResponseRedirect(reverse("today", args=[memberships[0].workshop.uuid]))
    return show(request, None, "web/home.html", memberships=memberships)


@signed_in()
def scan(request: HttpRequest, code: str) -> HttpResponseBase:
    """Open the page of the vessel whose code was scanned or typed; a stranger gets 404."""
    assert isinstance(request.user, User)  # noqa: S101  (the door lets nobody else in)
    workshop = find_workshop_of_code(code)
    if workshop is None:
        raise Http404("no such code")
    try:
        member = get_membership_for(request.user, workshop.uuid)
        vessel = get_vessel_by_code_for(member, code)
    except NotFoundError as error:
        raise Http404(str(error)) from error
    return HttpResponseRedirect(reverse("vessel", args=[workshop.uuid, vessel.uuid]))


@signed_in()
def find_code(request: HttpRequest) -> HttpResponse:
    """Open the page of a typed or scanned code; look in the register for whatever is none here."""
    assert isinstance(request.user, User)  # noqa: S101  (the door lets nobody else in)
    typed = request.GET.get("code", "").strip()
    code = tidy_code(typed.rpartition("/")[2])
    owner = find_workshop_of_code(code)
    mine = [member.workshop for member in list_memberships_of(request.user)]
    if owner in mine or not typed:
        return HttpResponseRedirect(reverse("scan", args=[code or "-"]))
    here = [row for row in mine if str(row.uuid) == request.GET.get("workshop")] or mine
    if not here:
        return HttpResponseRedirect(reverse("scan", args=[code or "-"]))
    return HttpResponseRedirect(f"{reverse('register', args=[here[0].uuid])}?{urlencode({'q': typed})}")
