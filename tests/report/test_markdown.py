"""The Markdown report as a git host would read it."""

from __future__ import annotations

from xml.etree import ElementTree

from builders import throttled, two_stages
from hostile import hostile
from markdown_it import MarkdownIt

from pathcalc.report import render_html, render_markdown
from pathcalc.report.textsafe import inline_code, markdown
from pathcalc.report.view import Symbols, Table, build


def reader() -> MarkdownIt:
    return MarkdownIt("commonmark", {"html": True}).enable("table").enable("strikethrough")


def test_every_table_is_a_table() -> None:
    for make in (two_stages, throttled, hostile):
        made = make()
        text, _ = render_markdown(made)
        tokens = reader().parse(text)
        found = sum(t.type == "table_open" for t in tokens)
        expected = [b for s in build(made).sections for b in s.blocks if isinstance(b, Table | Symbols)]
        assert found == len(expected) + 2  # the document's facts and the signatures
        rows = sum(t.type == "tr_open" for t in tokens)
        assert rows == sum(len(b.rows) + 1 for b in expected) + 2 + 4


def test_every_table_row_has_all_its_cells() -> None:
    text, _ = render_markdown(hostile())
    head = cells = 0
    for token in reader().parse(text):
        if token.type == "tr_open":
            cells = 0
        elif token.type in ("td_open", "th_open"):
            cells += 1
        elif token.type == "thead_close":
            head = cells
        elif token.type == "tr_close" and head:
            assert cells == head
        elif token.type == "table_close":
            head = 0


def test_figures_are_files_beside_the_text() -> None:
    text, files = render_markdown(two_stages(), "booster report")
    names = ["T-s", "exergy", "heat-work", "p-h", "p-v"]
    assert sorted(files) == [f"booster-report-{name}.svg" for name in names]
    tokens = reader().parse(text)
    images = [c for t in tokens for c in (t.children or []) if c.type == "image"]
    assert sorted(str(i.attrs["src"]) for i in images) == sorted(files)
    alts = [i.content.replace("\\", "") for i in images]
    assert sum("States: 1 start" in alt for alt in alts) == 3
    assert all(len(alt) > 60 for alt in alts)
    for data in files.values():
        root = ElementTree.fromstring(data)
        assert root.tag == "{http://www.w3.org/2000/svg}svg"
        assert root.get("role") == "img"


def test_maths_stands_between_dollars() -> None:
    text, _ = render_markdown(two_stages())
    assert "$$\nh_2 = h_1 + \\frac{h_{2s} - h_1}{\\eta_s}\n$$" in text
    assert "| $T_c$ |" in text
    assert text.count("$$") % 2 == 0


def test_hostile_text_renders_as_itself() -> None:
    text, files = render_markdown(hostile())
    md = reader()
    tokens = md.parse(text)
    kinds = {t.type for t in tokens} | {c.type for t in tokens for c in (t.children or [])}
    assert "html_block" not in kinds
    inline = {c.content for t in tokens for c in (t.children or []) if c.type == "html_inline"}
    assert inline <= {"<sub>", "</sub>"}
    assert "link_open" not in kinds
    assert md.render(text).count("<h1>") == 1
    assert not any(ord(c) < 32 and c != "\n" for c in text)
    assert "\u202e" not in text
    assert all(b"<script>" not in data for data in files.values())


def test_case_file_in_the_appendix_is_verbatim() -> None:
    made = two_stages()
    made.case.text = "a: `x`\n```\n````\n\n\n\nb: 1 | 2\n"
    tokens = reader().parse(render_markdown(made)[0])
    fences = [t.content for t in tokens if t.type == "fence"]
    assert fences[-2] == made.case.text


def test_escapes_are_undone_by_a_reader() -> None:
    for raw in (
        "a|b",
        "*x*",
        "1. item",
        "- item",
        "# head",
        "<b>",
        "[a](b)",
        "`c`",
        "$x$",
        "28.01",
        "a_b_c",
        "+ x",
        "~~x~~",
    ):
        html = MarkdownIt("commonmark").render(markdown(raw)).strip()
        import html as entities

        assert entities.unescape(html) == f"<p>{raw}</p>", raw
    assert MarkdownIt("commonmark").render(inline_code("a`b``c")).strip() == "<p><code>a`b``c</code></p>"
    assert inline_code("") == ""


def test_both_formats_carry_the_same_tables() -> None:
    made = two_stages()
    text, html = render_markdown(made)[0], render_html(made)
    for section in build(made).sections:
        for block in section.blocks:
            if isinstance(block, Table):
                assert f"**Table {block.number}.** {block.caption}" in text
                assert f"<b>Table {block.number}.</b> {block.caption}" in html
