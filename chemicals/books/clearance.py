"""The recorded answer to "may this be done?", as the journal keeps it."""

from dataclasses import dataclass


@dataclass(frozen=True)
class Clearance:
    """verdict is one of VERDICTS; reasons are sentences as shown to the person who recorded."""

    verdict: str
    reasons: tuple[str, ...] = ()


ALLOWED = "allowed"
OVERRIDDEN = "overridden"
INCIDENT = "incident"
NOT_ASKED = "not asked"
VERDICTS = (ALLOWED, OVERRIDDEN, INCIDENT, NOT_ASKED)


def not_asked(reason: str) -> Clearance:
    """Return the clearance of records that nobody was asked about: imports, papers, the demo."""
    return Clearance(NOT_ASKED, (reason,))
