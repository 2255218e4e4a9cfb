"""What a reader must know beside the numbers: ranges left, phases, shortcomings of the equation.

Codes: outside-range, above-pressure-range, heat-capacity-extrapolated, near-critical, two-phase, dense-cubic,
virial-dense, quantum-gas, no-dead-state, check-failed, comparison-failed,
comparison-without-shift, limit-without-value, unchecked, past-equilibrium, near-triple-point, near-saturation,
full-of-liquid. Temperatures and pressures are told in the units of the case.
"""

from __future__ import annotations

import itertools
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

import numpy as np

from pathcalc.equations.contract import Model
from pathcalc.equilibrium.points import PHASES
from pathcalc.equilibrium.saturation import saturation_at_T
from pathcalc.path.checks import meaning, name_in_words
from pathcalc.path.maths import rough
from pathcalc.path.told import Told
from pathcalc.words import say, say_of

if TYPE_CHECKING:
    from pathcalc.legs.run import Place
    from pathcalc.path.solution import Solution

Warning_ = dict[str, str]

NOTES = frozenset({"two-phase", "unchecked"})
"""Codes of what a reader should know but need not act on."""

CUBICS = frozenset({"van-der-waals", "redlich-kwong", "soave", "peng-robinson"})
NEAR_TRIPLE = 0.03
"""Relative distance in T above the triple point within which a wet state is warned of (common practice, no source)."""
NEAR_SATURATION = 1e-3
"""Relative distance in p from the vapour pressure within which a state of one phase is warned of (common practice,

no source)."""
NEAR_CRITICAL = 0.05
"""Relative distance in T within which the fluctuations that no classical equation has begin to matter

(common practice, no source)."""


def _warning(code: str, at: str, text: str) -> Warning_:
    return {"code": code, "at": at, "text": text}


def all_warnings(solution: Solution) -> list[Warning_]:
    """Warnings of the states in the order of the path, then of the equation, then of the record."""
    rows: list[Warning_] = []
    places = {"start": solution.path.start, **{leg.leg.name: leg.end for leg in solution.path.legs}}
    for name, place in places.items():
        rows.extend(_of_state(solution, name, place))
    rows.extend(_of_equation(solution))
    rows.extend(_of_legs(solution))
    with_other_way = {row["at"] for row in solution.checks if row["name"] == "path independence"}
    for name in solution.legs:
        if name not in with_other_way:
            rows.append(_warning("unchecked", name, say("warning.unchecked")))
    for row in solution.checks:
        if not row["passed"]:
            text = say(
                "warning.check-failed",
                name=f"'{name_in_words(row['name'])}'",
                value=f"{row['value']:.3g}",
                tolerance=f"{row['tolerance']:.3g}",
                meaning=meaning(row["name"]),
            )
            rows.append(_warning("check-failed", row["at"], text))
    return rows


def merged(rows: Sequence[Mapping[str, str]]) -> list[Warning_]:
    """Equal warnings of several places as one, for a reader; the results keep a row a place."""
    places: dict[tuple[str, str], list[str]] = {}
    for row in rows:
        places.setdefault((row["code"], row["text"]), []).append(row["at"])
    return [_warning(code, ", ".join(dict.fromkeys(at)), text) for (code, text), at in places.items()]


def _of_state(solution: Solution, name: str, place: Place) -> list[Warning_]:
    model = solution.path.model
    T, p, v = float(place.T[0]), float(place.p[0]), float(place.v[0])
    rows: list[Warning_] = []
    told = Told(solution)
    low, high = model.T_range
    if not low <= T <= high:
        values = {"T": told.temperature(T), "low": told.temperature(low), "high": told.temperature(high)}
        rows.append(_warning("outside-range", name, _stated(say("warning.outside-range", **values), model, "extremes")))
    ideal = model.ideal
    if not ideal.T_min <= T <= ideal.T_max:
        reach = {"low": told.temperature(ideal.T_min), "high": told.temperature(ideal.T_max)}
        text = say("warning.heat-capacity-extrapolated", T=told.temperature(T), **reach)
        rows.append(_warning("heat-capacity-extrapolated", name, text))
    if p > model.p_max:
        text = say("warning.above-pressure-range", p=told.pressure(p), limit=told.pressure(model.p_max))
        rows.append(_warning("above-pressure-range", name, text))
    if model.has_dome and abs(T / model.T_c - 1.0) < NEAR_CRITICAL and 0.4 < model.v_c / v < 2.0:
        rows.append(_warning("near-critical", name, _stated(say("warning.near-critical"), model, "critical")))
    rows.extend(_near_triple_point(solution, name, place))
    rows.extend(_near_saturation(solution, name, place))
    if model.equation in CUBICS and v < model.v_c / 1.5:
        rows.append(_warning("dense-cubic", name, say("warning.dense-cubic")))
    if model.equation == "virial" and v < 2.0 * model.v_c:
        rows.append(_warning("virial-dense", name, say("warning.virial-dense")))
    return rows


def _stated(warning: str, model: Model, where: str) -> str:
    """A warning, and what the source of the equation states of its uncertainty there."""
    found = [text for text in (model.info.uncertainty if model.info is not None else ()) if where in text]
    return say("warning.stated", warning=warning, uncertainty="; ".join(found)) if found else warning


def _near_triple_point(solution: Solution, name: str, place: Place) -> list[Warning_]:
    """Liquid or wet vapour close above the triple point: a little colder, and a solid forms."""
    model, card = solution.path.model, solution.path.card
    phase = PHASES[int(place.points.phase[0])]
    wet = phase in ("two-phase", "saturated-liquid", "saturated-vapour")
    T, p = float(place.T[0]), float(place.p[0])
    if not wet or not model.has_dome or model.T_triple * (1.0 + NEAR_TRIPLE) < T:
        return []
    told = Told(solution)
    triple = told.temperature(model.T_triple)
    if card.has("p_triple"):
        triple = say("warning.triple-point", T=triple, p=told.pressure(card.p_triple.value))
    text = say("warning.near-triple-point", T=told.temperature(T), p=told.pressure(p), triple=triple)
    return [_warning("near-triple-point", name, text)]


def _near_saturation(solution: Solution, name: str, place: Place) -> list[Warning_]:
    """One phase so near the vapour pressure that the last digits of T and p decide which phase it is."""
    model, T, p = solution.path.model, float(place.T[0]), float(place.p[0])
    x = float(place.points.x[0])
    if not model.has_dome or x == x or not model.T_triple < T < model.T_c:
        return []
    p_sat = float(saturation_at_T(model, np.array([T])).p[0])
    if not abs(p / p_sat - 1.0) < NEAR_SATURATION:
        return []
    phase = PHASES[int(place.points.phase[0])]
    told = Told(solution)
    text = say(
        "warning.near-saturation",
        phase=say_of("phase", phase),
        p=told.pressure(p),
        apart=rough(abs(p / p_sat - 1.0)),
        T=told.temperature(T),
    )
    return [_warning("near-saturation", name, text)]


def _full_of_liquid(solution: Solution) -> list[Warning_]:
    """Closed vessels whose vapour goes: from there the pressure rises by bars a kelvin."""
    rows: list[Warning_] = []
    for solved in solution.path.legs:
        if solution.path.setting.flow or solved.leg.path != "isochoric":
            continue
        pieces = [piece for piece in solved.integrals.pieces if np.any(piece.lanes == 0)]
        for before, after in itertools.pairwise(pieces):
            if before.in_dome and not after.in_dome and float(after.ends.v_a[0]) < solution.path.model.v_c:
                T, v = after.ends.T_a[:1], after.ends.v_a[:1]
                terms = solution.path.model.residual.pressure(T, v)
                told = Told(solution)
                text = say(
                    "warning.full-of-liquid",
                    T=told.temperature(float(T[0])),
                    p=told.pressure(float(terms.p[0])),
                    slope=told.pressure_difference(float(terms.p_T[0])),
                )
                rows.append(_warning("full-of-liquid", solved.leg.name, text))
    return rows


def _of_equation(solution: Solution) -> list[Warning_]:
    model, rows = solution.path.model, []
    if model.equation in CUBICS and model.T_c < 50.0:
        rows.append(_warning("quantum-gas", "fluid", say("warning.quantum-gas")))
    if np.isnan(solution.dead.h[0]):
        rows.append(_warning("no-dead-state", "surroundings", say("warning.no-dead-state")))
    return rows


def _of_legs(solution: Solution) -> list[Warning_]:
    rows: list[Warning_] = []
    through = [leg.leg.name for leg in solution.path.legs if any(p.in_dome for p in leg.integrals.pieces)]
    if through:
        rows.append(_warning("two-phase", ", ".join(through), say("warning.two-phase")))
    for row in solution.limits:
        if row["value"] is None:
            name = row["quantity"].rpartition(".")[0]
            phase = solution.states[name].phase if name in solution.states else ""
            text = say("warning.limit-without-value", phase=say_of("phase", phase))
            rows.append(_warning("limit-without-value", row["quantity"], text))
    rows.extend(_past_equilibrium(solution))
    rows.extend(_full_of_liquid(solution))
    if solution.case.fluid.volume_shift is not None and solution.case.report.compare_with:
        rows.append(_warning("comparison-without-shift", "comparison", say("warning.comparison-without-shift")))
    for equation in solution.case.report.compare_with:
        from pathcalc.path.comparison import solved_with

        other = solved_with(solution, equation)
        if isinstance(other, str):
            text = say("warning.comparison-failed", equation=equation, reason=other)
            rows.append(_warning("comparison-failed", "comparison", text))
    return rows


def _past_equilibrium(solution: Solution) -> list[Warning_]:
    """Legs against a pressure that end beyond it: left to itself the fluid would come to rest there."""
    rows: list[Warning_] = []
    told = Told(solution)
    for solved in solution.path.legs:
        against = getattr(solved.leg, "against", None)
        if against is None:
            continue
        p_ext, p = float(solution.path.setting.molar(against)[0]), float(solved.end.p[0])
        grows = float(solved.end.v[0]) > float(solved.inlet.v[0])
        if (grows and p < p_ext * (1.0 - 1e-9)) or (not grows and p > p_ext * (1.0 + 1e-9)):
            text = say("warning.past-equilibrium", p=told.pressure(p), against=told.pressure(p_ext))
            rows.append(_warning("past-equilibrium", solved.leg.name, text))
    return rows
