"""Numbers that name a substance or a cargo, and what a mistyped digit breaks.

CAS registry number: the last digit is the sum of the others, weighted 1, 2, 3 ... from the right, modulo 10 (CAS,
"Check digit verification of CAS registry numbers"). EC number: the last digit is the sum of the others, weighted 1, 2,
3 ... from the left, modulo 11 (EINECS, OJ C 146 A, 1990); with a remainder of 10 only numbers of ELINCS, which begin
with 4, were given, and end in 1 (Wikipedia, European Community number). UN numbers have four digits and none to check
(UN Model Regulations, chapter 3.2); classes and divisions: chapter 2.0.
"""

import re
import unicodedata
from typing import Final

from chemicals.science.errors import TextError

_CAS: Final = re.compile(r"([0-9]{2,7})-([0-9]{2})-([0-9])")
_EC: Final = re.compile(r"([0-9]{3})-([0-9]{3})-([0-9])")
_UN: Final = re.compile(r"(?:UN|ID)?\s*([0-9]{4})", re.IGNORECASE)
_DIVISION: Final = re.compile(r"1\.[1-6][A-HJ-LNS]?|2(?:\.[1-3])?|3|4\.[1-3]|5\.[12]|6\.[12]|7|8|9")
_BETWEEN_DIVISIONS: Final = re.compile(r"[\s(),;+/]+")
PACKING_GROUPS: Final = ("I", "II", "III")

MESSAGES: Final = {
    "cas_form": "A CAS number looks like 7758-99-8.",
    "cas_digit": "The check digit of %(typed)s does not fit: read it again.",
    "ec_form": "An EC number looks like 231-847-6.",
    "ec_digit": "The check digit of %(typed)s does not fit: read it again.",
    "un_form": "A UN number has four digits: write it like UN 1830.",
    "class_form": '"%(found)s" is no class or division of dangerous goods: write for example 8, 6.1 or 8 (6.1).',
}


class IdentityError(TextError):
    """The text is no such number."""

    messages = MESSAGES


def read_cas_number(text: str) -> str:
    """Return a CAS number with plain hyphens, 7758-99-8. Raises IdentityError, also for a wrong check digit."""
    typed = _tidy(text)
    found = _CAS.fullmatch(typed)
    if found is None:
        raise IdentityError("cas_form")
    digits = (found[1] + found[2])[::-1]
    if _weigh(digits) % 10 != int(found[3]):
        raise IdentityError("cas_digit", typed=typed)
    return typed


def read_ec_number(text: str) -> str:
    """Return an EC number with plain hyphens, 231-847-6. Raises IdentityError, also for a wrong check digit."""
    typed = _tidy(text)
    found = _EC.fullmatch(typed)
    if found is None:
        raise IdentityError("ec_form")
    rest = _weigh(found[1] + found[2]) % 11
    if int(found[3]) != (1 if rest == 10 and typed.startswith("4") else rest):
        raise IdentityError("ec_digit", typed=typed)
    return typed


def read_un_number(text: str) -> str:
    """Return the four digits of a UN number. Raises IdentityError."""
    found = _UN.fullmatch(_tidy(text))
    if found is None:
        raise IdentityError("un_form")
    return found[1]


def read_divisions(text: str) -> tuple[str, ...]:
    """Return class and subsidiary classes of dangerous goods: "8 (6.1)" is 8 and 6.1. Raises IdentityError."""
    parts = [part for part in _BETWEEN_DIVISIONS.split(_tidy(text)) if part]
    wrong = next((part for part in parts if not _DIVISION.fullmatch(part)), None)
    if wrong is not None or not parts:
        raise IdentityError("class_form", found=wrong or text)
    return tuple(parts)


def _tidy(text: str) -> str:
    """One form of what looks alike: kinds of hyphens and spaces, full-width digits."""
    return re.sub("[‐‑‒–—−]", "-", " ".join(unicodedata.normalize("NFKC", text).split()))


def _weigh(digits: str) -> int:
    return sum(weight * int(digit) for weight, digit in enumerate(digits, 1))
