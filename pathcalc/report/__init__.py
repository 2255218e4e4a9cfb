"""Reports of a solved path: HTML, and Markdown with its diagrams beside it.

Heavy libraries (templates, drawing, formulas) are imported when a report is made, not before.
"""

from __future__ import annotations

from pathlib import Path

from pathcalc.report.view import SolutionLike
from pathcalc.words import Catalogue, using

__all__ = ["FORMATS", "SolutionLike", "render_html", "render_markdown", "write_reports"]

FORMATS = ("html", "md")
"""The formats :func:`write_reports` knows."""


Words = Catalogue | Path | str | None
"""A catalogue of words, or the file of one; None is English."""


def render_html(solution: SolutionLike, *, words: Words = None) -> str:
    """The report as one self-contained HTML page: no scripts, no requests, formulas and diagrams inside."""
    from pathcalc.report.html import render
    from pathcalc.report.view import build

    with using(words):
        return render(build(solution))


def render_markdown(
    solution: SolutionLike, stem: str | None = None, *, words: Words = None
) -> tuple[str, dict[str, bytes]]:
    """The report as Markdown, and its diagrams as SVG files by the relative name the text refers to.

    ``stem`` begins the diagrams' file names; the last part of the case id where it is left out.
    """
    from pathcalc.report.markdown import render
    from pathcalc.report.textsafe import file_stem
    from pathcalc.report.view import build

    with using(words):
        return render(build(solution), file_stem(stem or str(solution.to_dict()["case"]["id"])))


def write_reports(
    solution: SolutionLike, formats: set[str], folder: Path, stem: str, *, words: Words = None
) -> list[Path]:
    """Write the reports into ``folder`` and return their paths: all of them whole, or none.

    ``words`` is a catalogue of another language, or its file. Raises UsageError for an unknown format, a stem that is
    no file name or a file that is no catalogue, OSError where the folder cannot be written; nothing half-written is
    left behind.
    """
    from pathcalc.report.files import check, write_all

    check(formats, stem)
    with using(words):
        files = _files(solution, formats, stem)
    return write_all(folder, files)


def _files(solution: SolutionLike, formats: set[str], stem: str) -> dict[str, bytes]:
    """The files of the reports by name."""
    from pathcalc.report.view import build

    document = build(solution)
    files: dict[str, bytes] = {}
    if "html" in formats:
        from pathcalc.report.html import render

        files[f"{stem}.html"] = render(document).encode()
    if "md" in formats:
        from pathcalc.report.markdown import render as render_text
        from pathcalc.report.textsafe import file_stem

        text, figures = render_text(document, file_stem(stem))
        files |= figures
        files[f"{stem}.md"] = text.encode()
    return files
