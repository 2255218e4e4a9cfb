"""The index of a library: order, verdicts, links that lead somewhere, hostile text, both formats."""

from __future__ import annotations

import re
from functools import cache
from urllib.parse import unquote

import pytest
from builders import two_stages
from hostile import SCRIPT
from markdown_it import MarkdownIt
from pages import hostile_index, index_text, page

from pathcalc.errors import Finding, InvalidCaseError, NoSolutionError, Trouble, UsageError
from pathcalc.report import index
from pathcalc.report.view import build


def entry(case_id: str, **changes: object) -> index.Entry:
    made = two_stages()
    made.result["case"]["id"] = case_id
    made.result["warnings"] = []
    for key, value in changes.items():
        made.result[key] = value
    return index.solved(build(made), made.to_dict(), made.case.record, [("html", f"{case_id}.html")])


@cache
def several() -> tuple[index.Entry, ...]:
    base = two_stages().result
    missed = [{**base["limits"][0], "passed": False, "margin": -1.0}, *base["limits"][1:]]
    failed = [{**base["checks"][0], "passed": False}, *base["checks"][1:]]
    return (
        entry("b/met"),
        entry("a/met"),
        entry("no-limits", limits=[]),
        entry("warned", warnings=[{"code": "c", "at": "start", "text": "t"}]),
        entry("missed", limits=missed),
        entry("failed", checks=failed, limits=missed),
        index.unsolved("invalid", InvalidCaseError([Finding("/x/invalid.yaml", 2, 3, "wrong", "code")])),
        index.unsolved("unsolved", NoSolutionError(Trouble("code", "leg", "why", "remedy"))),
        index.unsolved("unread", UsageError("/somewhere/file cannot be read")),
        index.unsolved("internal", ValueError("/somewhere")),
    )


def test_what_needs_a_look_comes_first_whatever_the_order() -> None:
    entries = several()
    found = index.index(entries)
    assert [e.id for e in found.entries] == [
        "internal", "unsolved", "invalid", "unread", "failed", "missed", "warned", "a/met", "b/met", "no-limits",
    ]  # fmt: skip
    assert index.index(reversed(entries)) == found
    assert [e.id for e in found.entries if e.alarming] == [e.id for e in found.entries][:6]
    assert found.outcomes[0].tone == "bad"
    assert found.outcomes[0].text == (
        "6 of 10 cases need a look: internal, unsolved, invalid, unread, failed and 1 more."
    )
    assert "2 limits met" in found.outcomes[1].text
    calm = index.index([e for e in entries if not e.alarming])
    assert calm.outcomes[0].tone == "good"


def test_row_says_what_the_report_says() -> None:
    found = {e.id: e for e in index.index(several()).entries}
    texts = [o.text for o in found["a/met"].outcomes]
    assert texts[0].startswith("2 of 2 met. Tightest: ")
    assert "margin" in texts[0]
    assert texts[1] == "4 of 4 of the program’s own checks passed."
    assert texts[2] == "none"
    assert found["warned"].outcomes[2].text == "1"
    assert "1 of 2 missed" in found["missed"].outcomes[0].text
    assert found["invalid"].messages == ("invalid.yaml:2:3: wrong (code)",)
    assert found["unsolved"].messages == ("leg: why; remedy (code)",)
    assert not any("/somewhere" in m for e in found.values() for m in e.messages)


def test_long_list_of_findings_is_cut() -> None:
    many = index.unsolved("x", InvalidCaseError([Finding("x.yaml", n, 1, "wrong", "code") for n in range(1, 9)]))
    assert len(many.messages) == 6
    assert many.messages[-1] == "and 3 more"


def test_links_are_encoded_in_both_formats() -> None:
    html, text = page("index"), index_text()
    name = "a b/c#d?e_f(g)"
    hrefs = re.findall(r'<a href="([^"#][^"]*)"', html)
    assert {unquote(h) for h in hrefs} == {f"{name}.html", f"{name}.md"}
    assert not any(c in h for h in hrefs for c in " #?()")
    links = [c.attrs["href"] for t in MarkdownIt("commonmark").enable("table").parse(text)
             for c in (t.children or []) if c.type == "link_open"]  # fmt: skip
    assert {unquote(str(h)) for h in links} == {f"{name}.html", f"{name}.md"}


def test_hostile_text_stays_text() -> None:
    html, text = page("index"), index_text()
    assert SCRIPT not in html
    assert 'onerror="' not in html
    assert html.count("</style>") == 1
    tokens = MarkdownIt("commonmark", {"html": True}).enable(["table", "strikethrough"]).parse(text)
    inline = {c.content for t in tokens for c in (t.children or []) if c.type == "html_inline"}
    assert inline <= {"<br>"}
    assert "html_block" not in {t.type for t in tokens}
    assert "image" not in {c.type for t in tokens for c in (t.children or [])}
    for shown in (html, text):
        assert "\u202e" not in shown
        assert not any(ord(c) < 32 and c not in "\n\t" for c in shown)
        assert "/home/somebody" not in shown
        assert "/somewhere" not in shown


def test_markdown_shows_every_row() -> None:
    tokens = MarkdownIt("commonmark").enable("table").parse(index_text())
    assert sum(t.type == "table_open" for t in tokens) == 1
    assert sum(t.type == "tr_open" for t in tokens) == len(hostile_index().entries) + 1
    assert sum(t.type == "td_open" for t in tokens) == len(hostile_index().entries) * 6


@pytest.mark.parametrize(
    ("formats", "names"),
    [
        (("html", "md"), ["i.html", "i.md"]),
        (("pdf",), ["i.html"]),
        (("md",), ["i.md"]),
    ],
)
def test_files_of_the_index(formats: tuple[str, ...], names: list[str]) -> None:
    assert sorted(index.render(hostile_index(), formats, "i")) == names
