"""Reports of a solved path: HTML, Markdown with its diagrams beside it, and PDF; and the index of a library.

Heavy libraries (templates, drawing, formulas) are imported when a report is made, not before.
"""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any

from pathcalc.report.view import SolutionLike
from pathcalc.words import Catalogue, using

if TYPE_CHECKING:
    from pathcalc.report.company import Company
    from pathcalc.report.view import Document

__all__ = ["FORMATS", "SolutionLike", "render_html", "render_markdown", "render_pdf", "write_reports"]

FORMATS = ("html", "md", "pdf")
"""The formats :func:`write_reports` knows."""


Words = Catalogue | Path | str | None
"""A catalogue of words, or the file of one; None is English."""


def render_html(
    solution: SolutionLike,
    template: str | Path | None = None,
    changes: Mapping[str, Any] | None = None,
    *,
    words: Words = None,
) -> str:
    """The report as one self-contained HTML page: no scripts, no requests, formulas and diagrams inside.

    ``template``: a company's folder, see :mod:`pathcalc.report.company`; what is wrong there raises UsageError.
    ``changes``: what differs from an earlier revision, see :func:`pathcalc.report.view.build`. ``words``: a catalogue
    of another language, or its file; UsageError where it is none.
    """
    from pathcalc.report.html import render
    from pathcalc.report.view import build

    with using(words):
        return render(build(solution, changes), _company(template))


def render_markdown(
    solution: SolutionLike,
    stem: str | None = None,
    template: str | Path | None = None,
    changes: Mapping[str, Any] | None = None,
    *,
    words: Words = None,
) -> tuple[str, dict[str, bytes]]:
    """The report as Markdown, and its diagrams as SVG files by the relative name the text refers to.

    ``stem`` begins the diagrams' file names; the last part of the case id where it is left out. ``template``,
    ``changes`` and ``words`` as in :func:`render_html`.
    """
    from pathcalc.report.markdown import render
    from pathcalc.report.textsafe import file_stem
    from pathcalc.report.view import build

    with using(words):
        document = build(solution, changes)
        return render(document, file_stem(stem or str(solution.to_dict()["case"]["id"])), _company(template))


def render_pdf(
    solution: SolutionLike, template: str | Path | None = None, paper: str = "a4", *, words: Words = None
) -> bytes:
    """The HTML report as PDF, printed by an installed browser of the Chromium family on ``a4`` or ``letter``.

    Raises UsageError where there is no browser or it fails; see :mod:`pathcalc.report.browser`.
    """
    from pathcalc.report.pdf import render

    return render(render_html(solution, template, words=words), paper)


def write_reports(
    solution: SolutionLike,
    formats: set[str],
    folder: Path,
    stem: str,
    template: str | Path | None = None,
    paper: str = "a4",
    changes: Mapping[str, Any] | None = None,
    *,
    words: Words = None,
) -> list[Path]:
    """Write the reports into ``folder`` and return their paths: all of them whole, or none.

    Raises UsageError for an unknown format, a stem that is no file name, a template with a mistake, a file that is no
    catalogue of words, or a browser that is missing or fails; OSError where the folder cannot be written. Nothing
    half-written is left behind.
    """
    from pathcalc.report.files import check, write_all
    from pathcalc.report.view import build

    check(formats, stem)
    with using(words):
        files = contents(build(solution, changes), formats, stem, _company(template), paper)
    return write_all(folder, files)


def contents(
    document: Document, formats: set[str], stem: str, company: Company | None = None, paper: str = "a4"
) -> dict[str, bytes]:
    """The report's files by name, in the formats asked for."""
    files: dict[str, bytes] = {}
    if formats & {"html", "pdf"}:
        from pathcalc.report import html

        page = html.render(document, company)
        if "html" in formats:
            files[f"{stem}.html"] = page.encode()
        if "pdf" in formats:
            from pathcalc.report import pdf

            files[f"{stem}.pdf"] = pdf.render(page, paper)
    if "md" in formats:
        from pathcalc.report import markdown
        from pathcalc.report.textsafe import file_stem

        text, figures = markdown.render(document, file_stem(stem), company)
        files |= figures
        files[f"{stem}.md"] = text.encode()
    return files


def _company(template: str | Path | None) -> Company | None:
    if template is None:
        return None
    from pathcalc.report.company import Company

    return Company.load(template)
