"""Heat, work, entropy generated and exergy destroyed of a leg, with the numbers put in."""

from __future__ import annotations

import math
from collections.abc import Mapping
from importlib import import_module
from typing import TYPE_CHECKING, Any

from pathcalc.path.closed_forms import closed_form_steps
from pathcalc.path.hand_steps import by_hand
from pathcalc.path.hand_sums import T_ds, p_dv
from pathcalc.path.maths import bracketed, number, shown, uncertain, with_unit
from pathcalc.path.steps import Step
from pathcalc.path.streams import share_numbers
from pathcalc.words import say

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution
    from pathcalc.path.solver import SolvedLeg


def exchange_steps(solution: Solution, solved: SolvedLeg) -> dict[str, list[Step]]:
    """Steps by address for what a leg exchanges and what that costs."""
    name = solved.leg.name
    return {
        f"{name}.work": _work(solution, solved),
        f"{name}.heat": _heat(solution, solved),
        f"{name}.entropy_generated": _generated(solution, solved),
        f"{name}.exergy_destroyed": _destroyed(solution, solved),
    }


def formulas_of(solved: SolvedLeg) -> dict[str, str]:
    """The formulas that stand beside the solving of the leg's kind."""
    formulas: dict[str, str] = import_module(type(solved.leg).__module__).FORMULAS
    return formulas


def _work(solution: Solution, solved: SolvedLeg) -> list[Step]:
    flow = solution.path.setting.flow
    leg, formulas = solution.legs[solved.leg.name], formulas_of(solved)
    a, b = solution.states[solved.inlet_name], solution.states[solved.leg.name]
    steps: list[Step] = []
    model_M = solution.path.model.M
    efficiency = getattr(solved.leg, "efficiency", None)
    against = getattr(solved.leg, "against", None)
    if solved.outcome.ideal is not None and efficiency is not None:
        energy = "h" if flow else "u"
        ideal = float(getattr(solved.outcome.ideal, energy)[0]) / model_M
        change = ideal - a[energy]
        eta = number(efficiency.value)
        steps.append(
            Step(
                title=say("step.reversible-work"),
                formula=rf"w_s={energy}_{{2s}}-{energy}_1\quad(s_{{2s}}=s_1)",
                numbers=rf"{shown(ideal, 'energy')}-{bracketed(a[energy], 'energy')}",
                result=with_unit(change, "energy"),
            )
        )
        formula = r"w=\frac{w_s}{\eta}" if change > 0.0 else r"w=\eta\,w_s"
        numbers = (
            rf"\frac{{{shown(change, 'energy')}}}{{{eta}}}"
            if change > 0.0
            else rf"{eta}\times {bracketed(change, 'energy')}"
        )
        title = say("step.isentropic")
    elif efficiency is not None:
        ideal = float(solved.integrals["v_dp"][0]) / model_M
        steps.append(
            Step(
                title=say("step.reversible-isothermal"),
                formula=r"w_\mathrm{rev}=\int v\,\mathrm{d}p=\Delta g=\Delta h-T\,\Delta s",
                numbers=_isothermal(leg, "h", a.T),
                result=with_unit(ideal, "energy"),
            )
        )
        eta = number(efficiency.value)
        formula = r"w=\frac{w_\mathrm{rev}}{\eta}" if ideal > 0.0 else r"w=\eta\,w_\mathrm{rev}"
        numbers = (
            rf"\frac{{{shown(ideal, 'energy')}}}{{{eta}}}"
            if ideal > 0.0
            else rf"{eta}\times {bracketed(ideal, 'energy')}"
        )
        title = say("step.isothermal")
    elif against is not None:
        p_ext = against.value
        title, formula = say("step.against"), r"w=-p_\mathrm{ext}\,(v_2-v_1)"
        numbers = rf"-{shown(p_ext, 'p')}\times({number(b.v)}-{number(a.v)})"
    else:
        title = say("step.work")
        formula = formulas["work_flow" if flow else "work_closed"]
        numbers = ""
        if solved.leg.path == "adiabatic":
            energy = "h" if flow else "u"
            numbers = rf"{shown(b[energy], 'energy')}-{bracketed(a[energy], 'energy')}"
        elif solved.leg.path == "isobaric" and not flow:
            numbers = rf"-{shown(a.p, 'p')}\times({number(b.v)}-{number(a.v)})"
        elif solved.leg.path == "isochoric" and flow:
            numbers = rf"{number(a.v)}\times({shown(b.p, 'p')}-{shown(a.p, 'p')})"
        elif solved.leg.path == "isothermal":
            base, free = ("h", "g") if flow else ("u", "a")
            formula = rf"{formula}=\Delta {free}=\Delta {base}-T\,\Delta s"
            numbers = _isothermal(leg, base, a.T)
        elif solved.leg.path == "polytropic" and abs(b.v / a.v - 1.0) > 1e-12 and abs(b.p / a.p - 1.0) > 1e-12:
            steps.append(_exponent(a, b))
            formula, numbers = _polytropic_work(a, b, flow)
        elif not flow:
            steps += by_hand(
                solution.hand_sums[solved.leg.name],
                lambda T, p, ds, dv: -p_dv(T, p, ds, dv),
                r"w=-\int p\,\mathrm{d}v=-\sum_k\int p\,v_\xi\,\mathrm{d}\xi",
                leg.work * 1e-3,
            )
    poly = getattr(solved.leg, "polytropic_efficiency", None)
    if poly is not None:
        sense = r"\frac{1}{\eta_p}" if b.p >= a.p else r"\eta_p"
        steps.append(
            Step(
                title=say("step.polytropic"),
                formula=rf"\mathrm{{d}}h={sense}\,v\,\mathrm{{d}}p",
                numbers=rf"\eta_p={number(poly.value)}",
                note=say("note.polytropic"),
            )
        )
        push = float(solved.integrals["v_dp"][0]) / model_M
        up = b.p >= a.p
        steps.append(
            Step(
                title=say("step.polytropic-integral"),
                formula=rf"w={sense}\int v\,\mathrm{{d}}p",
                numbers=rf"\frac{{{shown(push, 'energy')}}}{{{number(poly.value)}}}"
                if up
                else rf"{number(poly.value)}\times {bracketed(push, 'energy')}",
                result=with_unit(push / poly.value if up else push * poly.value, "energy"),
            )
        )
    steps.append(Step(title, formula, numbers, with_unit(leg.work, "energy")))
    return [*steps, *closed_form_steps(solution, solved, "work")]


def _isothermal(leg: Mapping[str, Any], base: str, T: float) -> str:
    """Δh − T Δs, or Δu − T Δs, with numbers."""
    delta = leg["delta"]
    return rf"{shown(delta[base], 'energy')}-{number(T)}\times {bracketed(delta['s'], 'entropy')}"


def _exponent(a: Mapping[str, Any], b: Mapping[str, Any]) -> Step:
    """The exponent of a polytropic leg from its ends."""
    ratios = (a["p"] / b["p"], b["v"] / a["v"])
    return Step(
        title=say("step.exponent"),
        formula=r"n=\frac{\ln(p_1/p_2)}{\ln(v_2/v_1)}",
        numbers=rf"\frac{{\ln\left({shown(a['p'], 'p')}/{shown(b['p'], 'p')}\right)}}"
        rf"{{\ln\left({number(b['v'])}/{number(a['v'])}\right)}}",
        result=number(math.log(ratios[0]) / math.log(ratios[1])),
    )


def _polytropic_work(a: Mapping[str, Any], b: Mapping[str, Any], flow: bool) -> tuple[str, str]:
    """Formula and numbers of the work of a polytropic leg whose ends differ in p and v; n = 1 is p v constant."""
    n = math.log(a["p"] / b["p"]) / math.log(b["v"] / a["v"])
    first = rf"{shown(a['p'], 'p')}\times {number(a['v'])}"
    if abs(n - 1.0) < 1e-6:
        return (
            r"w=-p_1\,v_1\,\ln\frac{v_2}{v_1}",
            rf"-{first}\times\ln\left({number(b['v'])}/{number(a['v'])}\right)",
        )
    top = rf"{shown(b['p'], 'p')}\times {number(b['v'])}-{first}"
    times, formula = (
        (rf"{number(n)}\times", r"w=\frac{n\,(p_2\,v_2-p_1\,v_1)}{n-1}")
        if flow
        else ("", r"w=\frac{p_2\,v_2-p_1\,v_1}{n-1}")
    )
    return formula, rf"\frac{{{times}\left({top}\right)}}{{{number(n)}-1}}"


def _heat(solution: Solution, solved: SolvedLeg) -> list[Step]:
    flow, leg = solution.path.setting.flow, solution.legs[solved.leg.name]
    if solved.leg.path in ("adiabatic", "throttling", "free-expansion", "separation", "mixing"):
        return [Step(say("step.heat"), r"q=0", "", "0", note=say("note.adiabatic"))]
    base = "h" if flow else "u"
    steps = [
        Step(
            title=say("step.first-law.flow" if flow else "step.first-law.closed"),
            formula=rf"q=\Delta {base}-w",
            numbers=rf"{shown(leg['delta'][base], 'energy')}-{bracketed(leg.work, 'energy')}",
            result=with_unit(leg.heat, "energy"),
        )
    ]
    if solved.outcome.reversible:
        integral = float(solved.integrals["T_ds"][0]) / solution.path.model.M
        a = solution.states[solved.inlet_name]
        isothermal = solved.leg.path == "isothermal"
        steps.append(
            Step(
                title=say("step.heat-integral"),
                formula=r"q=\int T\,\mathrm{d}s" + (r"=T\,\Delta s" if isothermal else ""),
                numbers=rf"{number(a.T)}\times {bracketed(leg['delta']['s'], 'entropy')}" if isothermal else "",
                result=with_unit(integral, "energy"),
            )
        )
        if not isothermal:
            steps += by_hand(
                solution.hand_sums[solved.leg.name],
                T_ds,
                r"q=\int T\,\mathrm{d}s=\sum_k\int T\,s_\xi\,\mathrm{d}\xi",
                integral * 1e-3,
            )
    return steps


def _generated(solution: Solution, solved: SolvedLeg) -> list[Step]:
    leg, formulas = solution.legs[solved.leg.name], formulas_of(solved)
    reservoir = getattr(solved.leg, "reservoir", None)
    if reservoir is not None:
        return [
            Step(
                title=say("step.generated.reservoir"),
                formula=r"s_\mathrm{gen}=\Delta s-\frac{q}{T_\mathrm{res}}",
                numbers=rf"{shown(leg['delta']['s'], 'entropy')}"
                rf"-\frac{{{shown(leg.heat, 'energy')}}}{{{number(reservoir.value)}}}",
                result=with_unit(leg.entropy_generated, "entropy"),
            )
        ]
    carried = leg["delta"]["s"] - leg.entropy_generated
    if solved.outcome.other is not None:
        return [
            Step(
                title=say("step.generated.streams"),
                formula=r"s_\mathrm{gen}=\Delta s-r\,(s_o-s_1)",
                numbers=rf"{shown(leg['delta']['s'], 'entropy')}-{share_numbers(solution, solved, 's')}",
                result=uncertain(leg.entropy_generated, abs(carried) * 1e-12, "entropy"),
                note=say("note.other-stream"),
            )
        ]
    return [
        Step(
            title=say("step.generated.own" if leg.heat else "step.generated"),
            formula=rf"s_\mathrm{{gen}}=\Delta s-{formulas['boundary']}",
            numbers=rf"{shown(leg['delta']['s'], 'entropy')}-{bracketed(carried, 'entropy')}",
            result=with_unit(leg.entropy_generated, "entropy"),
            note=say("note.reversible") if solved.outcome.reversible else "",
        )
    ]


def _destroyed(solution: Solution, solved: SolvedLeg) -> list[Step]:
    leg, T0 = solution.legs[solved.leg.name], float(solution.path.setting.T0[0])
    return [
        Step(
            title=say("step.destroyed"),
            formula=r"e_\mathrm{d}=T_0\,s_\mathrm{gen}",
            numbers=rf"{number(T0)}\times {bracketed(leg.entropy_generated, 'entropy')}",
            result=with_unit(leg.exergy_destroyed, "energy"),
            source=say("source.gouy-stodola"),
        )
    ]
