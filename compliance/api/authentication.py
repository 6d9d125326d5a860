"""Who asks: a member of one workshop, by a token. No cookie counts here, so nobody can be tricked into a request."""

from django.utils.translation import gettext as _
from rest_framework.authentication import BaseAuthentication
from rest_framework.exceptions import AuthenticationFailed
from rest_framework.request import Request

from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership, User
from chemicals.workshop.selectors import get_membership_by_token

SCHEME = "Bearer"


class TokenAuthentication(BaseAuthentication):
    """Reads ``Authorization: Bearer glt_...``; the user is the member's, ``request.auth`` the membership itself."""

    def authenticate(self, request: Request) -> tuple[User, Membership] | None:
        """Return the person and the membership; None without the header, AuthenticationFailed if it says nothing."""
        header = request.headers.get("Authorization", "")
        if not header:
            return None
        scheme, _space, key = header.partition(" ")
        if scheme.lower() != SCHEME.lower() or not key.strip():
            raise AuthenticationFailed(_("Write the header as: Authorization: Bearer, a space, and your token."))
        try:
            member = get_membership_by_token(key.strip())
        except NotFoundError as error:
            raise AuthenticationFailed(
                _("This token is unknown or revoked. Create a new one on the page Workshop.")
            ) from error
        return member.user, member

    def authenticate_header(self, request: Request) -> str:
        """Return what a 401 says in WWW-Authenticate."""
        return SCHEME
