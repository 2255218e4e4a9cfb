"""Where the reports of a run go, that no two of them fall on one another, and the index that leads to them."""

from __future__ import annotations

import difflib
import os
from dataclasses import dataclass, field
from pathlib import Path, PurePosixPath
from typing import TYPE_CHECKING, Any

from pathcalc.errors import UsageError
from pathcalc.words import using

if TYPE_CHECKING:
    from pathcalc.case import Case
    from pathcalc.cli.inputs import Input
    from pathcalc.cli.talk import Talk
    from pathcalc.path.solution import Solution
    from pathcalc.report.company import Company
    from pathcalc.report.index import Entry
    from pathcalc.words import Catalogue

FORMATS = ("html", "md", "pdf")
TEXTS = ("html", "md")
PAPERS = ("a4", "letter")
DEFAULT_FOLDER = "reports"
INDEX = "index"


@dataclass
class Reports:
    """The formats, the folder, the template and the paper asked for; no formats, no reports."""

    formats: tuple[str, ...]
    folder: Path
    paper: str = "a4"
    company: Company | None = None
    taken: dict[str, str] = field(default_factory=dict)
    entries: list[Entry] = field(default_factory=list)
    words: Catalogue | None = None

    @classmethod
    def asked(cls, formats: str | None, output: str | None, template: str | None = None, paper: str = "a4") -> Reports:
        """From the options; raises UsageError for an unknown format, a folder that cannot be written, a template with
        a mistake in it, and where PDF is asked for and no browser is found.
        """
        if formats is None:
            wanted: tuple[str, ...] = () if output is None else TEXTS
        else:
            wanted = tuple(dict.fromkeys(part.strip() for part in formats.split(",") if part.strip()))
            for name in wanted:
                if name not in FORMATS:
                    near = difflib.get_close_matches(name, FORMATS, 1)
                    hint = f"did you mean {near[0]!r}?" if near else f"known are {', '.join(FORMATS)}"
                    raise UsageError(f"unknown report format {name!r}; {hint}")
            if not wanted:
                raise UsageError(f"--report names no format; known are {', '.join(FORMATS)}")
        reports = cls(wanted, Path(output if output is not None else DEFAULT_FOLDER), paper)
        if wanted:
            reports._refuse_what_cannot_be_written()
        if "pdf" in wanted:
            from pathcalc.report.browser import find

            find()
        if template is not None:
            if not wanted:
                raise UsageError("--template is of reports, and none are asked for; add --report or -o")
            from pathcalc.report.company import Company

            reports.company = Company.load(template)
        return reports

    def _refuse_what_cannot_be_written(self) -> None:
        place = self.folder
        while not os.path.lexists(place) and place != place.parent:
            place = place.parent
        if not place.is_dir():
            raise UsageError(f"cannot write reports into {self.folder.as_posix()}: {place.as_posix()} is no folder")
        if not os.access(place, os.W_OK | os.X_OK):
            raise UsageError(f"cannot write reports into {self.folder.as_posix()}: no permission")

    def reserve(self, case: Case, shown: str) -> None:
        """Keep the names of a case's reports for it; raises UsageError if another case of this run has them."""
        if not self.formats:
            return
        other = self.taken.setdefault(case.id, shown)
        if other != shown:
            raise UsageError(
                f"{shown}: has the id {case.id!r} as {other} has, and its reports would fall on that one's; "
                "give --root a folder above both"
            )

    def write(self, solution: Solution, case: Case, changes: dict[str, Any] | None = None) -> tuple[list[str], str]:
        """Write the reports; the places, or why that could not be."""
        if not self.formats:
            return [], ""
        with using(self.words):
            return self._write(solution, case, changes)

    def _write(self, solution: Solution, case: Case, changes: dict[str, Any] | None) -> tuple[list[str], str]:
        from pathcalc.report import contents, index
        from pathcalc.report.files import check, write_all
        from pathcalc.report.view import build

        name = PurePosixPath(case.id)
        folder = self.folder.joinpath(*name.parts[:-1])
        document = build(solution, changes)
        failed = ""
        try:
            check(set(self.formats), name.name)
            write_all(folder, contents(document, set(self.formats), name.name, self.company, self.paper))
        except OSError as error:
            failed = f"cannot write reports into {folder.as_posix()}: {error.strerror or error}"
        except UsageError as error:
            failed = str(error)
        files = [] if failed else [(form, f"{case.id}.{form}") for form in self.formats]
        self.entries.append(index.solved(document, solution.to_dict(), case.record, files, unwritten=bool(failed)))
        return [(self.folder / place).as_posix() for _, place in files], failed

    def failed(self, item: Input, root: str | None, error: Exception, case: Case | None) -> None:
        """Keep a place in the index for a case that has no results."""
        if self.formats:
            from pathcalc.report import index

            title, record = (case.title, case.record) if case is not None else (None, None)
            with using(self.words):
                self.entries.append(index.unsolved(item.id(root), error, title, record))

    def write_index(self) -> tuple[list[str], str]:
        """Write the page that leads to the reports; its places, or why that could not be."""
        if not self.formats:
            return [], ""
        from pathcalc.report import index
        from pathcalc.report.files import write_all

        try:
            with using(self.words):
                files = index.render(index.index(self.entries), self.formats, self._index_stem(), self.company)
            write_all(self.folder, files)
        except OSError as error:
            return [], f"cannot write the index into {self.folder.as_posix()}: {error.strerror or error}"
        except UsageError as error:
            return [], str(error)
        return [(self.folder / name).as_posix() for name in files], ""

    def _index_stem(self) -> str:
        """``index``, or ``library-index`` and so on where a case has that name (whatever its case of letters)."""
        names = {case_id.casefold() for case_id in self.taken}
        stem, n = INDEX, 1
        while stem in names:
            stem = f"library-{INDEX}" if n == 1 else f"library-{INDEX}-{n}"
            n += 1
        return stem


def asked_words(file: str | None, reports: Reports, talk: Talk) -> Catalogue | None:
    """The catalogue of the option ``--words``; says how many of its texts are English. UsageError if it is none."""
    if file is None:
        return None
    if not reports.formats:
        raise UsageError("--words is for reports; give --report html,md, or a folder with -o")
    from pathcalc.words import catalogue

    words = catalogue(file)
    if words.missing:
        share = f"{words.missing} of {len(words.texts)} texts"
        talk.line(f"{file}: {share} {'is' if words.missing == 1 else 'are'} missing and stay English")
    return words
