"""How pages say what the books know: amounts, ends of a movement, kinds, sentences. Unknown is a word, never 0."""

from compliance.web.words.amounts import (
    UNKNOWN,
    amount,
    component_name,
    in_one_unit,
    signed,
    with_uncertainty,
)
from compliance.web.words.ends import BOUNDARIES, Ends, end_name
from compliance.web.words.kinds import BASES, KINDS, VERDICTS, verb_of
from compliance.web.words.moments import moment
from compliance.web.words.sentences import Follows, finding, findings, movement, went

__all__ = [
    "BASES",
    "BOUNDARIES",
    "KINDS",
    "UNKNOWN",
    "VERDICTS",
    "Ends",
    "Follows",
    "amount",
    "component_name",
    "end_name",
    "finding",
    "findings",
    "in_one_unit",
    "moment",
    "movement",
    "signed",
    "verb_of",
    "went",
    "with_uncertainty",
]
