"""One file a group of sections; each is a function from the context to a section, or None to leave it out."""

from __future__ import annotations

from pathcalc.report.context import Context
from pathcalc.report.sections import basis, checks, closing, conclusions, diagrams, fluid, front, results, worked
from pathcalc.report.view import Document, Figure, Section, SolutionLike

_SECTIONS = (
    conclusions.revisions,
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


def document(solution: SolutionLike) -> Document:
    """The whole view model of one solved case."""
    ctx = Context(solution)
    sections: list[Section] = []
    for make in _SECTIONS:
        section = make(ctx)
        if section is not None:
            sections.append(section)
    figures = tuple(b for s in sections for b in s.blocks if isinstance(b, Figure))
    return front.header(ctx, tuple(sections), figures)
