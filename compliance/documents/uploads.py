"""Files that people add: safety data sheets, photographs, laboratory reports. Kept by their SHA-256."""

from datetime import datetime

from chemicals.books.canonical import CanonicalError
from chemicals.journal import files
from chemicals.journal.models import Attachment
from chemicals.journal.selectors import get_attachment_for
from chemicals.journal.services import add_attachment
from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer

LARGEST_FILE = 20 * 1024 * 1024
"""Bytes of the largest file that is kept."""


def add_file(*, actor: Membership, now: datetime, name: str, data: bytes) -> Attachment:
    """Keep a PDF, PNG or JPEG file (told by its content) for the actor's workshop; the same bytes are kept once."""
    require_writer(actor)
    if not data:
        raise InvalidInputError.of("file", "This file is empty. Choose another one.")
    if len(data) > LARGEST_FILE:
        raise InvalidInputError.of("file", "This file is larger than 20 MB. Make it smaller, or leave pages out.")
    try:
        return add_attachment(actor=actor, now=now, name=name, data=data)
    except CanonicalError as error:
        raise InvalidInputError.of("file", f"The name of the file cannot be kept: {error}") from error


def read_file(member: Membership, sha256: str) -> tuple[Attachment, bytes]:
    """Return a file of the member's workshop with its bytes; DamagedFileError if they are missing or were changed."""
    attachment = get_attachment_for(member, sha256)
    return attachment, files.read(attachment.sha256)
