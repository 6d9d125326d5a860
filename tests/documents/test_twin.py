"""The HTML twin: same facts, semantic, nothing inline that a strict content security policy would refuse."""

import html
import re
from collections.abc import Iterator
from html.parser import HTMLParser
from itertools import pairwise
from typing import Any

import pytest

from compliance.documents.errors import PaperDataError
from compliance.documents.render import render_html

Data = dict[str, Any]


class Page(HTMLParser):
    """Tags with attributes, headings, and everything that is read out."""

    def __init__(self, markup: str) -> None:
        super().__init__()
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.said = ""
        self.feed(markup)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))
        named = dict(attrs)
        self.said += f" {named.get('aria-label') or ''} {named.get('value') or ''} {named.get('href') or ''} "

    def handle_data(self, data: str) -> None:
        self.said += data

    def all(self, tag: str) -> list[dict[str, str | None]]:
        return [attributes for name, attributes in self.tags if name == tag]


def strings(value: object) -> Iterator[str]:
    if isinstance(value, str):
        yield from value.split("\n")
    elif isinstance(value, dict):
        for item in value.values():
            yield from strings(item)
    elif isinstance(value, list):
        for item in value:
            yield from strings(item)


@pytest.fixture(params=["waste-label", "manifest"])
def page(request: pytest.FixtureRequest, label: Data, manifest: Data) -> tuple[Data, str]:
    data = label | {"stock": "4 per A4"} if request.param == "waste-label" else manifest
    return data, render_html(request.param, data)


def test_it_says_every_string_of_the_data(page: tuple[Data, str]) -> None:
    data, markup = page
    said = " ".join(Page(markup).said.split())
    for string in strings(data):
        assert string in said, string
    assert str(data["number"]) in said
    assert str(data["chain_sequence"]) in said
    assert "unknown" in said


def test_headings_descend_without_gaps_from_one_first(page: tuple[Data, str]) -> None:
    levels = [int(tag[1]) for tag, _ in Page(page[1]).tags if re.fullmatch("h[1-6]", tag)]
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert all(below - above <= 1 for above, below in pairwise(levels))


def test_tables_have_scopes_pictograms_have_names(page: tuple[Data, str]) -> None:
    parsed = Page(page[1])
    headers = parsed.all("th")
    assert {attributes.get("scope") for attributes in headers} == {"col", "row"}
    drawings = parsed.all("svg")
    assert all(attributes.get("role") == "img" and attributes.get("aria-label") for attributes in drawings)
    assert "GHS05: corrosion" in {attributes.get("aria-label") for attributes in drawings}


def test_nothing_inline_that_a_strict_policy_refuses(page: tuple[Data, str]) -> None:
    parsed = Page(page[1])
    assert not parsed.all("style")
    assert not parsed.all("script")
    for _, attributes in parsed.tags:
        assert not [name for name in attributes if name == "style" or name.startswith("on")]
    assert [attributes["href"] for attributes in parsed.all("link")] == ["/static/documents/paper.css"]
    assert parsed.all("html") == [{"lang": "en"}]


def test_text_is_escaped(label: Data) -> None:
    label["stream"] = "<script>alert(1)</script>"
    markup = render_html("waste-label", label)
    assert "<script" not in markup
    assert html.escape(label["stream"]) in markup


def test_the_manifest_says_what_it_is_not_and_who_decides(manifest: Data) -> None:
    said = Page(render_html("manifest", manifest)).said
    assert "It is no legal consignment note" in said
    assert "Local rules and licensed practice decide" in said
    assert "gross 50.8 kg" in said


@pytest.mark.parametrize(
    ("notes", "which"),
    [((), "all 4 waste containers"), (("empty, not cleaned",), "all 4 containers")],
    ids=["waste alone", "stock on it"],
)
def test_what_must_not_be_met_is_told_of_the_load_as_it_is(manifest: Data, notes: tuple[str, ...], which: str) -> None:
    one = {**manifest["containers"][0], "must_not_meet": ["acid"]}
    load = [{**one, "code": f"CODE{number}"} for number in range(4)]
    for container, note in zip(load, notes, strict=False):
        container["note"] = note
    page = render_html("manifest", {**manifest, "containers": load})
    assert f"<td>{which}</td>" in page
    assert '<th scope="col">Containers</th>' in page


def test_a_link_leads_to_the_issued_bytes_if_given(manifest: Data) -> None:
    assert "The paper as issued" not in render_html("manifest", manifest)
    links = Page(render_html("manifest", manifest, pdf_url="/papers/1.pdf")).all("a")
    assert {"href": "/papers/1.pdf"} in links


def test_missing_facts_are_said_to_be_missing(label: Data) -> None:
    label |= {"contents": [], "must_not_meet": [], "first_drop": None}
    label["hazards"] = {"signal_word": "", "pictograms": [], "statements": []}
    said = Page(render_html("waste-label", label)).said
    for sentence in ("hazards not entered", "ask before handling", "Contents unknown", "nothing named", "not yet"):
        assert sentence in said


def test_data_of_another_shape_is_refused(label: Data) -> None:
    with pytest.raises(PaperDataError, match="receiver: is missing"):
        render_html("manifest", label)
