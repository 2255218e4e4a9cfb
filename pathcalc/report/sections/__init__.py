"""One file a group of sections; each is a function from the context to a section, or None to leave it out."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from pathcalc.report.context import Context
from pathcalc.report.sections import basis, checks, closing, conclusions, diagrams, fluid, front, results, worked
from pathcalc.report.sections import changes as changed
from pathcalc.report.view import Document, Figure, Section, SolutionLike

_SECTIONS = (
    conclusions.revisions,
    changed.section,
    front.purpose,
    basis.section,
    fluid.section,
    fluid.method,
    results.section,
    results.limits,
    diagrams.section,
    checks.section,
    checks.comparison,
    conclusions.section,
    worked.section,
    closing.cautions,
    closing.made,
    closing.appendix,
)
"""The order of the document."""


def document(solution: SolutionLike, changes: Mapping[str, Any] | None = None) -> Document:
    """The whole view model of one solved case; see :func:`pathcalc.report.view.build`."""
    ctx = Context(solution, changes)
    sections: list[Section] = []
    for make in _SECTIONS:
        section = make(ctx)
        if section is not None:
            sections.append(section)
    figures = tuple(b for s in sections for b in s.blocks if isinstance(b, Figure))
    return front.header(ctx, tuple(sections), figures)
