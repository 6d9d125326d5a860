"""What errors of typed text have in common: a code with figures for other languages, and the sentence in English."""

from collections.abc import Mapping
from typing import ClassVar


class TextError(ValueError):
    """Typed text cannot be read. ``code`` and ``params`` name the reason, ``message`` says it in English."""

    messages: ClassVar[Mapping[str, str]]

    def __init__(self, code: str, **params: str) -> None:
        self.code = code
        self.params = params
        self.message = self.messages[code] % params
        super().__init__(self.message)
