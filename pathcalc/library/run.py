"""A run over a library: what to do, how, and what became of it."""

from __future__ import annotations

import os
from collections.abc import Callable
from dataclasses import dataclass, field, replace
from functools import cache
from pathlib import Path
from typing import Any

from pathcalc.errors import Finding, UsageError
from pathcalc.library.discovery import Found, choose, discover
from pathcalc.library.job import Job
from pathcalc.library.outcome import Outcome, rank
from pathcalc.library.results_file import ResultsError, parse_results, read_bytes, results_path
from pathcalc.library.settings import TIME_LIMIT, Settings, find_settings, read_settings
from pathcalc.library.workers import Watch, run_jobs


@dataclass(frozen=True)
class Options:
    """What a run is asked to do. ``reason`` is given where results are to be accepted."""

    root: str | None = None
    cases: tuple[str, ...] = ()
    reason: str | None = None
    changed: bool = False
    jobs: int | None = None
    time_limit: float | None = None
    scheduler: str | None = None


@dataclass(frozen=True)
class RunResult:
    """Outcomes in the order of the paths, and the files that were written."""

    top: Path
    outcomes: tuple[Outcome, ...]
    written: tuple[Path, ...] = ()
    software: dict[str, str] = field(default_factory=dict)

    @property
    def code(self) -> int:
        """The highest exit code of all."""
        return max((outcome.code for outcome in self.outcomes), default=0)

    @property
    def by_need(self) -> list[Outcome]:
        """Outcomes, what needs a look first."""
        return sorted(self.outcomes, key=rank)

    def counts(self) -> dict[str, int]:
        """How many cases have each status, in the order of need."""
        found: dict[str, int] = {}
        for outcome in self.by_need:
            found[outcome.status] = found.get(outcome.status, 0) + 1
        return found

    def public(self) -> dict[str, Any]:
        """All of it as plain values for JSON, the same on every run."""
        return {
            "pathcalc": 1,
            "folder": self.top.as_posix(),
            "software": self.software,
            "code": self.code,
            "counts": self.counts(),
            "needs_a_look": [o.file for o in self.by_need if o.code or o.stored_limits_missed],
            "cases": [outcome.public() for outcome in self.outcomes],
        }


def regress(path: str, options: Options, watch: Watch | None = None) -> RunResult:
    """Solve a library and hold it against its stored results; store what is accepted, where that is asked for.

    Raises UsageError, InvalidCaseError for a settings file that is not valid, and WorkersError.
    """
    from pathcalc.library.digests import software

    found = choose(discover(path, options.root), options.cases)
    if not found.cases and not found.outcomes:
        raise UsageError(f"{path}: no case in this folder (*.yaml that begin with the key pathcalc)")
    settings_of = _settings_finder(found)
    top_settings = _top_settings(found)
    folder = found.top if found.top.is_dir() else found.top.parent

    def solved() -> list[Outcome]:
        return _solved(found, options, settings_of, top_settings, watch or Watch())

    if options.reason is None:
        return RunResult(found.top, tuple(solved()), software=dict(software()))
    from pathcalc.library.accept import only_run, store

    with only_run(folder):
        outcomes = solved()
        written, failed = store(outcomes)
    outcomes = [_after_storing(outcome, dict(failed)) for outcome in outcomes]
    return RunResult(found.top, tuple(outcomes), tuple(written), dict(software()))


def _after_storing(outcome: Outcome, failed: dict[Path, str]) -> Outcome:
    place = results_path(Path(outcome.file))
    if outcome.text is None or place not in failed:
        return replace(outcome, text=None)
    text = f"{place.as_posix()} cannot be written: {failed[place]}; it is as it was"
    finding = Finding(outcome.file, 1, 1, text, "not-written")
    return replace(outcome, text=None, status="not written", findings=(finding,))


def _solved(
    found: Found,
    options: Options,
    settings_of: Callable[[Path], str | None],
    top: Settings,
    watch: Watch,
) -> list[Outcome]:
    outcomes: dict[Path, Outcome] = {}
    todo: list[Path] = []
    for case in found.cases:
        same = unchanged(case) if options.changed and options.reason is None else None
        if same is None:
            todo.append(case)
        else:
            outcomes[case] = same
    jobs = [Job(case.as_posix(), options.root, settings_of(case.parent), options.reason) for case in todo]
    time_limit = options.time_limit or top.time_limit or TIME_LIMIT
    if jobs and options.scheduler is not None:
        from pathcalc.library.cluster import run_on_cluster

        done = run_on_cluster(jobs, options.scheduler, time_limit, found.root, watch)
    elif jobs:
        done = run_jobs(jobs, options.jobs or top.jobs or processors(), time_limit, watch)
    else:
        done = []
    outcomes.update(zip(todo, done, strict=True))
    told = [*((case.as_posix(), outcomes[case]) for case in found.cases), *((o.file, o) for o in found.outcomes)]
    return [outcome for _, outcome in sorted(told, key=lambda item: Path(item[0]).parts)]


def processors() -> int:
    """Processors that this process may use."""
    try:
        return len(os.sched_getaffinity(0))
    except AttributeError:
        return os.cpu_count() or 1


def unchanged(case: Path) -> Outcome | None:
    """The outcome of a case that is as it was when its result was accepted, None where anything has changed."""
    from pathcalc.library.compare import limit_rows
    from pathcalc.library.digests import changes
    from pathcalc.library.verdict import verdict_of

    try:
        stored = parse_results(read_bytes(results_path(case)))
    except (FileNotFoundError, ResultsError):
        return None
    accepted = stored.get("accepted")
    if accepted is None or case.name not in accepted["files"]:
        return None
    verdict = verdict_of(stored)
    if verdict.failed or changes(accepted, stored["software"], case.parent):
        return None
    missed = tuple(name for name, row in limit_rows(stored).items() if not row["passed"])
    return Outcome(
        case.as_posix(),
        "unchanged",
        id=verdict.id,
        title=verdict.title,
        verdict=verdict,
        stored_limits_missed=missed,
    )


def _settings_finder(found: Found) -> Callable[[Path], str | None]:
    """Finder of the settings file for a folder; every file found is read once here, so that a bad one stops the run."""
    read: set[Path] = set()

    @cache
    def find(folder: Path) -> str | None:
        file = find_settings(folder, found.root)
        if file is None:
            return None
        if file not in read:
            read_settings(file)
            read.add(file)
        return str(file)

    for case in found.cases:
        find(case.parent)
    return find


def _top_settings(found: Found) -> Settings:
    file = find_settings(found.top if found.top.is_dir() else found.top.parent, found.root)
    return Settings() if file is None else read_settings(file)
