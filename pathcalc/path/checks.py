"""Self-checks of a solved path: closure, balances, second law, path independence.

Each check states what it compares, relative to the magnitudes along the leg, and the tolerance it is held to:
the error estimate of the quadrature and what rounding may leave, nothing wider.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equilibrium.flash import flash
from pathcalc.legs.integration.differentials import QUANTITIES
from pathcalc.legs.integration.segments import Segment, integrate_segments
from pathcalc.legs.run import Place, place_of
from pathcalc.legs.ways import isochore, isotherm
from pathcalc.path.solver import CYCLE_TOLERANCE, SolvedLeg
from pathcalc.path.values import closure_of, rounding_of, scales
from pathcalc.words import say

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution

Check = dict[str, Any]

NAMES = (
    "closure",
    "first law",
    "heat as integral of T ds",
    "second law",
    "heat flows to the colder body",
    "exergy balance",
    "path independence",
    "cycle closes",
    "energy balance of the path",
)
"""The checks by name, as results have them."""


def name_in_words(name: str) -> str:
    """The name of a check in the words in force; the name itself where it is none of ours."""
    return say(f"check.{_key(name)}") if name in NAMES else name


def meaning(name: str) -> str:
    """What it means when a check fails, for messages; empty where it is none of ours."""
    return say(f"meaning.{_key(name)}") if name in NAMES else ""


def _key(name: str) -> str:
    return name.replace(" ", "-")


def _row(name: str, at: str, value: float, tolerance: float, passed: bool | None = None) -> Check:
    good = bool(value <= tolerance) if passed is None else passed
    return {"name": name, "at": at, "passed": good, "value": float(value), "tolerance": float(tolerance)}


def all_checks(solution: Solution) -> list[Check]:
    """Every check of every leg, then those of the whole path."""
    rows: list[Check] = []
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        for solved in solution.path.legs:
            rows.extend(_leg_checks(solution, solved))
        rows.extend(_path_checks(solution))
    return rows


def _error_of(solved: SolvedLeg, *names: str) -> Array:
    total = np.zeros(solved.integrals.value.shape[1])
    for name in names:
        total = total + solved.integrals.error[QUANTITIES.index(name)]
    return total


def _leg_checks(solution: Solution, solved: SolvedLeg) -> list[Check]:
    path, name = solution.path, solved.leg.name
    error, closure = closure_of(path, solved)
    rounding = float(rounding_of(path, solved)[0])
    rows = [_row("closure", name, float(closure[0]), float(error[0]) + rounding)]
    rows.append(_first_law(solution, solved, rounding))
    if solved.outcome.reversible:
        rows.append(_heat_as_integral(solution, solved, rounding))
    rows.append(_second_law(solution, solved))
    rows.extend(_reservoir_side(solution, solved))
    rows.append(_exergy_balance(solution, solved, rounding))
    rows.extend(_path_independence(solution, solved, rounding))
    return rows


def _energy_scale(solution: Solution, solved: SolvedLeg) -> float:
    row = 2 if solution.path.setting.flow else 1
    magnitude = solved.integrals.magnitude
    work = magnitude[QUANTITIES.index("v_dp" if solution.path.setting.flow else "p_dv")][0]
    exchanged = np.abs(solved.exchange.work[0]), np.abs(solved.exchange.heat[0])
    return float(max(scales(solution.path, solved)[row][0], work, *exchanged))


def _first_law(solution: Solution, solved: SolvedLeg, rounding: float) -> Check:
    """Heat and work against the closed-form change of the state function; both by their own integrals if they are

    (a reversible leg), so that the balance is not true by construction.
    """
    flow, a, b, i = solution.path.setting.flow, solved.inlet, solved.end, solved.integrals
    change = (b.h - a.h) if flow else (b.u - a.u)
    if solved.outcome.reversible:
        heat, work = i["T_ds"], i["v_dp"] if flow else -i["p_dv"]
        error = _error_of(solved, "T_ds", "v_dp" if flow else "p_dv")
    else:
        heat, work = solved.exchange.heat + solved.outcome.carried(solved.inlet, "h"), solved.exchange.work
        error = _error_of(solved, "dh" if flow else "du")
    scale = _energy_scale(solution, solved)
    miss = abs(float((heat + work - change)[0])) / scale
    return _row("first law", solved.leg.name, miss, float(error[0]) / scale + rounding)


def _heat_as_integral(solution: Solution, solved: SolvedLeg, rounding: float) -> Check:
    """The heat of a reversible leg is the integral of T ds."""
    scale = _energy_scale(solution, solved)
    energy = "dh" if solution.path.setting.flow else "du"
    error = float(_error_of(solved, "T_ds", energy, "v_dp", "p_dv")[0]) / scale
    miss = abs(float((solved.exchange.heat - solved.integrals["T_ds"])[0])) / scale
    return _row("heat as integral of T ds", solved.leg.name, miss, error + rounding)


def _second_law(solution: Solution, solved: SolvedLeg) -> Check:
    """Entropy generated is not negative, J/(kg K); the tolerance is the error of the entropy change."""
    M = solution.path.model.M
    scale = float(scales(solution.path, solved)[0][0]) / M
    error = float(_error_of(solved, "ds", "dh_over_T")[0]) / M
    tolerance = error + float(rounding_of(solution.path, solved)[0]) * scale
    value = float(solved.entropy_generated[0]) / M
    return _row("second law", solved.leg.name, value, tolerance, passed=value >= -tolerance)


def _reservoir_side(solution: Solution, solved: SolvedLeg) -> list[Check]:
    """Heat flows from the warmer to the colder body all along the leg, not only in sum; K, largest wrong step.

    Along a leg with heat the temperature is at its extremes at the ends.
    """
    reservoir = getattr(solved.leg, "reservoir", None)
    if reservoir is None:
        return []
    T_res = float(np.asarray(solution.path.setting.molar(reservoir))[0])
    ends = float(solved.inlet.T[0]), float(solved.end.T[0])
    heat = float(solved.exchange.heat[0])
    wrong = 0.0 if heat == 0.0 else max(ends) - T_res if heat > 0.0 else T_res - min(ends)
    return [_row("heat flows to the colder body", solved.leg.name, max(wrong, 0.0), 1e-6 * T_res)]


def _exergy_balance(solution: Solution, solved: SolvedLeg, rounding: float) -> Check:
    """Exergy in with work and heat, less the exergy destroyed, is the change of exergy (Gouy-Stodola)."""
    setting = solution.path.setting
    T0, p0, a, b = setting.T0, setting.p0, solved.inlet, solved.end
    entropy = b.s - a.s
    if setting.flow:
        change, useful = (b.h - a.h) - T0 * entropy, solved.exchange.work
    else:
        change = (b.u - a.u) + p0 * (b.v - a.v) - T0 * entropy
        useful = solved.exchange.work + p0 * (b.v - a.v)
    with_heat = solved.exchange.heat - T0 * (solved.ds - solved.entropy_generated)
    with_heat = with_heat + solved.outcome.carried(solved.inlet, "h")
    miss = useful + with_heat - T0 * solved.entropy_generated - change
    scale = _energy_scale(solution, solved) + float((T0 * scales(solution.path, solved)[0])[0])
    energy = "dh" if setting.flow else "du"
    error = float((_error_of(solved, energy, "p_dv", "v_dp") + T0 * _error_of(solved, "ds"))[0])
    if not setting.flow:  # thin vapours: p0 dv is many times the exergy, and stands on both sides
        error += 4.0 * np.finfo(float).eps * float((p0 * (np.abs(a.v) + np.abs(b.v)))[0])
    return _row("exergy balance", solved.leg.name, abs(float(miss[0])) / scale, error / scale + rounding)


def _path_independence(solution: Solution, solved: SolvedLeg, rounding: float) -> list[Check]:
    """The same change of state integrated along another way: an isochore or an isotherm first.

    No row where there is no other way within the range of the equation.
    """
    path = solution.path
    way = _other_way(solution, solved)
    if way is None:
        return []
    other = integrate_segments(path.model, path.setting.boundary, way, path.setting.n)
    if not bool(np.isfinite(other.value).all()):
        return []
    scale = np.maximum(scales(path, solved), other.magnitude[:3])
    miss = (np.abs(other.value[:3] - solved.integrals.value[:3]) / scale).max(axis=0)
    error = ((other.error[:3] + solved.integrals.error[:3]) / scale).max(axis=0)
    return [_row("path independence", solved.leg.name, float(miss[0]), float(error[0]) + rounding)]


def _other_way(solution: Solution, solved: SolvedLeg) -> list[Segment] | None:
    path, a, b = solution.path, solved.inlet, solved.end
    model = path.model

    def at(T: Array, v: Array) -> Place | None:
        points = flash(model, {"T": T, "v": v})
        return place_of(model, points) if bool((points.reason == 0).all()) else None

    if not bool(np.isclose(a.T, b.T, rtol=1e-6).all() or np.isclose(a.v, b.v, rtol=1e-6).all()):
        corner = at(a.T, b.v)
        if corner is not None:
            return [isotherm(a, corner), isochore(corner, b)]
    for factor in (1.05, 0.97):
        warm_a, warm_b = at(a.T * factor, a.v), at(a.T * factor, b.v)
        if warm_a is not None and warm_b is not None:
            return [isochore(a, warm_a), isotherm(warm_a, warm_b), isochore(warm_b, b)]
    return None


def _path_checks(solution: Solution) -> list[Check]:
    path = solution.path
    rows: list[Check] = []
    if path.case.cycle:
        last = path.legs[-1].end
        pairs = ((path.start.T, last.T), (path.start.p, last.p), (path.start.v, last.v))
        gap = max(abs(float((b / a - 1.0)[0])) for a, b in pairs)
        rows.append(_row("cycle closes", "totals", gap, CYCLE_TOLERANCE))
    energy = "h" if path.setting.flow else "u"
    total = change = scale = 0.0
    for leg in path.legs:
        share = 1.0 if leg.moles is None else float(leg.moles[0])
        brought = leg.exchange.heat + leg.exchange.work + leg.outcome.carried(leg.inlet, "h")
        total += share * float(brought[0])
        change += share * float((getattr(leg.end, energy) - getattr(leg.inlet, energy))[0])
        scale += share * _energy_scale(solution, leg)
    tolerance = len(path.legs) * max(
        float(_error_of(leg, "dh", "du", "p_dv", "v_dp")[0]) / _energy_scale(solution, leg)
        + float(rounding_of(path, leg)[0])
        for leg in path.legs
    )
    rows.append(_row("energy balance of the path", "totals", abs(total - change) / scale, tolerance))
    return rows
