"""Plugin of pytest: a case file is a test, held to what ``pathcalc regress`` holds it to.

Collected are the ``*.yaml`` files that begin with the key ``pathcalc``, and no other YAML. A file that is named on
the command line and is no case fails and says why. In the configuration, ``pathcalc_cases`` restricts the collection to
some folders, and ``pathcalc_stored = optional`` asks for a stored result only where there is one. ``-p no:pathcalc``
turns it off.
"""

from __future__ import annotations

import os
from collections.abc import Iterable
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest

if TYPE_CHECKING:
    from pathcalc.library.outcome import Outcome

CASE = ".yaml"


def pytest_addoption(parser: pytest.Parser) -> None:
    """What the configuration may say."""
    parser.addini("pathcalc_cases", "Folders of the cases to collect; everywhere if left out.", "linelist", [])
    parser.addini("pathcalc_stored", "required (the default) or optional: stored results.", default="required")


def pytest_collect_file(file_path: Path, parent: pytest.Collector) -> pytest.Collector | None:
    """A collector for what begins as a case, or is named and ends in .yaml."""
    if file_path.suffix != CASE:
        return None
    named = _is_named(file_path, parent.config)
    if not named and not _is_wanted(file_path, parent.config):
        return None
    from pathcalc.case.discover import begins_as_case

    if not begins_as_case(file_path) and not named:
        return None
    collector: pytest.Collector = CaseFile.from_parent(parent, path=file_path)
    return collector


def _is_named(file: Path, config: pytest.Config) -> bool:
    """Is the file itself one of the arguments."""
    base = config.invocation_params.dir
    return any(os.path.abspath(base / str(a).partition("::")[0]) == str(file) for a in config.args)


def _is_wanted(file: Path, config: pytest.Config) -> bool:
    folders = config.getini("pathcalc_cases")
    return not folders or any(file.is_relative_to(config.rootpath / folder) for folder in folders)


class CaseFile(pytest.File):
    """A case file: one test."""

    def collect(self) -> Iterable[pytest.Item]:
        """The test of the case, called as the file is."""
        yield CaseItem.from_parent(self, name=self.path.stem)


class CaseFailed(Exception):
    """A case is not as it should be; the outcome says what is wrong."""

    def __init__(self, outcome: Outcome) -> None:
        self.outcome = outcome
        super().__init__(outcome.status)


class CaseItem(pytest.Item):
    """Load, solve, hold against the stored result."""

    def runtest(self) -> None:
        """Raise CaseFailed where the case is not as it should be."""
        from dataclasses import replace

        from pathcalc.case.discover import begins_as_case
        from pathcalc.errors import Finding
        from pathcalc.library.job import work
        from pathcalc.library.outcome import Outcome

        shown = self._shown()
        if not begins_as_case(self.path):
            text = "this is no case: a case begins with the key pathcalc, as `pathcalc: 1`"
            raise CaseFailed(Outcome(shown, "invalid", findings=(Finding(shown, 1, 1, text, "no-case"),)))
        outcome = replace(work(self._job()), file=shown)
        if outcome.code:
            raise CaseFailed(outcome)
        for finding in outcome.findings:
            self.add_report_section("call", "pathcalc", str(finding))

    def _job(self) -> Any:
        from pathcalc.case.files import find_root
        from pathcalc.library.job import Job
        from pathcalc.library.results_file import results_path
        from pathcalc.library.settings import find_settings

        settings = find_settings(self.path.parent, find_root(self.path.parent))
        stored = self.config.getini("pathcalc_stored")
        if stored not in ("required", "optional"):
            raise pytest.UsageError(f"pathcalc_stored is required or optional, not {stored!r}")
        wanted = stored == "required" or results_path(self.path).exists()
        return Job(str(self.path), settings=None if settings is None else str(settings), stored=wanted)

    def _shown(self) -> str:
        """The file as seen from where pytest was started."""
        try:
            return Path(os.path.relpath(self.path, self.config.invocation_params.dir)).as_posix()
        except ValueError:
            return self.path.as_posix()

    def repr_failure(self, excinfo: pytest.ExceptionInfo[BaseException], style: Any = None) -> Any:
        """A line a finding, with the line of the file; an internal error with where it came from."""
        error = excinfo.value
        if not isinstance(error, CaseFailed):
            return super().repr_failure(excinfo, style)
        outcome = error.outcome
        lines = [f"{outcome.file}: {outcome.status}", *(str(f) for f in outcome.findings)]
        return "\n".join([*lines, *([outcome.detail] if outcome.detail else [])])

    def reportinfo(self) -> tuple[os.PathLike[str], int, str]:
        """The file, its first line, and what the test is called."""
        return self.path, 0, f"case {self._shown()}"
