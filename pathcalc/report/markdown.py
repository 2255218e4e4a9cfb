"""The document as Markdown for a git host: tables, maths between dollar signs, SVG files beside it."""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache
from typing import TYPE_CHECKING, Any

from markupsafe import Markup

from pathcalc.report import maths, templating, textsafe
from pathcalc.report.view import Cell, Column, Document

if TYPE_CHECKING:
    from jinja2 import Environment

    from pathcalc.report.company import Company
    from pathcalc.report.index import Index


@lru_cache(maxsize=4)
def environment(company: Company | None = None) -> Environment:
    """The template environment; every text that no filter has made Markdown is escaped as Markdown."""
    filters: dict[str, Callable[..., str]] = {
        "md": textsafe.markdown,
        "fence": textsafe.fence,
        "math": maths.inline_markdown,
        "display": maths.display_markdown,
        "result": maths.result_markdown,
        "figure": maths.figure,
        "cell": cell,
        "head": head,
        "address": address,
        "code": textsafe.inline_code,
    }
    marked = {name: templating.markup(function) for name, function in filters.items()}
    return templating.environment(_finalize, marked, company.loader if company else None)


def _finalize(value: Any) -> Any:
    return Markup(textsafe.markdown(value)) if isinstance(value, str) and not isinstance(value, Markup) else value


def cell(c: Cell) -> str:
    """One table cell, escaped."""
    if c.role == "code" and c.text:
        text = textsafe.inline_code(c.text)
    elif c.role in ("good", "bad"):
        text = f"**{textsafe.markdown(c.text)}**"
    elif c.role == "absent" and len(c.text) > 1:
        text = f"*{textsafe.markdown(c.text)}*"
    else:
        text = textsafe.markdown(c.text)
    return f"{text} ({textsafe.markdown(c.mark)})" if c.mark else text


def head(column: Column) -> str:
    """One column head: words, symbol, unit."""
    parts = [textsafe.markdown(column.words)]
    if column.symbol:
        base, _, below = column.symbol.partition("_")
        parts.append(f"*{textsafe.markdown(base)}*" + (f"<sub>{textsafe.markdown(below)}</sub>" if below else ""))
    text = " ".join(parts)
    return f"{text}, {textsafe.markdown(column.unit)}" if column.unit else text


def address(path: str) -> str:
    """A relative address, percent-encoded, that Markdown takes as it is."""
    return path.replace("(", "%28").replace(")", "%29").replace("_", "\\_").replace("*", "%2A")


def render(document: Document, stem: str, company: Company | None = None) -> tuple[str, dict[str, bytes]]:
    """The text, and the diagrams' SVG by file name."""
    files = {f.name: f"{stem}-{f.name}.svg" for f in document.figures}
    text = _text("markdown.md.j2", company, doc=document, files={k: Markup(v) for k, v in files.items()})
    return text, {files[f.name]: (f.svg + "\n").encode() for f in document.figures}


def render_index(index: Index, company: Company | None = None) -> str:
    """The page that leads to the reports of a library."""
    return _text("index.md.j2", company, doc=index)


def _text(name: str, company: Company | None, **values: Any) -> str:
    template = environment(company)
    if company is None:
        return template.get_template(name).render(values)
    with company.at_fault():
        return template.get_template(name).render(values)
