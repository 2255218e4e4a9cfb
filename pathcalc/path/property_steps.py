"""How each property of a state follows from its temperature and volume, with the numbers put in.

Of one phase by derivatives of the Helmholtz energy (R. Span, Multiparameter Equations of State, Springer 2000,
table 3.9); of two phases by mixing the saturated phases.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

from pathcalc.path.equation_numbers import pressure_steps
from pathcalc.path.maths import bracketed, number, shown, signed, with_unit
from pathcalc.path.state_parts import STANDARD_KPA, gas_constant
from pathcalc.path.steps import StateParts, Step

if TYPE_CHECKING:
    from pathcalc.legs.run import Place
    from pathcalc.path.solution import Solution

SPAN = "R. Span, Multiparameter Equations of State (Springer 2000), table 3.9"


def property_steps(solution: Solution, name: str, parts: StateParts, place: Place) -> dict[str, list[Step]]:
    """Steps by key of the state, for those of its properties that have a value there."""
    state = solution.states[name]
    found = _energies(state)
    if parts.wet:
        found |= _of_two_phases(state, parts)
    else:
        found |= _of_one_phase(state, parts, gas_constant(solution))
        found["p"] = pressure_steps(solution, parts, place)
    return {key: steps for key, steps in found.items() if steps and state[key] == state[key]}


def _energies(state: Mapping[str, Any]) -> dict[str, list[Step]]:
    u, h, s, T, p, v = (state[key] for key in ("u", "h", "s", "T", "p", "v"))
    Ts = rf"{number(T)}\times {bracketed(s, 'entropy')}"
    return {
        "rho": [Step("Density", r"\rho=1/v", rf"1/{number(v)}", rf"{number(1.0 / v)}\ \mathrm{{kg/m^3}}")],
        "u": [
            Step(
                "Internal energy from enthalpy",
                r"u=h-p\,v",
                rf"{shown(h, 'energy')}-{shown(p, 'p')}\times {number(v)}",
                with_unit(u, "energy"),
            )
        ],
        "a": [Step("Helmholtz energy", r"a=u-T\,s", rf"{shown(u, 'energy')}-{Ts}", with_unit(state["a"], "energy"))],
        "g": [Step("Gibbs energy", r"g=h-T\,s", rf"{shown(h, 'energy')}-{Ts}", with_unit(state["g"], "energy"))],
    }


def _of_one_phase(state: Mapping[str, Any], q: StateParts, R: float) -> dict[str, list[Step]]:
    T, v, p = state["T"], state["v"], state["p"]
    residual = rf"{number(q['a_t'])}+{signed(q['a_d'])}"
    cv, cp, Z, phi = (state[key] for key in ("cv", "cp", "Z", "fugacity_coefficient"))
    p_T, p_v, in_product = number(q["p_T"]), number(q["p_v"]), signed(q["p_v"])
    return {
        "h": [
            Step(
                "Enthalpy: ideal gas and residual part",
                r"h=h^\circ+R\,T\left(\tau\alpha^\mathrm{r}_\tau+\delta\alpha^\mathrm{r}_\delta\right)",
                rf"{number(q['h0'])}+{number(R)}\times {number(T)}\times\left({residual}\right)",
                with_unit(state["h"], "energy"),
                source=SPAN,
            )
        ],
        "s": [
            Step(
                "Entropy: ideal gas and residual part",
                r"s=s^\circ+R\,\ln\frac{p^\circ v}{R\,T}"
                r"+R\left(\tau\alpha^\mathrm{r}_\tau-\alpha^\mathrm{r}\right)",
                rf"{number(q['s0'])}+{number(R)}\times\ln\frac{{{number(STANDARD_KPA)}\times {number(v)}}}"
                rf"{{{number(R)}\times {number(T)}}}"
                rf"+{number(R)}\times\left({number(q['a_t'])}-{signed(q['a'])}\right)",
                with_unit(state["s"], "entropy"),
                source=SPAN,
            )
        ],
        "cv": [
            Step(
                "Isochoric heat capacity",
                r"c_v=c_p^\circ-R-R\,\tau^2\alpha^\mathrm{r}_{\tau\tau}",
                rf"{number(q['cp0'])}-{number(R)}-{number(R)}\times {signed(q['a_tt'])}",
                with_unit(cv, "entropy"),
                source=SPAN,
            )
        ],
        "cp": [
            Step(
                "Isobaric heat capacity",
                r"c_p=c_v-T\,\frac{p_T^2}{p_v}",
                rf"{shown(cv, 'entropy')}-{number(T)}\times\frac{{{p_T}^2}}{{{p_v}}}",
                with_unit(cp, "entropy"),
            )
        ],
        "sound_speed": [
            Step(
                "Speed of sound",
                r"c=v\sqrt{-\frac{c_p}{c_v}\,p_v}",
                rf"{number(v)}\times\sqrt{{-\frac{{{shown(cp, 'entropy')}}}{{{shown(cv, 'entropy')}}}\times"
                rf"1000\times{in_product}}}",
                rf"{number(state['sound_speed'])}\ \mathrm{{m/s}}",
                note="The factor 1000 turns kPa into Pa.",
            )
        ],
        "expansivity": [
            Step(
                "Isobaric expansivity",
                r"\alpha=-\frac{p_T}{v\,p_v}",
                rf"-\frac{{{p_T}}}{{{number(v)}\times {in_product}}}",
                rf"{number(state['expansivity'])}\ \mathrm{{1/K}}",
            )
        ],
        "compressibility": [
            Step(
                "Isothermal compressibility",
                r"\kappa_T=-\frac{1}{v\,p_v}",
                rf"-\frac{{1}}{{{number(v)}\times {in_product}}}",
                rf"{number(state['compressibility'] * 1e3)}\ \mathrm{{1/kPa}}",
            )
        ],
        "joule_thomson": [
            Step(
                "Joule–Thomson coefficient",
                r"\mu=-\frac{v}{c_p}\,\frac{\delta\alpha^\mathrm{r}_\delta+\delta\tau\alpha^\mathrm{r}_{\delta\tau}"
                r"+\delta^2\alpha^\mathrm{r}_{\delta\delta}}{1+2\,\delta\alpha^\mathrm{r}_\delta"
                r"+\delta^2\alpha^\mathrm{r}_{\delta\delta}}",
                rf"-\frac{{{number(v)}}}{{{shown(cp, 'entropy')}}}\times\frac{{{number(q['a_d'])}+{signed(q['a_dt'])}"
                rf"+{signed(q['a_dd'])}}}{{1+2\times {signed(q['a_d'])}+{signed(q['a_dd'])}}}",
                rf"{number(state['joule_thomson'] * 1e3)}\ \mathrm{{K/kPa}}",
            )
        ],
        "Z": [
            Step(
                "Compression factor",
                r"Z=\frac{p\,v}{R\,T}",
                rf"\frac{{{shown(p, 'p')}\times {number(v)}}}{{{number(R)}\times {number(T)}}}",
                number(Z),
            )
        ],
        "fugacity_coefficient": [
            Step(
                "Fugacity coefficient",
                r"\ln\varphi=\alpha^\mathrm{r}+Z-1-\ln Z",
                rf"{number(q['a'])}+{number(Z)}-1-\ln\left({number(Z)}\right)",
                rf"{number(math.log(phi))},\quad \varphi={number(phi)}",
                source=SPAN,
            )
        ],
    }


def _of_two_phases(state: Mapping[str, Any], q: StateParts) -> dict[str, list[Step]]:
    x = number(q["x"])

    def mixed(title: str, symbol: str, low: float, high: float, result: str) -> list[Step]:
        formula = rf"{symbol}={symbol}'+x\,({symbol}''-{symbol}')"
        return [Step(title, formula, rf"{number(low)}+{x}\times({number(high)}-{signed(low)})", result)]

    return {
        "v": mixed("Volume of both phases", "v", q["v_l"], q["v_v"], with_unit(state["v"], "v")),
        "h": mixed("Enthalpy of both phases", "h", q["h_l"], q["h_v"], with_unit(state["h"], "energy")),
        "s": mixed("Entropy of both phases", "s", q["s_l"], q["s_v"], with_unit(state["s"], "entropy")),
    }
