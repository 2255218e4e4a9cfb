"""The work on one case: load, solve, hold against the stored result. Runs in a worker; writes and prints nothing."""

from __future__ import annotations

import os
import time
from dataclasses import asdict, dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any

from pathcalc.errors import Finding, InvalidCaseError, NoSolutionError, PathcalcError
from pathcalc.library.outcome import Outcome
from pathcalc.library.results_file import ResultsError, canonical, parse_results, read_bytes, results_path
from pathcalc.library.settings import Settings, read_settings, tolerances_for

if TYPE_CHECKING:
    from pathcalc.case.model import Case
    from pathcalc.library.regression import Judgement
    from pathcalc.path.solution import Solution

Place = tuple[str, int, int]


@dataclass(frozen=True)
class Job:
    """One case to work on. ``reason`` is given where the result is to be accepted; ``settings`` names the file."""

    file: str
    root: str | None = None
    settings: str | None = None
    reason: str | None = None
    stored: bool = True
    """Whether a stored result is asked for."""

    def to_dict(self) -> dict[str, Any]:
        """Plain values for passing on."""
        return asdict(self)


def work(job: Job) -> Outcome:
    """The outcome of one case; whatever goes wrong becomes part of it."""
    began = time.perf_counter()
    try:
        outcome = _work(job)
    except Exception as error:
        import traceback

        text = " ".join(str(error).split())[:300] or "no further text"
        message = f"internal error, {type(error).__name__}: {text}; please report it with the case"
        finding = Finding(job.file, 1, 1, message, "internal-error")
        outcome = Outcome(job.file, "internal error", findings=(finding,), detail=traceback.format_exc())
    findings = tuple(replace(f, file=_relative(f.file)) for f in outcome.findings)
    return replace(outcome, findings=findings, seconds=time.perf_counter() - began)


def _relative(file: str) -> str:
    """An absolute path as seen from here: the user's own card is known by where it lies."""
    return Path(os.path.relpath(file)).as_posix() if os.path.isabs(file) else file


def _work(job: Job) -> Outcome:
    from pathcalc.case.loader import load
    from pathcalc.path.solution import solve

    file = Path(job.file)
    try:
        case = load(file, root=job.root)
    except InvalidCaseError as error:
        return Outcome(job.file, "invalid", findings=tuple(error.findings))
    except PathcalcError as error:
        return Outcome(job.file, "unreadable", findings=(Finding(job.file, 1, 1, str(error), "unreadable"),))
    known = Outcome(job.file, "passed", id=case.id, title=case.title)
    try:
        settings = Settings() if job.settings is None else read_settings(Path(job.settings))
        solution = solve(case)
        results = solution.to_dict()
    except InvalidCaseError as error:
        return replace(known, status="invalid", findings=tuple(error.findings))
    except NoSolutionError as error:
        return replace(known, status="no solution", findings=(no_solution(case, job.file, error),))
    return _Held(job, case, solution, results, settings).outcome(known)


def no_solution(case: Case, shown: str, error: NoSolutionError) -> Finding:
    """Why a case has no solution, at the leg that has none."""
    from pathcalc.case.places import place_of

    trouble = error.trouble
    file, line, column = place_of(case, trouble.at) or (shown, 1, 1)
    at = f"{trouble.at}: " if trouble.at else ""
    return Finding(file, line, column, f"{at}{trouble.text}; {trouble.remedy}", trouble.code)


class _Held:
    """A solved case, held against its stored result."""

    def __init__(self, job: Job, case: Case, solution: Solution, results: dict[str, Any], settings: Settings) -> None:
        self.job, self.case, self.solution, self.results = job, case, solution, results
        self.tolerances = tolerances_for(case, Path(job.file), settings)

    def outcome(self, known: Outcome) -> Outcome:
        """Status, findings and misses; the text to store where that is asked for."""
        from pathcalc.library.inputs import inputs_of
        from pathcalc.library.verdict import verdict_of

        inputs = inputs_of(self.case)
        known = replace(known, verdict=verdict_of(self.results))
        stored, trouble = self._stored()
        judgement = self._judge(stored, inputs)
        findings = self._checks() + self._limits(() if judgement is None else judgement.still_missed)
        known = replace(known, findings=tuple(findings))
        if judgement is not None:
            known = replace(
                known,
                misses=judgement.misses,
                changes=judgement.changes,
                notes=judgement.notes,
                stored_limits_missed=judgement.still_missed,
                findings=(*findings, *(self._miss(miss) for miss in judgement.misses)),
            )
        elif trouble is not None:
            known = known.with_finding(trouble)
        known = replace(known, status=self._status(known, judgement, trouble))
        return known if self.job.reason is None else self._to_accept(known, judgement, inputs)

    def _stored(self) -> tuple[dict[str, Any] | None, Finding | None]:
        place = results_path(Path(self.job.file))
        if not self.job.stored:
            return None, None
        try:
            return parse_results(read_bytes(place)), None
        except FileNotFoundError:
            text = f"there is no stored result {place.name}; look at the result, then accept it with a reason"
            return None, Finding(self.job.file, 1, 1, text, "no-stored-result")
        except ResultsError as error:
            text = f"{error}; restore it from version control, or accept the result anew"
            return None, Finding(place.as_posix(), 1, 1, text, "stored-result-damaged")

    def _judge(self, stored: dict[str, Any] | None, inputs: Any) -> Judgement | None:
        if stored is None:
            return None
        from pathcalc.library.digests import changes
        from pathcalc.library.regression import judge

        accepted, folder = stored.get("accepted"), Path(self.job.file).parent
        plain = {"files": {}, "cards": {}} if accepted is None else {**accepted, "files": {}}
        return judge(stored, self.results, inputs, self.tolerances, changes(plain, stored["software"], folder))

    def _status(self, known: Outcome, judgement: Judgement | None, trouble: Finding | None) -> str:
        verdict = known.verdict
        if verdict is not None and verdict.failed:
            return "check failed"
        if trouble is not None:
            return trouble.code.replace("-", " ")
        if judgement is not None and judgement.misses:
            return "differs"
        missed = self._missed_rows()
        still = () if judgement is None else judgement.still_missed
        return "limit missed" if any(name not in still for name in missed) else "passed"

    def _missed_rows(self) -> dict[str, dict[str, Any]]:
        from pathcalc.library.compare import limit_rows

        return {name: row for name, row in limit_rows(self.results).items() if not row["passed"]}

    def _checks(self) -> list[Finding]:
        from pathcalc.path.checks import meaning

        found = []
        for row in self.results["checks"]:
            if not row["passed"]:
                text = (
                    f"check failed: {row['name']} at {row['at']}: {row['value']:.3g} against {row['tolerance']:.2g}; "
                    f"{meaning(row['name'])}"
                )
                found.append(Finding(*self._place(row["at"] or "legs"), text, "check-failed"))
        return found

    def _limits(self, still: tuple[str, ...]) -> list[Finding]:
        """Limits that are missed; those that the stored result misses too are warnings."""
        from pathcalc.case.places import place_of
        from pathcalc.library.words import limit_text

        found = []
        for name, row in self._missed_rows().items():
            place = place_of(self.case, row["quantity"]) or (self.job.file, 1, 1)
            as_stored = name in still
            text = limit_text(row, self.results["boundary"] == "flow") + (", as accepted" if as_stored else "")
            found.append(Finding(*place, text, "limit-missed", "warning" if as_stored else "error"))
        return found

    def _miss(self, miss: Any) -> Finding:
        from pathcalc.library.words import miss_text

        return Finding(*self._place(miss.address), miss_text(miss), "differs")

    def _place(self, address: str) -> Place:
        from pathcalc.case.places import place_of_result

        return place_of_result(self.case, address) or (self.job.file, 1, 1)

    def _to_accept(self, known: Outcome, judgement: Judgement | None, inputs: Any) -> Outcome:
        """With the text to store; a case whose checks fail is refused, one that is stored as it is stays."""
        from pathcalc.library.digests import cards_of, files_of, software

        if known.status == "check failed":
            return replace(known, status="refused", refused_for="check failed")
        if judgement is not None and self._nothing_to_accept(known):
            return replace(known, notes=(*known.notes, "is stored already as it is now"))
        plugins = {k: v for k, v in software().items() if k not in self.results["software"]}
        accepted = {
            "reason": self.job.reason,
            "files": files_of(self.case, Path(self.job.file).name),
            "cards": cards_of(self.case),
            **({"plugins": plugins} if plugins else {}),
            "inputs": inputs,
        }
        return replace(known, status="accepted", text=canonical({**self.results, "accepted": accepted}))

    def _nothing_to_accept(self, known: Outcome) -> bool:
        from pathcalc.library.digests import changes

        stored, _ = self._stored()
        if stored is None or "accepted" not in stored or known.misses or known.changes:
            return False
        if known.status != "passed":
            return False
        return not changes(stored["accepted"], stored["software"], Path(self.job.file).parent)
