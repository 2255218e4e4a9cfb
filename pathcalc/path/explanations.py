"""How every result came about: formula, the case's numbers put in, result, source."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from pathcalc.path.closed_forms import closed_form_steps
from pathcalc.path.cycle_steps import cycle_steps
from pathcalc.path.exchange_steps import exchange_steps, formulas_of
from pathcalc.path.hand_steps import by_hand, hand_steps
from pathcalc.path.hand_sums import T_ds, p_dv
from pathcalc.path.maths import bracketed, number, rough, shown, signed, uncertain, with_unit
from pathcalc.path.state_steps import exergy_steps, start_steps, state_steps
from pathcalc.path.steps import Step
from pathcalc.path.streams import stream_steps
from pathcalc.words import say, say_of

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution
    from pathcalc.path.solver import SolvedLeg

GENERAL_DS = (
    r"\Delta s=\int\left[\frac{c_v}{T}\,\mathrm{d}T+\left(\frac{\partial p}{\partial T}\right)_v\mathrm{d}v\right]"
)
GENERAL_DU = (
    r"\Delta u=\int\left[c_v\,\mathrm{d}T+\left(T\left(\frac{\partial p}{\partial T}\right)_v-p\right)"
    r"\mathrm{d}v\right]"
)
IN_DOME = {
    "s": r"\Delta s=\int\frac{\mathrm{d}p_\mathrm{sat}}{\mathrm{d}T}\,\mathrm{d}v",
    "u": r"\Delta u=\int\left(T\,\frac{\mathrm{d}p_\mathrm{sat}}{\mathrm{d}T}-p_\mathrm{sat}\right)\mathrm{d}v",
    "h": r"\Delta h=\int T\,\frac{\mathrm{d}p_\mathrm{sat}}{\mathrm{d}T}\,\mathrm{d}v",
}
"""At constant temperature and pressure between the two phases."""
KINDS = {"T": "T", "p": "p", "v": "v", "u": "energy", "h": "energy", "s": "entropy", "a": "energy", "g": "energy"}


def explain_all(solution: Solution) -> dict[str, list[Step]]:
    """Steps by address: of the start, of every leg with the state at its end, and of the totals."""
    found: dict[str, list[Step]] = {}
    found.update(start_steps(solution))
    found["start.exergy"] = exergy_steps(solution, "start")
    for solved in solution.path.legs:
        for part in (_leg(solution, solved), stream_steps(solution, solved), state_steps(solution, solved)):
            for address, steps in part.items():
                found[address] = [*found.get(address, []), *steps]
        found[f"{solved.leg.name}.exergy"] = exergy_steps(solution, solved.leg.name)
    found.update(_totals(solution))
    found.update(cycle_steps(solution))
    return found


def _leg(solution: Solution, solved: SolvedLeg) -> dict[str, list[Step]]:
    name = solved.leg.name
    return {
        f"{name}.delta.s": _entropy(solution, solved),
        f"{name}.delta.u": _energy(solution, solved, "u"),
        f"{name}.delta.h": _energy(solution, solved, "h"),
        f"{name}.delta.a": _free_energy(solution, solved, "a", "u"),
        f"{name}.delta.g": _free_energy(solution, solved, "g", "h"),
        **exchange_steps(solution, solved),
    }


def _route_1(solution: Solution, solved: SolvedLeg, key: str, general: str, special: str | None) -> list[Step]:
    leg = solution.legs[solved.leg.name]
    row = {"s": 0, "u": 1, "h": 2}[key]
    kind = KINDS[key]
    error = float(solved.integrals.error[row][0]) / solution.path.model.M
    a, b = solution.states[solved.inlet_name], solution.states[solved.leg.name]
    holds = formulas_of(solved)["holds"]
    numbers = (
        rf"{holds}:\quad T_1={number(a.T)},\ T_2={number(b.T)}\ \mathrm{{K}},\quad "
        rf"v_1={number(a.v)},\ v_2={number(b.v)}\ \mathrm{{m^3/kg}}"
    )
    own = all(segment.own for segment in solved.outcome.segments)
    notes = [] if own else [say("note.equivalent")]
    pieces = solution.pieces(solved.leg.name)
    if (
        key == "s"
        and solution.path.model.equation == "reference"
        and any(piece["phase"] == "liquid" for piece in pieces)
    ):
        notes.append(say("note.cold-liquid"))
    wet = [piece["phase"] == "two-phase" for piece in pieces]
    if any(wet):
        level = all(piece.family.level_in_dome for piece in solved.integrals.pieces if piece.in_dome)
        special = IN_DOME[key] if all(wet) and level else None
        if not level:
            notes.append(say("note.along"))
        elif not all(wet):
            one_phase = general.partition("=")[2]
            general = rf"{general.partition('=')[0]}={one_phase}+{IN_DOME[key].partition('=')[2]}"
            notes.append(say("note.split"))
    steps = [
        Step(
            title=say("step.route1"),
            formula=special or general,
            numbers=numbers,
            result=uncertain(leg["delta"][key], error, kind),
            source=say("source.maxwell"),
            note=" ".join(notes),
        )
    ]
    if len(pieces) > 1 and key in ("s", "h"):
        least = 1e-12 * sum(abs(piece["ds" if key == "s" else "dh"]) for piece in pieces)
        parts = [piece["ds" if key == "s" else "dh"] for piece in pieces]
        parts = [part if abs(part) > least else 0.0 for part in parts]
        steps.append(
            Step(
                title=say("step.pieces"),
                formula=rf"\Delta {key}=\sum_i \Delta {key}_i",
                numbers="+".join(bracketed(part, kind) for part in parts),
                result=with_unit(sum(parts), kind),
                note=" ".join([_order_of(pieces), *([say("note.clapeyron")] if any(wet) else [])]),
            )
        )
    return steps


def _order_of(pieces: list[dict[str, Any]]) -> str:
    return say("note.pieces", phases=", ".join(say_of("phase", piece["phase"]) for piece in pieces))


def _route_2(solution: Solution, solved: SolvedLeg, key: str) -> Step:
    a, b = solution.states[solved.inlet_name], solution.states[solved.leg.name]
    kind, leg = KINDS[key], solution.legs[solved.leg.name]
    return Step(
        title=say("step.route2"),
        formula=rf"\Delta {key}={key}_2-{key}_1",
        numbers=rf"{shown(b[key], kind)}-{bracketed(a[key], kind)}",
        result=with_unit(b[key] - a[key], kind),
        note=say("note.closure", closure=rough(leg["maxwell"]["closure"]), error=rough(leg["maxwell"]["error"])),
    )


def _entropy(solution: Solution, solved: SolvedLeg) -> list[Step]:
    special = formulas_of(solved).get("ds")
    steps = _route_1(solution, solved, "s", GENERAL_DS, special)
    steps += hand_steps(solution.hand_sums[solved.leg.name])
    steps += closed_form_steps(solution, solved, "s")
    return [*steps, _route_2(solution, solved, "s")]


def _energy(solution: Solution, solved: SolvedLeg, key: str) -> list[Step]:
    if key == "u":
        steps = _route_1(solution, solved, "u", GENERAL_DU, formulas_of(solved).get("du"))
        steps += by_hand(
            solution.hand_sums[solved.leg.name],
            lambda T, p, ds, dv: T_ds(T, p, ds, dv) - p_dv(T, p, ds, dv),
            r"\Delta u=\sum_k\int\left(T\,s_\xi-p\,v_\xi\right)\mathrm{d}\xi",
            solution.legs[solved.leg.name]["delta"]["u"] * 1e-3,
        )
        steps += closed_form_steps(solution, solved, "u")
        return [*steps, _route_2(solution, solved, "u")]
    leg = solution.legs[solved.leg.name]
    a, b = solution.states[solved.inlet_name], solution.states[solved.leg.name]
    step = Step(
        title=say("step.enthalpy-change"),
        formula=r"\Delta h=\Delta u+p_2\,v_2-p_1\,v_1",
        numbers=rf"{shown(leg['delta']['u'], 'energy')}+{shown(b.p, 'p')}\times {number(b.v)}"
        rf"-{shown(a.p, 'p')}\times {number(a.v)}",
        result=with_unit(_settled(leg["delta"]["u"] + b.p * b.v - a.p * a.v, b.h, a.h), "energy"),
    )
    first = _route_1(solution, solved, "h", r"\Delta h=\int\left(T\,\mathrm{d}s+v\,\mathrm{d}p\right)", None)
    return [*first, step, _route_2(solution, solved, "h")]


def _settled(change: float, end: float, inlet: float) -> float:
    """A change of state; zero where it is the rounding of the values it is the difference of."""
    return 0.0 if abs(change) <= 1e-12 * (abs(end) + abs(inlet)) else change


def _free_energy(solution: Solution, solved: SolvedLeg, key: str, base: str) -> list[Step]:
    delta = dict(solution.legs[solved.leg.name]["delta"])
    a, b = solution.states[solved.inlet_name], solution.states[solved.leg.name]
    for item in (base, "s"):
        delta[item] = _settled(delta[item], b[item], a[item])
    isothermal = abs(b.T / a.T - 1.0) < 1e-12
    energy = say("step.helmholtz" if key == "a" else "step.gibbs")
    if isothermal:
        formula = rf"\Delta {key}=\Delta {base}-T\,\Delta s"
        numbers = rf"{shown(delta[base], 'energy')}-{number(a.T)}\times {bracketed(delta['s'], 'entropy')}"
        note = say("note.least-work", energy=energy)
        if key == "g" and not solution.path.setting.flow:
            note = say("note.least-shaft-work")
        if key == "a" and solution.path.setting.flow:
            note = say("note.least-closed-work")
    else:
        formula = rf"\Delta {key}=\Delta {base}-\left(T_2\,s_2-T_1\,s_1\right)"
        numbers = (
            rf"{shown(delta[base], 'energy')}-\left({number(b.T)}\times {bracketed(b.s, 'entropy')}"
            rf"-{number(a.T)}\times {bracketed(a.s, 'entropy')}\right)"
        )
        note = say("note.datum")
    return [Step(energy, formula, numbers, with_unit(delta[key], "energy"), note=note)]


def _totals(solution: Solution) -> dict[str, list[Step]]:
    if solution.totals["work"] is None:
        return {}
    flow = solution.path.setting.flow
    masses = [leg["amount"] for leg in solution.legs.values()]
    alike = all(mass == masses[0] for mass in masses)
    found: dict[str, list[Step]] = {}
    symbols = {"heat": "q", "work": "w", "entropy_generated": r"s_\mathrm{gen}", "exergy_destroyed": r"e_\mathrm{d}"}
    for key, symbol in symbols.items():
        kind = "entropy" if key == "entropy_generated" else "energy"
        parts = [leg[key] for leg in solution.legs.values()]
        unit = {
            ("energy", True): r"\mathrm{kW}",
            ("energy", False): r"\mathrm{kJ}",
            ("entropy", True): r"\mathrm{kW/K}",
            ("entropy", False): r"\mathrm{kJ/K}",
        }[(kind, flow)]
        amount = r"\dot m" if flow else "m"
        each = rf"\left({symbol}\right)_i"
        if alike:
            formula = rf"{amount}\sum_i {each}"
            numbers = rf"{number(masses[0])}\times\left(" + "+".join(bracketed(p, kind) for p in parts) + r"\right)"
        else:
            formula = rf"\sum_i {amount}_i\,{each}"
            terms = zip(masses, parts, strict=True)
            numbers = "+".join(rf"{number(mass)}\times {bracketed(part, kind)}" for mass, part in terms)
        found[f"totals.{key}"] = [
            *(_amount_step(solution) if key == "heat" else []),
            Step(
                title=say("step.sum"),
                formula=formula,
                numbers=numbers,
                result=rf"{signed(solution.totals[key] * 1e-3)}\ {unit}".replace("(", "").replace(")", ""),
                note=say("note.legs", names=", ".join(solution.legs)),
            ),
        ]
    return found


def _amount_step(solution: Solution) -> list[Step]:
    """How an amount that is no mass became one."""
    path, q = solution.path, solution.case.amount
    if q is not None and q.dimension.startswith("mass"):
        return []
    assert path.setting.moles is not None
    flow, M = path.setting.flow, path.model.M
    moles = float(path.setting.moles[0])
    unit = r"\mathrm{kg/s}" if flow else r"\mathrm{kg}"
    formula = r"\dot m=\dot n\,M" if flow else r"m=n\,M"
    step = Step(
        title=say("step.amount"),
        formula=formula,
        numbers=rf"{number(moles)}\times {number(M)}",
        result=rf"{number(moles * M)}\ {unit}",
        note="" if q is None else say("note.amount", amount=q.text),
    )
    return [step]
