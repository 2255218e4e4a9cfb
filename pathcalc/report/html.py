"""The document as one HTML page."""

from __future__ import annotations

from collections.abc import Mapping
from functools import lru_cache
from typing import TYPE_CHECKING, Any

from markupsafe import Markup

from pathcalc.report import maths, templating
from pathcalc.report.textsafe import clean, clean_lines, css_string
from pathcalc.report.view import Document, Figure
from pathcalc.report.words import say

if TYPE_CHECKING:
    from jinja2 import Environment

    from pathcalc.report.company import Company
    from pathcalc.report.index import Index

RUNNING = 80
"""Characters of the running header, at 8 points on the narrower of A4 and Letter."""


@lru_cache(maxsize=4)
def environment(company: Company | None = None) -> Environment:
    """The template environment: everything escaped, nothing silently undefined."""
    filters = {
        "math": maths.mathml,
        "lines": maths.mathml_lines,
        "result": maths.result_html,
        "symbol": symbol,
        "figure": maths.figure,
    }
    return templating.environment(_finalize, filters, company.loader if company else None)


def _finalize(value: Any) -> Any:
    """Show control characters in every piece of text that is not markup already."""
    return clean_lines(value) if isinstance(value, str) and not isinstance(value, Markup) else value


def symbol(text: str) -> Markup:
    """A symbol such as ``Δs_gen`` with its subscript set as one."""
    base, _, below = text.partition("_")
    letters = Markup("<var>{}</var>").format(base)
    return letters + Markup("<sub>{}</sub>").format(below) if below else letters


def render(document: Document, company: Company | None = None) -> str:
    """The page of a case. Same document, same bytes."""
    drawings = {b.svg for s in document.sections for b in s.blocks if isinstance(b, Figure)}

    def drawing(svg: str) -> str:
        return Markup(svg) if svg in drawings else svg

    return _page("base.html.j2", document, company, {"drawing": drawing})


def render_index(index: Index, company: Company | None = None) -> str:
    """The page that leads to the reports of a library."""
    return _page("index.html.j2", index, company, {"drawing": str})


def _short(text: str) -> str:
    """As much of a running header as one line of a sheet holds."""
    line = clean(text)
    return line if len(line) <= RUNNING else f"{line[: RUNNING - 1]}…"


def _page(name: str, doc: Document | Index, company: Company | None, more: Mapping[str, Any]) -> str:
    env = environment(company)
    assert env.loader is not None
    style = env.loader.get_source(env, f"{templating.PREFIX}/style.css")[0]
    values = {
        **more,
        "doc": doc,
        "style": Markup(style + (company.style if company else "")),
        "logo": company.logo if company else Markup(),
        "running": Markup(css_string(_short(doc.running))),
        "sheet": Markup(css_string(say("doc.sheet"))),
        "of": Markup(css_string(say("doc.of"))),
    }
    if company is None:
        return env.get_template(name).render(own={}, **values)
    with company.at_fault():
        return env.get_template(name).render(own=company.macros(env, values), **values)
