"""The document as one HTML page."""

from __future__ import annotations

from functools import lru_cache
from typing import Any

from jinja2 import Environment, PackageLoader, StrictUndefined
from markupsafe import Markup

from pathcalc.report import maths
from pathcalc.report.textsafe import clean_lines, css_string
from pathcalc.report.view import Document
from pathcalc.report.words import say


@lru_cache(maxsize=1)
def environment() -> Environment:
    """The template environment: everything escaped, nothing silently undefined."""
    env = Environment(
        loader=PackageLoader("pathcalc.report"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
        finalize=_finalize,
    )
    env.filters["math"] = maths.mathml
    env.filters["lines"] = maths.mathml_lines
    env.filters["result"] = maths.result_html
    env.filters["symbol"] = symbol
    env.filters["figure"] = maths.figure
    env.globals["say"] = say
    return env


def _finalize(value: Any) -> Any:
    """Show control characters in every piece of text that is not markup already."""
    return clean_lines(value) if isinstance(value, str) and not isinstance(value, Markup) else value


def symbol(text: str) -> Markup:
    """A symbol such as ``Δs_gen`` with its subscript set as one."""
    base, _, below = text.partition("_")
    letters = Markup("<var>{}</var>").format(base)
    return letters + Markup("<sub>{}</sub>").format(below) if below else letters


def render(document: Document) -> str:
    """The page. Same document, same bytes."""
    env = environment()
    loader = env.loader
    assert loader is not None
    style = loader.get_source(env, "style.css")[0]
    template = env.get_template("base.html.j2")
    return template.render(
        doc=document,
        style=Markup(style),
        running=Markup(css_string(document.running)),
        sheet=Markup(css_string(say("doc.sheet"))),
        of=Markup(css_string(say("doc.of"))),
        drawing=Markup,
    )
