"""Efficiency and coefficients of performance of a cycle, with the numbers put in."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pathcalc.path.maths import bracketed, number, shown
from pathcalc.path.steps import Step
from pathcalc.words import say

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution

_FORMULAS = {
    "thermal_efficiency": r"\eta=\frac{-\sum w}{\sum q_\mathrm{in}}",
    "cop_cooling": r"\varepsilon=\frac{\sum q_\mathrm{in}}{\sum w}",
    "cop_heating": r"\varepsilon=\frac{-\sum q_\mathrm{out}}{\sum w}",
}


def cycle_steps(solution: Solution) -> dict[str, list[Step]]:
    """Steps by address (``cycle.thermal_efficiency`` …) for the figures that the cycle has."""
    if solution.cycle is None:
        return {}
    legs = solution.legs
    taken = [name for name in legs if legs[name].heat > 0.0]
    given = [name for name in legs if legs[name].heat < 0.0]
    worked = [name for name in legs if legs[name].work != 0.0]
    work = "+".join(bracketed(legs[name].work, "energy") for name in worked) or "0"
    sums = {
        "thermal_efficiency": (rf"-\left({work}\right)", _sum(solution, taken)),
        "cop_cooling": (_sum(solution, taken), work),
        "cop_heating": (rf"-\left({_sum(solution, given)}\right)", work),
    }
    found: dict[str, list[Step]] = {}
    for key, formula in _FORMULAS.items():
        value = solution.cycle[key]
        if value != value:
            continue
        above, below = sums[key]
        note = say("note.cycle", work=", ".join(worked), taken=", ".join(taken), given=", ".join(given))
        title = say(f"step.cycle.{key}")
        found[f"cycle.{key}"] = [Step(title, formula, rf"\frac{{{above}}}{{{below}}}", number(value), note=note)]
    return found


def _sum(solution: Solution, names: list[str]) -> str:
    texts = [shown(solution.legs[names[0]].heat, "energy")] if names else ["0"]
    return "+".join(texts + [bracketed(solution.legs[name].heat, "energy") for name in names[1:]])
