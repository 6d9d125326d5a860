"""Short codes for vessels: typed with gloves on, read aloud, scanned."""

import secrets

ALPHABET = "23456789ABCDEFGHJKMNPQRSTUVWXYZ"
"""No 0, 1, I, L, O: they are mistaken for each other. 31 characters, 31**6 = 887 million codes."""
LENGTH = 6


def make_code() -> str:
    """Return a random code."""
    return "".join(secrets.choice(ALPHABET) for _ in range(LENGTH))


def tidy_code(text: str) -> str:
    """Return a typed code without spaces and hyphens, in capitals."""
    return "".join(character for character in text.upper() if character.isalnum())
