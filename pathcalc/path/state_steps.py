"""How the states of a path were fixed, and their exergy."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pathcalc.equations.properties import thermal
from pathcalc.legs.run import Place
from pathcalc.path.maths import bracketed, number, shown, with_unit
from pathcalc.path.property_steps import property_steps
from pathcalc.path.steps import Step
from pathcalc.quantities.values import Quantity, Relative

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution
    from pathcalc.path.solver import SolvedLeg

SHOWN = {
    "T": ("T", "T"),
    "p": ("p", "p"),
    "v": ("v", "v"),
    "u": ("u", "energy"),
    "h": ("h", "energy"),
    "s": ("s", "entropy"),
    "x": ("x", "none"),
}
_HELD = {
    "isothermal": "T",
    "isobaric": "p",
    "isochoric": "v",
    "throttling": "h",
    "free-expansion": "u",
}


def start_steps(solution: Solution) -> dict[str, list[Step]]:
    """The start: which two properties are given, and what follows from the equation."""
    case, state = solution.case, solution.states["start"]
    given = ", ".join(
        f"{key} = {item.text if isinstance(item, Quantity) else item}" for key, item in case.start.items()
    )
    sources = [i.source for i in case.start.values() if isinstance(i, Quantity) and i.source]
    citations = case.record.sources or {}
    found: dict[str, list[Step]] = {}
    for key, (symbol, kind) in SHOWN.items():
        value = state[key]
        if value != value:
            continue
        found[f"start.{key}"] = [
            Step(
                title="Given" if key in case.start else "From the equation of state at the given state",
                formula=rf"{symbol}_1",
                result=with_unit(value, kind),
                source="; ".join(dict.fromkeys(citations.get(s, s) for s in sources)) if key in case.start else "",
                note=f"start: {given}; phase {state.phase}",
            )
        ]
    return _with_properties(solution, "start", solution.path.start, found)


def _with_properties(
    solution: Solution, name: str, place: Place, fixed: dict[str, list[Step]]
) -> dict[str, list[Step]]:
    """What fixes the state, then how its properties follow; the volume of one phase is what the equation is solved

    for, so that it is checked by the pressure."""
    parts = next(item for item in solution.state_parts if item.state == name)
    found = dict(fixed)
    for key, steps in property_steps(solution, name, parts, place).items():
        address = f"{name}.{key}"
        found[address] = [*found.get(address, []), *steps]
    return found


def state_steps(solution: Solution, solved: SolvedLeg) -> dict[str, list[Step]]:
    """The state at the end of a leg: what fixes it, and what follows from the equation."""
    name, state = solved.leg.name, solution.states[solved.leg.name]
    fixed = _what_fixes(solution, solved)
    found: dict[str, list[Step]] = {}
    if state.x == state.x:
        found[f"{name}.x"] = _quality_steps(solution, name, solved.end)
    for key, (symbol, kind) in SHOWN.items():
        value = state[key]
        if value != value:
            continue
        steps = found.setdefault(f"{name}.{key}", [])
        steps.append(
            Step(
                title="State at the end of the leg",
                formula=rf"{symbol}_2",
                result=with_unit(value, kind),
                note=f"fixed by {fixed}; phase {state.phase}",
            )
        )
    return _with_properties(solution, name, solved.end, found)


def _quality_steps(solution: Solution, name: str, place: Place) -> list[Step]:
    """The coexisting phases and the lever rule."""
    M, model = solution.path.model.M, solution.path.model
    T = place.points.T
    v_l, v_v = place.points.v_liquid, place.points.v_vapour
    liquid, vapour = thermal(model, T, v_l), thermal(model, T, v_v)
    state = solution.states[name]
    low, high = float(v_l[0]) / M, float(v_v[0]) / M
    phases = "; ".join(
        f"{text}: v = {volume:.7g} m3/kg, h = {float(t.h[0]) / M / 1e3:.7g} kJ/kg, "
        f"s = {float(t.s[0]) / M / 1e3:.7g} kJ/(kg K)"
        for text, volume, t in (("saturated liquid", low, liquid), ("saturated vapour", high, vapour))
    )
    return [
        Step(
            title="Quality by the lever rule",
            formula=r"x=\frac{v-v'}{v''-v'}",
            numbers=rf"\frac{{{number(state.v)}-{number(low)}}}{{{number(high)}-{number(low)}}}",
            result=with_unit(state.x, "none"),
            note=f"Coexisting at {state.T:.7g} K and {state.p / 1e3:.7g} kPa, from equal pressure and equal Gibbs "
            f"energy of the phases. {phases}.",
        )
    ]


def _what_fixes(solution: Solution, solved: SolvedLeg) -> str:
    leg = solved.leg
    parts = [_target_text(key, target) for key, target in leg.to.given().items()] if hasattr(leg, "to") else []
    held = _HELD.get(leg.path)
    if held is not None:
        parts.insert(0, f"{held} as at the inlet")
    for key in ("efficiency", "polytropic_efficiency", "against", "exponent", "pressure_drop"):
        item = getattr(leg, key, None)
        if item is not None:
            parts.append(f"{key.replace('_', ' ')} {item.text}")
    if leg.path == "adiabatic" and len(parts) == 1:
        parts.insert(0, "s as at the inlet")
    keep = getattr(leg, "keep", None)
    if keep is not None:
        parts += ["T as at the inlet", f"saturated {keep}"]
    if leg.path == "mixing":
        parts += ["the mean enthalpy of the streams", "the lower of their pressures"]
    return ", ".join(parts)


def _target_text(key: str, target: Quantity | Relative) -> str:
    if isinstance(target, Quantity):
        return f"{key} = {target.text}"
    if target.kind == "same_as":
        return f"{key} as at {target.state}"
    assert target.amount is not None
    return f"{key}: {target.kind} {target.amount.text}"


def exergy_steps(solution: Solution, name: str) -> list[Step]:
    """Thermomechanical exergy of a state against the surroundings."""
    state, dead = solution.states[name], solution.dead
    M = solution.path.model.M
    T0, p0 = float(solution.path.setting.T0[0]), float(solution.path.setting.p0[0])
    h0, u0, s0, v0 = (float(x[0]) / M for x in (dead.h, dead.u, dead.s, dead.v))
    if h0 != h0:
        return [Step("Exergy", note="The fluid has no state at the surroundings with this equation.")]
    if solution.path.setting.flow:
        formula = r"e=(h-h_0)-T_0\,(s-s_0)"
        numbers = (
            rf"({shown(state.h, 'energy')}-{bracketed(h0, 'energy')})"
            rf"-{number(T0)}\times({shown(state.s, 'entropy')}-{bracketed(s0, 'entropy')})"
        )
    else:
        formula = r"e=(u-u_0)+p_0\,(v-v_0)-T_0\,(s-s_0)"
        numbers = (
            rf"({shown(state.u, 'energy')}-{bracketed(u0, 'energy')})"
            rf"+{shown(p0, 'p')}\times({number(state.v)}-{number(v0)})"
            rf"-{number(T0)}\times({shown(state.s, 'entropy')}-{bracketed(s0, 'entropy')})"
        )
    return [
        Step(
            "Thermomechanical exergy",
            formula,
            numbers,
            with_unit(state.exergy, "energy"),
            note=f"The dead state (index 0) is the fluid at the {T0:.6g} K and {p0 / 1e3:.6g} kPa of the surroundings; "
            "its properties come from the equation of state there.",
        )
    ]
