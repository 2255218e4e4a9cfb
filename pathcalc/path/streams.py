"""Streams that part or join: balances with the numbers put in."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pathcalc.path.maths import bracketed, number, shown, signed, with_unit
from pathcalc.path.steps import Step

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution
    from pathcalc.path.solver import SolvedLeg

OTHER_NOTE = (
    "Per kilogram that goes on. Index o is the other stream, r its amount per amount that goes on: negative where it "
    "leaves, positive where it joins."
)


def share_numbers(solution: Solution, solved: SolvedLeg, key: str) -> str:
    """r (y_o - y_1) with numbers, for ``key`` h or s."""
    assert solved.outcome.other is not None
    assert solved.outcome.other_share is not None
    kind = "entropy" if key == "s" else "energy"
    M = solution.path.model.M
    there = float(getattr(solved.outcome.other, key)[0]) / M
    here = float(getattr(solved.inlet, key)[0]) / M
    share = signed(float(solved.outcome.other_share[0]))
    return rf"{share}\times({shown(there, kind)}-{bracketed(here, kind)})"


def stream_steps(solution: Solution, solved: SolvedLeg) -> dict[str, list[Step]]:
    """Amount and energy balance of a separation or a mixing; nothing for other legs."""
    other, share = solved.outcome.other, solved.outcome.other_share
    if other is None or share is None:
        return {}
    name = solved.leg.name
    leg, end = solution.legs[name], solution.states[name]
    M = solution.path.model.M
    joins = float(share[0]) > 0.0
    h1, h2 = float(solved.inlet.h[0]) / M, float(other.h[0]) / M
    whole, part = 1.0 - float(share[0]), signed(float(share[0]))
    title = "Energy balance of the streams that join" if joins else "Energy balance of the streams that part"
    steps = [
        Step(
            title,
            r"h_2=(1-r)\,h_1+r\,h_o",
            rf"{number(whole)}\times {bracketed(h1, 'energy')}+{part}\times {bracketed(h2, 'energy')}",
            with_unit(end.h, "energy"),
            note=f"{OTHER_NOTE} The other stream: {_state_text(solution, solved)}.",
        )
    ]
    found = {f"{name}.h": steps}
    if leg["amount"] is not None:
        unit = r"\mathrm{kg/s}"
        inlet = float(leg["amount"]) * whole
        if joins:
            numbers = rf"{number(inlet)}+{number(float(leg['other']['amount']))}"
            formula, text = r"\dot m_2=\dot m_1+\dot m_o", "Amount after mixing"
        else:
            numbers = rf"\frac{{{number(inlet)}}}{{{number(whole)}}}"
            formula, text = r"\dot m_2=\frac{\dot m_1}{1-r},\quad \dot m_o=\dot m_2-\dot m_1", "Amount kept"
        amounts = f"The other stream: {abs(float(leg['other']['amount'])):.7g} kg/s."
        found[f"{name}.amount"] = [
            Step(text, formula, numbers, rf"{number(float(leg['amount']))}\ {unit}", note=amounts)
        ]
    return found


def _state_text(solution: Solution, solved: SolvedLeg) -> str:
    item = solution.legs[solved.leg.name]["other"]
    text = (
        f"T = {item['T']:.7g} K, p = {item['p'] / 1e3:.7g} kPa, v = {item['v']:.7g} m³/kg, "
        f"h = {item['h'] / 1e3:.7g} kJ/kg, s = {item['s'] / 1e3:.7g} kJ/(kg K)"
    )
    return text if item["x"] != item["x"] else f"{text}, x = {item['x']:.7g}"
