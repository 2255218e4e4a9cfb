"""The same path with other equations, in one table."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from pathcalc.errors import NoSolutionError, Trouble
from pathcalc.path.results import plain

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution


def compared(solution: Solution) -> list[dict[str, Any]]:
    """One row an equation of ``report.compare_with``; quantities are None where it has no solution."""
    rows: list[dict[str, Any]] = []
    for equation in solution.case.report.compare_with:
        other = solved_with(solution, equation)
        addresses = compared_addresses(solution)
        quantities = {a: None if isinstance(other, str) else plain(other.quantity(a)) for a in addresses}
        rows.append({"equation": equation, "quantities": quantities})
    return rows


def compared_addresses(solution: Solution) -> list[str]:
    """What is compared: end state, heat and work of every leg, the totals, and every limited quantity."""
    addresses = [f"start.{key}" for key in ("T", "p", "v")]
    addresses += [
        f"{name}.{key}"
        for name in solution.legs
        for key in ("T", "p", "v", "x", "heat", "work", "delta.s", "delta.g", "entropy_generated")
        if key != "x" or solution.states[name].x == solution.states[name].x
    ]
    if solution.totals.work is not None:
        addresses += ["totals.heat", "totals.work", "totals.exergy_destroyed"]
    addresses += [limit.quantity for limit in solution.case.limits]
    return list(dict.fromkeys(addresses))


def solved_with(solution: Solution, equation: str) -> Solution | str:
    """The case solved with another equation, or why that has no solution. Solved once."""
    kept: dict[str, Solution | str] = solution.__dict__.setdefault("_others", {})
    if equation not in kept:
        kept[equation] = _solve(solution, equation)
    return kept[equation]


def _solve(solution: Solution, equation: str) -> Solution | str:
    from pathcalc.path.solution import Solution as Solved
    from pathcalc.path.solver import solve_path

    try:
        path = solve_path(solution.case, equation=equation)
    except NoSolutionError as error:
        return _told(error.trouble)
    trouble = path.setting.status.trouble_of(0)
    return Solved(path, lanes=False) if trouble is None else _told(trouble)


def _told(trouble: Trouble) -> str:
    return f"{trouble.at}: {trouble.text}; {trouble.remedy}"
