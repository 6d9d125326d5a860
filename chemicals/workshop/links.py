"""Links with which a person sets a password, handed over by an owner: there is no mail."""

from django.contrib.auth.tokens import PasswordResetTokenGenerator
from django.utils.encoding import force_bytes
from django.utils.http import urlsafe_base64_encode

from chemicals.workshop.errors import NotPermittedError
from chemicals.workshop.models import Membership, User
from chemicals.workshop.permissions import require_owner


class LinkTokens(PasswordResetTokenGenerator):
    """A token ends with the first sign-in, the first new password, or a membership in one more workshop."""

    def _make_hash_value(self, user: User, timestamp: int) -> str:
        workshops = Membership.objects.filter(user_id=user.pk).order_by("pk").values_list("pk", "active")
        return f"{super()._make_hash_value(user, timestamp)}{list(workshops)}"


link_tokens = LinkTokens()


def may_hand_over(actor: Membership, user: User) -> bool:
    """Say whether the actor's workshop is the only one that this person belongs to: else its owner could enter both."""
    return not user.memberships.filter(active=True).exclude(workshop=actor.workshop).exists()


def make_password_link(*, actor: Membership, member: Membership) -> tuple[str, str]:
    """Return the two parts of the address with which a person of the actor's workshop sets a password."""
    require_owner(actor)
    if member.workshop_id != actor.workshop_id or not member.active:
        raise NotPermittedError("This person is not in your workshop.")
    if not may_hand_over(actor, member.user):
        raise NotPermittedError("This person belongs to another workshop as well and signs in with the same password.")
    return urlsafe_base64_encode(force_bytes(member.user.pk)), link_tokens.make_token(member.user)
