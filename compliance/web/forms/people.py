"""Forms of people: signing in, the first start, a password, members, places, tokens."""

from typing import Any
from zoneinfo import available_timezones

from django import forms
from django.contrib.auth.forms import AuthenticationForm, SetPasswordForm
from django.utils.translation import gettext_lazy as _

from chemicals.workshop.models import MOST_SHEET_YEARS, Membership, Role
from compliance.web.forms.base import Shown, WebForm
from compliance.web.forms.fields import REQUIRED, LineField, WordField


class SignInForm(Shown, AuthenticationForm):
    """E-mail address and password."""

    error_messages = {
        "invalid_login": _("This address and this password do not go together. Write both once more."),
        "inactive": _("This person is no longer active. Ask an owner of the workshop."),
    }

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        for field in self.fields.values():
            field.error_messages["required"] = REQUIRED


class NewPasswordForm(Shown, SetPasswordForm):  # type: ignore[type-arg]  # generic in its stubs only
    """A new password, twice."""


class PasswordField(forms.CharField):
    """A new password."""

    def __init__(self, **kwargs: Any) -> None:
        widget = forms.PasswordInput(attrs={"autocomplete": "new-password"})
        super().__init__(strip=False, widget=widget, error_messages={"required": REQUIRED}, **kwargs)


class ZoneField(forms.ChoiceField):
    """A time zone by its name."""

    def __init__(self, **kwargs: Any) -> None:
        names = sorted(name for name in available_timezones() if "/" in name or name == "UTC")
        super().__init__(choices=[(name, name) for name in names], label=_("Time zone"), **kwargs)


class FirstStartForm(WebForm):
    """The first workshop and its first owner."""

    token = forms.CharField(widget=forms.HiddenInput, max_length=80)
    workshop_name = LineField(label=_("Name of the workshop"), max_length=120)
    time_zone = ZoneField(initial="Europe/Berlin", help_text=_("Its days begin and end by this clock."))
    name = LineField(label=_("Your name"), max_length=120)
    email = LineField(label=_("Your e-mail address"), help_text=_("You sign in with it; nothing is sent to it."))
    password = PasswordField(label=_("Password"), help_text=_("At least 8 characters, and no common one."))


class WorkshopForm(WebForm):
    """What papers print of the workshop."""

    name = LineField(label=_("Name"), max_length=120)
    address = LineField(label=_("Address"), required=False, lines=3, help_text=_("Printed on labels and manifests."))
    telephone = LineField(
        label=_("Telephone"), required=False, max_length=60, help_text=_("Answered in an emergency; printed on labels.")
    )
    time_zone = ZoneField(help_text=_("Days begin and end by this clock. What was recorded keeps its moment."))
    sheet_years = forms.IntegerField(
        label=_("Years until a safety data sheet is marked as old"),
        min_value=1,
        max_value=MOST_SHEET_YEARS,
        help_text=_("Your own figure. Nothing is refused by it."),
        error_messages={"required": REQUIRED, "invalid": _("Write a whole number.")},
    )


class InviteForm(WebForm):
    """A person and a role."""

    name = LineField(label=_("Name"), max_length=120)
    email = LineField(label=_("E-mail address"), help_text=_("The person signs in with it; nothing is sent to it."))
    role = WordField(Role.choices, label=_("Role"), help_text=_("An owner may do everything, an observer only reads."))


class MemberForm(WebForm):
    """A member's role, and whether the membership goes on."""

    role = WordField(Role.choices, label=_("Role"))
    active = forms.BooleanField(
        label=_("Belongs to the workshop"),
        required=False,
        help_text=_("Without this, the person no longer gets in. What was recorded stays under the name."),
    )

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(data, initial={"role": member.role, "active": member.active})


class PlaceForm(WebForm):
    """A room, cupboard, shelf or bench."""

    name = LineField(label=_("Name"), max_length=80, help_text=_("A room, cupboard, shelf or bench."))
    bund = LineField(
        label=_("Shared bund"), required=False, max_length=80, help_text=_("The tray or bund that holds its leaks.")
    )
    exhaust_duct = LineField(label=_("Shared exhaust duct"), required=False, max_length=80)


class TokenForm(WebForm):
    """A key for a program."""

    name = LineField(label=_("Name"), max_length=80, help_text=_("The program that will use it."))
