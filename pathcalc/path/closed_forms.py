"""Closed forms that a pocket calculator can follow: the ideal gas and the van der Waals gas.

With p = R T/(v - b) - a_c/v^2 the heat capacity c_v is that of the ideal gas, and the two integrals separate
(a_c = b = 0 is the ideal gas):

    du = c_v0 dT + a_c/v^2 dv        ds = c_v0/T dT + R/(v - b) dv
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pathcalc.path.maths import number, shown, signed, with_unit
from pathcalc.path.steps import Step
from pathcalc.words import say

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution
    from pathcalc.path.solver import SolvedLeg


def closed_form_steps(solution: Solution, solved: SolvedLeg, what: str) -> list[Step]:
    """Worked closed forms for ``s``, ``u`` or ``work`` of a leg within one phase; nothing for other equations."""
    equation = solution.path.model.equation
    if equation not in ("ideal-gas", "van-der-waals"):
        return []
    if any(piece.in_dome for piece in solved.integrals.pieces):
        return []
    if what == "s":
        return [_entropy(solution, solved)]
    if what == "u":
        return [_energy(solution, solved)]
    return _work(solution, solved)


def _constants(solution: Solution) -> tuple[float, float, float]:
    """R, a and b per kilogram: J/(kg K), Pa m6/kg2, m3/kg."""
    model = solution.path.model
    M = model.M
    a, b = 0.0, 0.0
    if model.equation == "van-der-waals" and model.info is not None:
        parameters = {p.symbol: p.value for p in model.info.parameters}
        a, b = parameters["a_c"] / M**2, parameters["b"] / M
    return model.R / M, a, b


def _ideal_parts(solution: Solution, solved: SolvedLeg) -> tuple[float, float]:
    """Integrals of c_v0 dT (J/kg) and of c_v0/T dT (J/(kg K)) between the ends."""
    model = solution.path.model
    T = np.array([solved.inlet.T[0], solved.end.T[0]])
    _cp, h, s = model.ideal.terms(T)
    R = model.R / model.M
    return float(R * (h[1] - h[0] - (T[1] - T[0]))), float(R * (s[1] - s[0] - np.log(T[1] / T[0])))


def _source(solution: Solution) -> str:
    return say("source.van-der-waals" if solution.path.model.equation == "van-der-waals" else "source.ideal-gas")


def _entropy(solution: Solution, solved: SolvedLeg) -> Step:
    R, _a, b = _constants(solution)
    v1, v2 = (float(x[0]) / solution.path.model.M for x in (solved.inlet.v, solved.end.v))
    _energy_part, thermal = _ideal_parts(solution, solved)
    real = b > 0.0
    ratio = r"\frac{v_2-b}{v_1-b}" if real else r"\frac{v_2}{v_1}"
    if real:
        top, bottom = (f"{number(v)}-{number(b)}" for v in (v2, v1))
    else:
        top, bottom = number(v2), number(v1)
    return Step(
        title=say("step.closed-form"),
        formula=rf"\Delta s=\int_{{T_1}}^{{T_2}}\frac{{c_v^0}}{{T}}\,\mathrm{{d}}T+R\ln{ratio}",
        numbers=rf"{shown(thermal, 'entropy')}+{shown(R, 'entropy')}\times\ln\frac{{{top}}}{{{bottom}}}",
        result=with_unit(thermal + R * float(np.log((v2 - b) / (v1 - b))), "entropy"),
        source=_source(solution),
    )


def _energy(solution: Solution, solved: SolvedLeg) -> Step:
    _R, a, _b = _constants(solution)
    v1, v2 = (float(x[0]) / solution.path.model.M for x in (solved.inlet.v, solved.end.v))
    caloric, _thermal = _ideal_parts(solution, solved)
    formula = r"\Delta u=\int_{T_1}^{T_2}c_v^0\,\mathrm{d}T"
    numbers = shown(caloric, "energy")
    if a > 0.0:
        formula += r"-a_c\left(\frac{1}{v_2}-\frac{1}{v_1}\right)"
        numbers += rf"-{number(a * 1e-3)}\times\left(\frac{{1}}{{{number(v2)}}}-\frac{{1}}{{{number(v1)}}}\right)"
    return Step(
        title=say("step.closed-form"),
        formula=formula,
        numbers=numbers,
        result=with_unit(caloric - a * (1.0 / v2 - 1.0 / v1), "energy"),
        source=_source(solution),
    )


def _work(solution: Solution, solved: SolvedLeg) -> list[Step]:
    """The reversible isothermal leg: -integral of p dv, or that of v dp, in closed form."""
    if solved.leg.path != "isothermal" or not solved.outcome.reversible:
        return []
    R, a, b = _constants(solution)
    M, T = solution.path.model.M, float(solved.inlet.T[0])
    v1, v2 = (float(x[0]) / M for x in (solved.inlet.v, solved.end.v))
    p1, p2 = float(solved.inlet.p[0]), float(solved.end.p[0])
    real = a > 0.0
    ratio = r"\frac{v_2-b}{v_1-b}" if real else r"\frac{v_2}{v_1}"
    top, bottom = (f"{number(v)}-{number(b)}" if real else number(v) for v in (v2, v1))
    formula = rf"w=-R\,T\ln{ratio}"
    numbers = rf"-{shown(R, 'entropy')}\times {number(T)}\times\ln\frac{{{top}}}{{{bottom}}}"
    value = -R * T * float(np.log((v2 - b) / (v1 - b)))
    if real:
        formula += r"-a_c\left(\frac{1}{v_2}-\frac{1}{v_1}\right)"
        numbers += rf"-{number(a * 1e-3)}\times\left(\frac{{1}}{{{number(v2)}}}-\frac{{1}}{{{number(v1)}}}\right)"
        value -= a * (1.0 / v2 - 1.0 / v1)
        if solution.path.setting.flow:
            formula += r"+p_2\,v_2-p_1\,v_1"
            numbers += rf"+{shown(p2, 'p')}\times {number(v2)}-{signed(p1 * 1e-3)}\times {number(v1)}"
            value += p2 * v2 - p1 * v1
    return [Step(say("step.closed-form"), formula, numbers, with_unit(value, "energy"), source=_source(solution))]
