"""The pressure of a state from its equation of state, with the state's numbers put in.

Equations of two or three terms are shown whole; an equation of many terms by the derivative of its residual part.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pathcalc.equations.cubic import TwoConstantCubic
from pathcalc.equations.ideal import NoResidual
from pathcalc.equations.virial import VirialGas
from pathcalc.path.maths import number, signed
from pathcalc.path.state_parts import gas_constant
from pathcalc.path.steps import StateParts, Step

if TYPE_CHECKING:
    from pathcalc.legs.run import Place
    from pathcalc.path.solution import Solution

TITLE = "Pressure from the equation of state at T and v"


def pressure_steps(solution: Solution, parts: StateParts, place: Place) -> list[Step]:
    """p(T, v) of a state in one phase (kPa)."""
    residual, M = solution.path.model.residual, solution.path.model.M
    R, T, v, p = gas_constant(solution), parts["T"], parts["v"], float(place.p[0]) * 1e-3
    result = rf"{number(p)}\ \mathrm{{kPa}}"
    if isinstance(residual, NoResidual):
        return [Step(TITLE, r"p=\frac{R\,T}{v}", rf"\frac{{{number(R)}\times {number(T)}}}{{{number(v)}}}", result)]
    if isinstance(residual, TwoConstantCubic):
        return _cubic(residual, M, R, T, v, result)
    if isinstance(residual, VirialGas):
        return _virial(residual, M, R, T, v, result)
    return [
        Step(
            TITLE,
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
                "Attraction at the temperature of the state",
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
    note = f"Shifted volume: v + c with v = {v:.7g} and c = {shift:.7g} m³/kg." if shift else ""
    steps.append(
        Step(
            TITLE,
            rf"p=\frac{{R\,T}}{{{symbol}-b}}-\frac{{a}}{{{below}}}",
            rf"\frac{{{number(R)}\times {number(T)}}}{{{V}-{B}}}-\frac{{{number(a)}}}{{{numbers}}}",
            result,
            note=note,
        )
    )
    return steps


def _virial(equation: VirialGas, M: float, R: float, T: float, v: float, result: str) -> list[Step]:
    at = np.array([T])
    B = float(equation.B.in_T(at)[0][0]) / M
    C = 0.0 if equation.C is None else float(equation.C.in_T(at)[0][0]) / M**2
    formula, numbers = r"1+\frac{B}{v}", "1" + _term(B, number(v))
    note = "B in m³/kg at the temperature of the state."
    if C:
        formula += r"+\frac{C}{v^2}"
        numbers += _term(C, rf"{number(v)}^2")
        note = "B in m³/kg and C in m⁶/kg² at the temperature of the state."
    return [
        Step(
            TITLE,
            rf"p=\frac{{R\,T}}{{v}}\left({formula}\right)",
            rf"\frac{{{number(R)}\times {number(T)}}}{{{number(v)}}}\times\left({numbers}\right)",
            result,
            note=note,
        )
    ]


def _term(value: float, below: str) -> str:
    sign = "-" if value < 0.0 else "+"
    return rf"{sign}\frac{{{number(abs(value))}}}{{{below}}}"
