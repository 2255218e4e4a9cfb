"""Pages for the tests that look at whole reports: example cases, the hostile one, an index, a company's own."""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache
from pathlib import Path

from hostile import HOSTILE, hostile

import pathcalc
from pathcalc.errors import Finding, InvalidCaseError, NoSolutionError, Trouble
from pathcalc.report import html, index, markdown, render_html
from pathcalc.report.view import build

ROOT = Path(__file__).resolve().parents[2]
COMPANY = Path(__file__).with_name("company")
EXAMPLES = ("cold-store-chiller", "receiver-into-vacuum", "us-units-booster")
"""A cycle with two phases, a fixed mass, customary units."""


@lru_cache(maxsize=1)
def hostile_index() -> index.Index:
    """An index of every kind of case, with hostile text wherever text comes from outside."""
    made = hostile()
    made.result["checks"][0]["passed"] = True
    made.result["case"]["id"] = "a b/c#d?e_f(g)"
    name = made.result["case"]["id"]
    files = [(form, f"{name}.{form}") for form in ("html", "md")]
    finding = Finding("/somewhere/" + HOSTILE.replace("/", ""), 3, 4, HOSTILE, "bad-unit")
    trouble = Trouble("no-root", HOSTILE, HOSTILE, HOSTILE)
    return index.index(
        [
            index.solved(build(made), made.to_dict(), made.case.record, files),
            index.solved(build(made), made.to_dict(), made.case.record, [], unwritten=True),
            index.unsolved("z/invalid", InvalidCaseError([finding] * 8)),
            index.unsolved("y/" + HOSTILE, NoSolutionError(trouble), HOSTILE, made.case.record),
            index.unsolved("x", RuntimeError("/home/somebody")),
        ]
    )


def _company() -> str:
    return render_html(hostile(), COMPANY)


_MADE: dict[str, Callable[[], str]] = {
    "hostile": lambda: render_html(hostile()),
    "index": lambda: html.render_index(hostile_index()),
    "company": _company,
}
PAGES = (*EXAMPLES, *_MADE)


@lru_cache(maxsize=1)
def solved(name: str) -> pathcalc.Solution:
    """A solved example."""
    return pathcalc.solve(pathcalc.load(ROOT / "cases" / f"{name}.yaml"))


@lru_cache(maxsize=len(PAGES))
def page(name: str) -> str:
    """The page of that name as HTML."""
    made = _MADE.get(name)
    return made() if made else render_html(solved(name))


def index_text() -> str:
    """The hostile index as Markdown."""
    return markdown.render_index(hostile_index())
