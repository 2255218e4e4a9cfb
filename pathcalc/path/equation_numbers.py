"""The pressure of a state from its equation of state, with the state's numbers put in.

Equations of two or three terms are shown whole; an equation of many terms by the derivative of its residual part.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from pathcalc.equations.cubic import TwoConstantCubic
from pathcalc.equations.ideal import NoResidual
from pathcalc.equations.virial import VirialGas
from pathcalc.path.maths import number, signed
from pathcalc.path.state_parts import gas_constant
from pathcalc.path.steps import StateParts, Step
from pathcalc.words import say

if TYPE_CHECKING:
    from pathcalc.legs.run import Place
    from pathcalc.path.solution import Solution


def pressure_steps(solution: Solution, parts: StateParts, place: Place) -> list[Step]:
    """p(T, v) of a state in one phase (kPa)."""
    residual, M = solution.path.model.residual, solution.path.model.M
    title = say("step.pressure")
    R, T, v, p = gas_constant(solution), parts["T"], parts["v"], float(place.p[0]) * 1e-3
    result = rf"{number(p)}\ \mathrm{{kPa}}"
    if isinstance(residual, NoResidual):
        return [Step(title, r"p=\frac{R\,T}{v}", rf"\frac{{{number(R)}\times {number(T)}}}{{{number(v)}}}", result)]
    if isinstance(residual, TwoConstantCubic):
        return _cubic(residual, M, R, T, v, result)
    if isinstance(residual, VirialGas):
        return _virial(residual, M, R, T, v, result)
    return [
        Step(
            title,
            r"p=\frac{R\,T}{v}\left(1+\delta\alpha^\mathrm{r}_\delta\right)",
            rf"\frac{{{number(R)}\times {number(T)}}}{{{number(v)}}}\times\left(1+{signed(parts['a_d'])}\right)",
            result,
        )
    ]


def _cubic(equation: TwoConstantCubic, M: float, R: float, T: float, v: float, result: str) -> list[Step]:
    alpha = float(equation.alpha.alpha(np.array([T]))[0][0])
    a_c, b, shift = equation.a_c / M**2 * 1e-3, equation.b / M, equation.shift / M
    a = a_c * alpha
    steps = []
    if alpha != 1.0:
        steps.append(
            Step(
                say("step.attraction"),
                r"a=a_c\,\alpha(T)",
                rf"{number(a_c)}\times {number(alpha)}",
                rf"{number(a)}\ \mathrm{{kPa\,m^6/kg^2}}",
            )
        )
    else:
        a = a_c
    x, symbol = (v + shift, r"\left(v+c\right)") if shift else (v, "v")
    V, B = number(x), number(b)
    if equation.form.delta1 == 0.0:
        below, numbers = rf"{symbol}^2", rf"{V}^2"
    elif equation.form.delta2 == 0.0:
        below, numbers = rf"{symbol}\left({symbol}+b\right)", rf"{V}\times({V}+{B})"
    else:
        below, numbers = rf"{symbol}^2+2\,b\,{symbol}-b^2", rf"{V}^2+2\times {B}\times {V}-{B}^2"
    note = say("note.shifted", v=f"{v:.7g}", c=f"{shift:.7g}") if shift else ""
    steps.append(
        Step(
            say("step.pressure"),
            rf"p=\frac{{R\,T}}{{{symbol}-b}}-\frac{{a}}{{{below}}}",
            rf"\frac{{{number(R)}\times {number(T)}}}{{{V}-{B}}}-\frac{{{number(a)}}}{{{numbers}}}",
            result,
            note=note,
        )
    )
    return [*steps, _residual_of_cubic(equation, R, T, a, b, v, shift)]


def _residual_of_cubic(
    equation: TwoConstantCubic, R: float, T: float, a: float, b: float, v: float, shift: float
) -> Step:
    """α^r of a cubic equation in closed form (module :mod:`pathcalc.equations.cubic`)."""
    x, symbol = (v + shift, r"(v+c)") if shift else (v, "v")
    d1, d2 = equation.form.delta1, equation.form.delta2
    eta = b / x
    first, first_numbers = r"-\ln(1-\eta)", rf"-\ln\left(1-{number(eta)}\right)"
    if d1 == d2:
        second = rf"-\frac{{a}}{{R\,T\,{symbol}}}"
        numbers = rf"-\frac{{{number(a)}}}{{{number(R)}\times {number(T)}\times {number(x)}}}"
        value = -math.log(1.0 - eta) - a / (R * T * x)
    else:
        upper, lower = 1.0 + d1 * eta, 1.0 + d2 * eta
        second = r"-\frac{a}{(\delta_1-\delta_2)\,b\,R\,T}\,\ln\frac{1+\delta_1\,\eta}{1+\delta_2\,\eta}"
        below = (d1 - d2) * b * R * T
        numbers = rf"-\frac{{{number(a)}}}{{{number(below)}}}\times\ln\frac{{{number(upper)}}}{{{number(lower)}}}"
        value = -math.log(1.0 - eta) - a / below * math.log(upper / lower)
    if shift:
        first += r"-\ln\frac{v+c}{v}"
        first_numbers += rf"-\ln\frac{{{number(x)}}}{{{number(v)}}}"
        value -= math.log(x / v)
    note = "" if d1 == d2 else say("note.deltas", first=f"{d1:.7g}", second=f"{d2:.7g}")
    return Step(
        say("step.residual"),
        rf"\alpha^\mathrm{{r}}={first}{second},\quad \eta=b/{symbol}",
        first_numbers + numbers,
        number(value),
        note=note,
    )


def _virial(equation: VirialGas, M: float, R: float, T: float, v: float, result: str) -> list[Step]:
    at = np.array([T])
    B = float(equation.B.in_T(at)[0][0]) / M
    C = 0.0 if equation.C is None else float(equation.C.in_T(at)[0][0]) / M**2
    formula, numbers = r"1+\frac{B}{v}", "1" + _term(B, number(v))
    note = say("note.virial.B")
    if C:
        formula += r"+\frac{C}{v^2}"
        numbers += _term(C, rf"{number(v)}^2")
        note = say("note.virial.C")
    return [
        Step(
            say("step.pressure"),
            rf"p=\frac{{R\,T}}{{v}}\left({formula}\right)",
            rf"\frac{{{number(R)}\times {number(T)}}}{{{number(v)}}}\times\left({numbers}\right)",
            result,
            note=note,
        )
    ]


def _term(value: float, below: str) -> str:
    sign = "-" if value < 0.0 else "+"
    return rf"{sign}\frac{{{number(abs(value))}}}{{{below}}}"
