"""A fresh workshop: every page says what to do first, every form what is missing, and no file is offered of nothing."""

import pytest

from tests.web.conftest import Line, Visitor, text_of

FIRST = {
    "today": "Where to begin",
    "register": "Begin with what stands on the shelf",
    "substances": "Add those that a composition names",
    "tanks": "Set up a bath first",
    "entries": "Set up a tank or a product, then record what it holds.",
    "balance": "Record what the vessels hold, or a receipt.",
    "waste": "Add a stream first",
    "drop-offs": "Add a receiver, weigh and close a waste container",
    "workshop": "the chain begins with the first entry",
}
FORMS = {
    "run": "Add a bath, a rack type and a route",
    "drum-off": "Put one up on the page Waste first.",
    "make-up": "Set one up on the page Tanks first.",
    "receipt": "Set one up on the page of its product first.",
    "acceptance": "Enter one on the page of its tank first.",
    "cancellation": "there is nothing to cancel",
}


@pytest.mark.parametrize(("name", "words"), FIRST.items())
def test_an_empty_page_says_what_to_do_first(name: str, words: str, visit: Visitor) -> None:
    assert words in text_of(visit.get(name))


@pytest.mark.parametrize("name", [name for name in FIRST if name not in ("workshop", "today", "balance")])
def test_nothing_is_offered_as_a_file_of_nothing(name: str, visit: Visitor) -> None:
    assert "Download" not in text_of(visit.get(name))


@pytest.mark.parametrize(("verb", "words"), FORMS.items())
def test_a_form_with_nothing_to_choose_says_so(verb: str, words: str, visit: Visitor) -> None:
    assert words in text_of(visit.get("record", verb))


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("add-route", "No rack type yet."),
        ("add-route", "Set up a bath or a rinse first."),
        ("add-container", "No stream yet."),
        ("add-drop-off", "No receiver yet."),
        ("add-product", "No substance yet."),
    ],
)
def test_a_setting_up_that_needs_another_says_which(name: str, words: str, visit: Visitor) -> None:
    assert words in text_of(visit.get(name))


def test_the_beginning_is_over_with_the_first_entry(visit: Visitor, filled: Line) -> None:
    assert FIRST["today"] not in text_of(visit.get("today"))
    assert "No route yet" not in text_of(visit.get("record", "run"))
    assert "No entry fits." in text_of(visit.get("entries", query="?kind=paper"))
