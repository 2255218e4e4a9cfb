"""How one solved case stands: limits, tightest margin, checks, warnings. What an index of many cases shows."""

from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import Any

from pathcalc.case.names import RESULT_KINDS
from pathcalc.library.quantities import kind_at
from pathcalc.quantities.limits import si_unit

PASSED = "passed"
LIMIT_MISSED = "limit missed"
CHECK_FAILED = "check failed"


@dataclass(frozen=True)
class Tightest:
    """The limit with the least margin. ``margin`` is in ``unit`` (SI), negative where the limit is missed.

    ``share`` is the margin as a part of the bound's own size in SI (of the value's where the bound is 0), so that
    limits of different kinds can be ranked; None where the quantity has no value, which counts as missed.
    """

    quantity: str
    value: float | None
    margin: float | None
    share: float | None
    unit: str
    passed: bool


@dataclass(frozen=True)
class Verdict:
    """How a case stands. ``status`` is ``passed``, ``limit missed`` or ``check failed`` (which outweighs a limit)."""

    id: str
    title: str
    status: str
    limits_met: int
    limits: int
    tightest: Tightest | None
    checks_passed: int
    checks: int
    warnings: int
    missed: tuple[str, ...]
    """Quantities of the limits that are missed, in the order of the case."""
    failed: tuple[str, ...]
    """Checks that failed, as ``name at place``."""

    def to_dict(self) -> dict[str, Any]:
        """Plain values for JSON."""
        return asdict(self)


def verdict_of(results: dict[str, Any]) -> Verdict:
    """The verdict on a results object (``Solution.to_dict()`` or a stored result)."""
    limits, checks = results["limits"], results["checks"]
    missed = tuple(row["quantity"] for row in limits if not row["passed"])
    failed = tuple(f"{row['name']} at {row['at']}" for row in checks if not row["passed"])
    rows = [_tightest(row, results["boundary"] == "flow") for row in limits]
    return Verdict(
        id=results["case"]["id"],
        title=results["case"]["title"],
        status=CHECK_FAILED if failed else LIMIT_MISSED if missed else PASSED,
        limits_met=len(limits) - len(missed),
        limits=len(limits),
        tightest=min(rows, key=_rank, default=None),
        checks_passed=len(checks) - len(failed),
        checks=len(checks),
        warnings=len(results["warnings"]),
        missed=missed,
        failed=failed,
    )


def _tightest(row: dict[str, Any], flow: bool) -> Tightest:
    value, margin = row["value"], row["margin"]
    kind = kind_at(row["quantity"], flow and row["quantity"].startswith("totals."))
    share = None
    if margin is not None and value is not None:
        bounds = [b for b in (row["min"], row["max"]) if b is not None]
        near = min(bounds, key=lambda b: abs(value - b), default=value)
        share = margin / (abs(near) or abs(value) or 1.0)
    unit = si_unit(RESULT_KINDS[kind], "mass") if kind in RESULT_KINDS else ""
    return Tightest(row["quantity"], value, margin, share, unit, row["passed"])


def _rank(row: Tightest) -> tuple[bool, float]:
    return row.share is not None, row.share or 0.0
