"""The document as Markdown for a git host: tables, maths between dollar signs, SVG files beside it."""

from __future__ import annotations

from functools import lru_cache

from jinja2 import Environment, PackageLoader, StrictUndefined

from pathcalc.report import maths, textsafe
from pathcalc.report.view import Cell, Column, Document
from pathcalc.report.words import say


@lru_cache(maxsize=1)
def environment() -> Environment:
    """The template environment; every text goes through the ``md`` filter, which escapes for Markdown."""
    env = Environment(
        loader=PackageLoader("pathcalc.report"),
        autoescape=False,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    env.filters["md"] = textsafe.markdown
    env.filters["fence"] = textsafe.fence
    env.filters["math"] = maths.inline_markdown
    env.filters["display"] = maths.display_markdown
    env.filters["result"] = maths.result_markdown
    env.filters["figure"] = maths.figure
    env.filters["cell"] = cell
    env.filters["head"] = head
    env.globals["say"] = say
    return env


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


def render(document: Document, stem: str) -> tuple[str, dict[str, bytes]]:
    """The text, and the diagrams' SVG by file name."""
    files = {f.name: f"{stem}-{f.name}.svg" for f in document.figures}
    text = environment().get_template("markdown.md.j2").render(doc=document, files=files)
    return text, {files[f.name]: (f.svg + "\n").encode() for f in document.figures}
