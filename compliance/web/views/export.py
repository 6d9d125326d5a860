"""The books as files: a plain list of what can be had."""

from django.http import Http404, HttpRequest, HttpResponseBase
from django.utils import timezone
from django.utils.translation import gettext_lazy as _

from chemicals.journal.selectors import get_head
from chemicals.ledger.selectors import get_recomputed_to
from chemicals.workshop.models import Membership
from compliance.documents.books import BOOKS
from compliance.documents.export import FORMATS, send
from compliance.documents.words import grouped
from compliance.web.door import page, show
from compliance.web.forms.entries import EntriesForm

WORDS = {
    "journal": (
        _("Journal"),
        _("Every entry with all that it says, and the hashes that prove it."),
        _("As JSON lines it comes with the bytes themselves: whoever has the file can work out the whole chain again."),
    ),
    "postings": (
        _("Movements"),
        _("What followed from the entries: what came to and went from each vessel or boundary, with its uncertainty."),
        _("Of a vessel or a substance that is chosen only its own."),
    ),
    "balances": (
        _("What vessels hold"),
        _("What each vessel held of each metal or substance at the end of the last day, now if no day is chosen."),
        _("Of the choices only vessel, substance and last day count. Unknown is left empty, and said so."),
    ),
}
"""What each of the books is called, what it holds, and what else is to be known of it."""


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List the books that can be had as files, limited by what is looked for; or send one."""
    form = EntriesForm(member, request.GET)
    ending, name = request.GET.get("as", ""), request.GET.get("list", "journal")
    if form.is_valid() and ending in FORMATS:
        if name not in BOOKS:
            raise Http404("no such list")
        now = timezone.now()
        return send(BOOKS[name](member, form.search, now), ending, about=timezone.localdate(now).isoformat())
    sequence, head = get_head(member.workshop)
    return show(
        request,
        member,
        "web/export.html",
        here="entries",
        status=200 if form.is_valid() else 400,
        form=form,
        kept=form.kept,
        books=[(name, *words) for name, words in WORDS.items()],
        sequence=sequence,
        head=grouped(head),
        recomputing=get_recomputed_to(member.workshop),
    )
