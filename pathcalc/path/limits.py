"""Acceptance limits of a case against its results."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution
    from pathcalc.quantities.values import Quantity


def evaluated_limits(solution: Solution) -> list[dict[str, Any]]:
    """One row a limit: quantity, value, min, max (SI, per kilogram), passed, margin.

    The margin is the distance to the nearer bound, negative where it is missed. A quantity that has no value (a
    quality outside the dome) does not meet its limit: value and margin are None.
    """
    rows: list[dict[str, Any]] = []
    M = solution.path.model.M
    for limit in solution.case.limits:
        value = solution.quantity(limit.quantity)
        known = isinstance(value, float) and value == value
        low, high = _per_mass(limit.min, M), _per_mass(limit.max, M)
        margin = None
        if known:
            margins = [value - low] if low is not None else []
            margins += [high - value] if high is not None else []
            margin = min(margins)
        rows.append(
            {
                "quantity": limit.quantity,
                "value": value if known else None,
                "min": low,
                "max": high,
                "passed": margin is not None and margin >= 0.0,
                "margin": margin,
            }
        )
    return rows


def _per_mass(q: Quantity | None, M: float) -> float | None:
    if q is None:
        return None
    if q.per != "mole":
        return q.value
    return q.value * M if q.dimension == "density" else q.value / M
