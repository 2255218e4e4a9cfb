"""Where the reports of a run go, and that no two of them fall on one another."""

from __future__ import annotations

import difflib
import os
from dataclasses import dataclass, field
from pathlib import Path, PurePosixPath
from typing import TYPE_CHECKING

from pathcalc.errors import UsageError

if TYPE_CHECKING:
    from pathcalc.case import Case
    from pathcalc.cli.talk import Talk
    from pathcalc.path.solution import Solution
    from pathcalc.words import Catalogue

FORMATS = ("html", "md")
DEFAULT_FOLDER = "reports"


@dataclass
class Reports:
    """The formats and the folder asked for; no formats, no reports."""

    formats: tuple[str, ...]
    folder: Path
    taken: dict[str, str] = field(default_factory=dict)
    words: Catalogue | None = None

    @classmethod
    def asked(cls, formats: str | None, output: str | None) -> Reports:
        """From the options; raises UsageError for an unknown format or a folder that cannot be written."""
        if formats is None:
            wanted: tuple[str, ...] = () if output is None else FORMATS
        else:
            wanted = tuple(dict.fromkeys(part.strip() for part in formats.split(",") if part.strip()))
            for name in wanted:
                if name not in FORMATS:
                    near = difflib.get_close_matches(name, FORMATS, 1)
                    hint = f"did you mean {near[0]!r}?" if near else f"known are {', '.join(FORMATS)}"
                    raise UsageError(f"unknown report format {name!r}; {hint}")
            if not wanted:
                raise UsageError(f"--report names no format; known are {', '.join(FORMATS)}")
        reports = cls(wanted, Path(output if output is not None else DEFAULT_FOLDER))
        if wanted:
            reports._refuse_what_cannot_be_written()
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

    def write(self, solution: Solution, case: Case) -> tuple[list[str], str]:
        """Write the reports; the places, or why that could not be."""
        if not self.formats:
            return [], ""
        from pathcalc.report import write_reports

        name = PurePosixPath(case.id)
        folder = self.folder.joinpath(*name.parts[:-1])
        try:
            places = write_reports(solution, set(self.formats), folder, name.name, words=self.words)
        except OSError as error:
            return [], f"cannot write reports into {folder.as_posix()}: {error.strerror or error}"
        texts = {place.suffix: place.as_posix() for place in places if place.suffix in (".html", ".md")}
        return [texts[f".{form}"] for form in self.formats if f".{form}" in texts], ""


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
