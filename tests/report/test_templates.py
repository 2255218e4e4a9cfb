"""A company's own templates: block by block, in a sandbox, with mistakes told by file and line."""

from __future__ import annotations

import base64
import inspect
import re
import shutil
from pathlib import Path

import pytest
from builders import two_stages
from hostile import SCRIPT, hostile
from markdown_it import MarkdownIt
from pages import COMPANY, ROOT, hostile_index

from pathcalc.errors import UsageError
from pathcalc.report import html, logo, markdown, render_html, render_markdown, view, write_reports
from pathcalc.report.company import BLOCKS, PAGES, Company

PNG = base64.b64decode(
    "iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR4nGNgYGD4DwABBAEAX+XDSwAAAABJRU5ErkJggg=="
)


def folder(tmp_path: Path, **files: str | bytes) -> Path:
    place = tmp_path / "house"
    place.mkdir()
    for name, content in files.items():
        path = place / name.replace("__", ".")
        path.write_bytes(content if isinstance(content, bytes) else content.encode())
    return place


def test_example_overrides_what_it_names_and_nothing_else() -> None:
    plain, own = render_html(two_stages()), render_html(two_stages(), COMPANY)
    assert '<p class="house">Vellisey gas works, process group</p>' in own
    assert ".house-notice {" in own.split("</style>")[0]
    assert own.count('class="house-notice"') == plain.count('class="notice')
    assert own.count('<div class="house-table">') > 8
    assert "Site rules" in own
    assert own.count("<h1>") == 1
    assert re.search(r'<img class="logo" alt="Vellisey gas works" src="data:image/svg\+xml;base64,[\w+/=]+">', own)
    for key in ("purpose", "basis", "fluid", "method", "checks", "worked", "appendix"):
        section = rf'<section id="{key}".*?<h2>'
        assert re.findall(section, own, re.S) == re.findall(section, plain, re.S)
    text, plain_text = render_markdown(two_stages(), template=COMPANY)[0], render_markdown(two_stages())[0]
    assert text.startswith("Vellisey gas works, process group\n\n# ")
    assert text.endswith("*internal*.\n")
    assert [line for line in text.splitlines() if line][1:-1] == [line for line in plain_text.splitlines() if line]


def test_the_index_wears_the_same_coat() -> None:
    page = html.render_index(hostile_index(), Company.load(COMPANY))
    assert '<p class="house">' in page
    assert "<footer>" in page
    assert "Site rules" not in page


def test_same_bytes_with_a_template() -> None:
    assert render_html(hostile(), COMPANY) == render_html(hostile(), COMPANY)


def test_values_are_escaped_in_a_company_s_templates(tmp_path: Path) -> None:
    place = folder(
        tmp_path,
        base__html__j2='{% extends "pathcalc/base.html.j2" %}{% block footer %}<p>{{ doc.title }}</p>'
        "{{ drawing(doc.title) }}{% set x %}{{ doc.title }}{% endset %}{{ x }}{% endblock %}",
        markdown__md__j2='{% extends "pathcalc/markdown.md.j2" %}{% block footer %}\n'
        '{{ "<!-- own -->" if doc.title else "" }}\n\n{{ doc.title }} {{ doc.title | upper }}\n{% endblock %}',
    )
    page = render_html(hostile(), place)
    assert SCRIPT not in page
    assert page.count("&lt;script&gt;") >= render_html(hostile()).count("&lt;script&gt;") + 3
    text = render_markdown(hostile(), template=place)[0]
    assert "\n<!-- own -->\n" in text
    tail = text.rpartition("<!-- own -->")[2]
    kinds = {c.type for t in MarkdownIt("commonmark").parse(tail) for c in (t.children or [])}
    assert kinds <= {"text", "text_special", "softbreak"}
    assert "script" in tail


REFUSED = {
    "safe": ("base__html__j2", "\n{{ doc.title | safe }}", r"base\.html\.j2:2: No filter named 'safe'"),
    "autoescape": (
        "base__html__j2",
        "\n\n{% autoescape false %}{{ doc }}{% endautoescape %}",
        r"base\.html\.j2:3: escaping cannot be switched off",
    ),
    "syntax": ("base__html__j2", "\n{% if %}", r"base\.html\.j2:2: "),
    "markdown": ("markdown__md__j2", "\n\n{% endfor %}", r"markdown\.md\.j2:3: "),
    "itself": ("base__html__j2", '{% extends "base.html.j2" %}', r"base\.html\.j2:1: this template extends itself"),
    "block": (
        "base__html__j2",
        '{% extends "pathcalc/base.html.j2" %}\n{% block cuations %}{% endblock %}',
        r"base\.html\.j2:2: there is no block 'cuations'; did you mean 'cautions'\?",
    ),
    "import": ("style__css", "\n@import url(data:text/css,x);", r"style\.css:2: '@import' cannot be"),
    "url": ("style__css", "/* url(\nx) */\np { background: url( 'https://x') }", r"style\.css:3: 'url' cannot be"),
    "close": ("style__css", "a{}</style >", r"style\.css:1: '</style' cannot be"),
    "bytes": ("style__css", b"a{}\n\xff", r"style\.css:2: is not UTF-8"),
    "no svg": ("logo__svg", "<svg", r"logo\.svg: is no well-formed SVG"),
    "entity": ("logo__svg", '<!DOCTYPE svg [<!ENTITY a "b">]><svg/>', r"logo\.svg: an SVG logo may hold no document"),
    "html": ("logo__svg", "<html/>", r"logo\.svg: is no SVG drawing"),
    "png": ("logo__png", b"GIF89a", r"logo\.png: is no PNG picture"),
    "long": ("logo__png", PNG + b"\0" * 200_000, r"logo\.png: a logo may have 200,000 bytes"),
    "nothing": ("bsae__html__j2", "x", r"holds none of base\.html\.j2, "),
}


@pytest.mark.parametrize("name", sorted(REFUSED))
def test_what_cannot_work_is_refused_at_once(tmp_path: Path, name: str) -> None:
    file, content, message = REFUSED[name]
    with pytest.raises(UsageError, match=message):
        Company.load(folder(tmp_path, **{file: content}))


HEAD = '{% extends "pathcalc/base.html.j2" %}\n{% block footer %}\n'
FAILING = {
    "undefined": ("{{ doc.titel }}", r"base\.html\.j2:3: '?Document'? has no attribute 'titel'"),
    "private": ("{{ doc.__class__.__mro__ }}", r"base\.html\.j2:3: access to attribute '__class__'.*unsafe"),
    "function": ("{{ say.__globals__ }}", r"base\.html\.j2:3: access to attribute '__globals__'.*unsafe"),
    "words": ('{{ say("no.such") }}', r"base\.html\.j2:3: there are no words under the key 'no\.such'"),
    "outside": ('{% include "../secret.txt" %}', r"base\.html\.j2:3: there is no template '\.\./secret\.txt'"),
    "absolute": ('{% include "/etc/passwd" %}', r"base\.html\.j2:3: there is no template '/etc/passwd'"),
    "link": ('{% include "link.txt" %}', r"base\.html\.j2:3: there is no template 'link\.txt'"),
    "division": ("{{ 1 // 0 }}", r"base\.html\.j2:3: ZeroDivisionError"),
    "endless": ("{% macro m() %}{{ m() }}{% endmacro %}{{ m() }}", r"base\.html\.j2:3: .* without end"),
    "range": ("{% for i in range(999999999) %}{% endfor %}", r"base\.html\.j2:3: OverflowError"),
}


@pytest.mark.parametrize("name", sorted(FAILING))
def test_what_goes_wrong_while_drawing_is_told_with_its_line(tmp_path: Path, name: str) -> None:
    body, message = FAILING[name]
    (tmp_path / "secret.txt").write_text("secret")
    place = folder(tmp_path, base__html__j2=HEAD + body + "\n{% endblock %}")
    (place / "link.txt").symlink_to(tmp_path / "secret.txt")
    with pytest.raises(UsageError, match=message):
        write_reports(two_stages(), {"html"}, tmp_path / "out", "r", place)
    assert not (tmp_path / "out").exists()


def test_error_of_a_macro_is_that_of_its_file(tmp_path: Path) -> None:
    place = folder(tmp_path, blocks__html__j2="{% macro table(b) %}\n{{ b.nothing }}\n{% endmacro %}")
    with pytest.raises(UsageError, match=r"blocks\.html\.j2:2: .*'nothing'"):
        render_html(two_stages(), place)


def test_a_folder_named_from_inside_it(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(folder(tmp_path, base__html__j2=HEAD + "{{ nothing }}\n{% endblock %}"))
    with pytest.raises(UsageError, match=r"^base\.html\.j2:3: 'nothing' is undefined"):
        render_html(two_stages(), ".")


def test_png_logo(tmp_path: Path) -> None:
    page = render_html(two_stages(), folder(tmp_path, logo__png=PNG))
    assert f'<img class="logo" alt="Company logo" src="data:image/png;base64,{base64.b64encode(PNG).decode()}">' in page


def test_svg_logo_is_cleaned() -> None:
    source = f"""<?xml version="1.0"?><?xml-stylesheet href="https://x.invalid/s.css"?>
    <svg xmlns="http://www.w3.org/2000/svg" xmlns:xlink="http://www.w3.org/1999/xlink" viewBox="0 0 9 9" onload="a()"
     xmlns:x="urn:x" x:made="by a program"><title>House "&lt;b&gt;"</title>{SCRIPT}
    <style>@import url(https://x.invalid/a.css); .a {{ fill: red }}</style><style>.b {{ fill: blue }}</style>
    <foreignObject><p xmlns="http://www.w3.org/1999/xhtml">x</p></foreignObject><a href="https://x.invalid/"><g/></a>
    <image href="https://x.invalid/i.png"/><animate attributeName="href"/><x:thing/>
    <g fill="url(https://x.invalid/f)" style="fill: url( 'https://x.invalid/g')" stroke="url(#p)" ONCLICK="b()">
    <use xlink:href="#p"/><use href="https://x.invalid/u#p"/><path id="p" d="M0 0h9v9z" fill="red"/></g></svg>"""
    drawing, title = logo.sanitised("logo.svg", source.encode())
    text = drawing.decode()
    assert title == 'House "<b>"'
    assert text.count("x.invalid") == 0
    for gone in (
        "script",
        "onload",
        "ONCLICK",
        "foreignObject",
        "<image",
        "animate",
        "import",
        "xml-stylesheet",
        "made",
    ):
        assert gone not in text, gone
    for kept in ('stroke="url(#p)"', 'href="#p"', 'd="M0 0h9v9z"', ".b { fill: blue }", 'viewBox="0 0 9 9"'):
        assert kept in text, kept


def test_what_the_documentation_names_exists() -> None:
    """The section on templates: every block, every file, every kind of block of the view."""
    text = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8").split("## Templates of a company")[1].split("\n## ")[0]
    env = html.environment()
    known = set(env.get_template("base.html.j2").blocks) | set(env.get_template("index.html.j2").blocks)
    known |= set(markdown.environment().get_template("markdown.md.j2").blocks)
    assert {name for name in known if f"`{name}`" not in text} == set()
    kinds = [
        c.__dataclass_fields__["kind"].default
        for _, c in inspect.getmembers(view, inspect.isclass)
        if "kind" in getattr(c, "__dataclass_fields__", {}) and c is not view.Document
    ]
    assert len(kinds) >= 9
    assert {kind for kind in kinds if f"`{kind}`" not in text} == set()
    for name in (*PAGES, BLOCKS, "style.css", *logo.NAMES):
        assert f"`{name}`" in text, name


def test_example_of_the_documentation_works(tmp_path: Path) -> None:
    text = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8").split("## Templates of a company")[1]
    example = re.search(r"```jinja\n(.*?)```", text, re.S)
    assert example is not None
    page = render_html(two_stages(), folder(tmp_path, base__html__j2=example[1]))
    assert "Vellisey gas works" in page.split("</header>")[0]
    shutil.rmtree(tmp_path / "house")
