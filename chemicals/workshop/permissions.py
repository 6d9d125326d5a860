"""Who may do what. Each function raises NotPermittedError, never returns False."""

from chemicals.workshop.errors import NotPermittedError
from chemicals.workshop.models import Membership, Role, Workshop


def require_writer(member: Membership) -> None:
    """Refuse observers and people whose membership has ended."""
    if not member.active or not member.user.is_active or member.role == Role.OBSERVER:
        raise NotPermittedError("Observers only read. Ask an owner of the workshop to record this.")


def require_owner(member: Membership) -> None:
    """Refuse everybody but owners."""
    require_writer(member)
    if member.role != Role.OWNER:
        raise NotPermittedError("Only an owner may do this. Ask an owner of the workshop.")


def require_same_workshop(member: Membership, *things: object) -> None:
    """Compare workshops before a write: the lock behind the scope."""
    for thing in things:
        workshop_id = thing.pk if isinstance(thing, Workshop) else getattr(thing, "workshop_id")  # noqa: B009
        if workshop_id != member.workshop_id:
            raise NotPermittedError("This belongs to another workshop.")
