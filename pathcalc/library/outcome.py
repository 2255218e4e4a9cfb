"""What became of one case in a run: plain values that pass between processes and into every form of output."""

from __future__ import annotations

from dataclasses import asdict, dataclass, field, fields, replace
from typing import Any

from pathcalc.errors import Finding
from pathcalc.library.verdict import Tightest, Verdict

STATUSES: dict[str, int] = {
    "crashed": 5, "internal error": 5, "over time": 1, "not written": 2, "unreadable": 2, "invalid": 3,
    "no solution": 4, "refused": 1, "check failed": 1, "stored result damaged": 1, "differs": 1, "limit missed": 1,
    "no stored result": 1, "case is gone": 1, "accepted": 0, "passed": 0, "unchanged": 0,
}  # fmt: skip
"""Every status with its exit code, what needs a look first."""
WITHOUT_RESULT = frozenset({"crashed", "internal error", "over time", "unreadable", "invalid", "no solution"})


@dataclass(frozen=True)
class Miss:
    """A result that is not the stored one. SI; ``tolerances`` is None where it is no difference of two numbers."""

    address: str
    stored: float | str | None
    now: float | str | None
    unit: str
    tolerances: float | None
    allowed: float | None
    reason: str
    """Reason of the tolerance where it is not the default."""
    causes: tuple[str, ...]
    """Inputs, cards and software that have changed and can have done it."""


@dataclass(frozen=True)
class Outcome:
    """What became of one case. ``file`` is its path as shown, ``findings`` what is to be said, each at its place."""

    file: str
    status: str
    id: str = ""
    title: str = ""
    findings: tuple[Finding, ...] = ()
    misses: tuple[Miss, ...] = ()
    changes: tuple[str, ...] = ()
    """What has changed since the result was accepted, whether or not a result differs."""
    notes: tuple[str, ...] = ()
    verdict: Verdict | None = None
    stored_limits_missed: tuple[str, ...] = ()
    """Limits that are missed now as they were when the result was accepted."""
    refused_for: str = ""
    """The status that accepting was refused for."""
    text: str | None = field(default=None, repr=False)
    """The result as it would be stored, where it was asked for and may be."""
    seconds: float = 0.0
    detail: str = ""
    """Where an internal error came from."""

    @property
    def code(self) -> int:
        """Exit code of the case: one that is refused keeps that of what stands in the way."""
        return STATUSES[self.refused_for or self.status]

    def with_finding(self, finding: Finding) -> Outcome:
        """The same with one finding more, before the others."""
        return replace(self, findings=(finding, *self.findings))

    def to_dict(self) -> dict[str, Any]:
        """Plain values for passing on."""
        return asdict(self)

    @classmethod
    def from_dict(cls, data: dict[str, Any]) -> Outcome:
        """From :meth:`to_dict`, after JSON."""
        verdict = data["verdict"]
        if verdict is not None:
            tightest = verdict["tightest"]
            verdict = Verdict(
                **{
                    **verdict,
                    "tightest": None if tightest is None else Tightest(**tightest),
                    "missed": tuple(verdict["missed"]),
                    "failed": tuple(verdict["failed"]),
                }
            )
        known = {f.name for f in fields(cls)}
        return cls(
            **{
                **{k: tuple(v) if isinstance(v, list) else v for k, v in data.items() if k in known},
                "findings": tuple(Finding(**f) for f in data["findings"]),
                "misses": tuple(Miss(**{**m, "causes": tuple(m["causes"])}) for m in data["misses"]),
                "verdict": verdict,
            }
        )

    def public(self) -> dict[str, Any]:
        """What the JSON of a run tells of the case: the same on every run."""
        return {
            "file": self.file,
            "id": self.id,
            "title": self.title,
            "status": self.status,
            "code": self.code,
            "findings": [asdict(f) for f in self.findings],
            "misses": [asdict(m) for m in self.misses],
            "changes": list(self.changes),
            "notes": list(self.notes),
            "verdict": None if self.verdict is None else self.verdict.to_dict(),
        }


def rank(outcome: Outcome) -> tuple[Any, ...]:
    """Sort key: what needs a look first, the largest difference and the tightest limit before others of its status."""
    worst = max((float("inf") if m.tolerances is None else m.tolerances for m in outcome.misses), default=0.0)
    tightest = outcome.verdict.tightest if outcome.verdict else None
    share = float("inf") if tightest is None else float("-inf") if tightest.share is None else tightest.share
    return list(STATUSES).index(outcome.status), -worst, share, outcome.file
