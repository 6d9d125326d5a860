"""The page Export: a plain list of what can be had, limited by what is looked for."""

import hashlib
import json
import re
from html import unescape
from typing import Any

import pytest

from chemicals.journal.selectors import get_head
from compliance.documents.books import BOOKS
from tests.web.conftest import Line, Visitor, text_of


def links_of(page: Any) -> list[str]:
    """Return the links to files."""
    found = [unescape(link) for link in re.findall(r'href="([^"]*)" download', page.content.decode())]
    assert found
    return found


def test_it_lists_each_of_the_books_in_every_format(visit: Visitor, filled: Line) -> None:
    links = links_of(visit.get("export"))
    assert links == [f"?list={book}&as={ending}" for book in BOOKS for ending in ("csv", "xlsx", "jsonl")]
    for link in links:
        response = visit.get("export", query=link)
        assert response.status_code == 200
        name = response.headers["Content-Disposition"]
        assert re.fullmatch(r'attachment; filename="(journal|postings|balances)-2026-03-02\.(csv|xlsx|jsonl)"', name)
        assert response.headers["X-Content-Type-Options"] == "nosniff"
        assert "no-cache" in response.headers["Cache-Control"]
        assert len(response.getvalue()) > 500


def test_it_says_what_the_files_will_say(visit: Visitor, filled: Line) -> None:
    page = text_of(visit.get("export"))
    sequence, head = get_head(visit.member.workshop)
    assert f"entry {sequence}" in page
    assert head[:4] in page
    assert "all of them" in page
    assert "the bytes themselves" in page


def test_the_files_hold_what_is_chosen(visit: Visitor, filled: Line) -> None:
    page = visit.get("export", query=f"?kind=drum+off&vessel={filled.bath.uuid}&text=")
    assert "The files hold what is chosen above." in text_of(page)
    for link in links_of(page):
        assert link.startswith(f"?kind=drum+off&vessel={filled.bath.uuid}&list=")
    about, entry = visit.get("export", query=links_of(page)[2]).getvalue().splitlines()
    assert json.loads(about)["about"]["only"] == f"kind drum off, vessel {filled.bath.uuid}"
    assert json.loads(entry)["body"]["kind"] == "drum off"


def test_the_last_line_of_the_journal_is_the_head_of_the_chain(visit: Visitor, filled: Line) -> None:
    lines = visit.get("export", query="?list=journal&as=jsonl").getvalue().split(b"\n")
    last = json.loads(lines[-2])
    raw = lines[-2].removeprefix(b'{"body":').partition(b',"previous_hash":')[0]
    digest = hashlib.sha256(b"\x01" + bytes.fromhex(last["previous_hash"]) + raw).hexdigest()
    assert (last["body"]["sequence"], digest) == get_head(visit.member.workshop)


def test_entries_and_balance_lead_there(visit: Visitor, filled: Line) -> None:
    for name in ("entries", "balance"):
        assert f'href="{visit.address("export")}"' in visit.get(name).content.decode()


def test_it_opens_before_anything_is_recorded(visit: Visitor, line: Line) -> None:
    page = text_of(visit.get("export"))
    assert "nothing is recorded yet" in page
    lines = visit.get("export", query="?list=postings&as=jsonl").getvalue().splitlines()
    assert json.loads(lines[0])["about"]["chain head"] == 0
    assert lines[1:] == []


@pytest.mark.parametrize("query", ["?since=never", "?since=never&list=journal&as=csv"])
def test_what_cannot_be_read_is_said_and_offers_no_file(query: str, visit: Visitor, filled: Line) -> None:
    page = visit.get("export", query=query)
    assert page.status_code == 400
    assert "Write the date like 2026-03-02." in text_of(page)
    assert "download" not in page.content.decode()


def test_there_is_no_other_book(visit: Visitor, filled: Line) -> None:
    assert visit.get("export", query="?list=secrets&as=csv").status_code == 404
    assert visit.get("export", query="?list=secrets").status_code == 200


def test_the_page_takes_the_same_queries_however_much_there_is(
    visit: Visitor, line: Line, filled: Line, django_assert_num_queries: Any
) -> None:
    visit.get("export")
    with django_assert_num_queries(8):
        visit.get("export")
