"""How every result came about: formula, the case's numbers put in, result, source."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING

from pathcalc.path.closed_forms import closed_form_steps
from pathcalc.path.cycle_steps import cycle_steps
from pathcalc.path.hand_steps import hand_steps
from pathcalc.path.maths import bracketed, number, rough, shown, signed, uncertain, with_unit
from pathcalc.path.state_steps import exergy_steps, start_steps, state_steps
from pathcalc.path.steps import Step
from pathcalc.path.streams import OTHER_NOTE, share_numbers, stream_steps

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution
    from pathcalc.path.solver import SolvedLeg

MAXWELL = (
    "Maxwell relation of the Helmholtz energy, (∂s/∂v)_T = (∂p/∂T)_v: H. B. Callen, Thermodynamics and an Introduction "
    "to Thermostatistics, 2nd edition (Wiley 1985), chapter 7"
)
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
SPLIT = "The first integral runs over the stretches of one phase, the second over the others."
CLAPEYRON = " A two-phase piece by Clapeyron: the change of s is the slope of the vapour pressure times that of v."
ALONG = (
    "In the two-phase region the change is taken at constant temperature to the boundary (Clapeyron), along the "
    "boundary by the differential of one phase, and back (Clapeyron): the integrand above holds for the stretches of "
    "one phase."
)
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


def formulas_of(solved: SolvedLeg) -> dict[str, str]:
    """The formulas that stand beside the solving of the leg's kind."""
    formulas: dict[str, str] = import_module(type(solved.leg).__module__).FORMULAS
    return formulas


def _leg(solution: Solution, solved: SolvedLeg) -> dict[str, list[Step]]:
    name = solved.leg.name
    return {
        f"{name}.delta.s": _entropy(solution, solved),
        f"{name}.delta.u": _energy(solution, solved, "u"),
        f"{name}.delta.h": _energy(solution, solved, "h"),
        f"{name}.delta.a": _free_energy(solution, solved, "a", "u"),
        f"{name}.delta.g": _free_energy(solution, solved, "g", "h"),
        f"{name}.work": _work(solution, solved),
        f"{name}.heat": _heat(solution, solved),
        f"{name}.entropy_generated": _generated(solution, solved),
        f"{name}.exergy_destroyed": _destroyed(solution, solved),
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
    note = "" if own else "Irreversible: integrated along an equivalent reversible way between the same end states."
    pieces = solution.pieces(solved.leg.name)
    if (
        key == "s"
        and solution.path.model.equation == "reference"
        and any(piece["phase"] == "liquid" for piece in pieces)
    ):
        note = (
            note + " The heat capacity of cold liquid is reached from saturated vapour across the saturation line "
            "(Clapeyron's relation differentiated): the isotherm itself runs through the unstable region."
        ).strip()
    wet = [piece["phase"] == "two-phase" for piece in pieces]
    if any(wet):
        level = all(piece.family.level_in_dome for piece in solved.integrals.pieces if piece.in_dome)
        special = IN_DOME[key] if all(wet) and level else None
        if not level:
            note = f"{note} {ALONG}".strip()
        elif not all(wet):
            one_phase = general.partition("=")[2]
            general = rf"{general.partition('=')[0]}={one_phase}+{IN_DOME[key].partition('=')[2]}"
            note = f"{note} {SPLIT}".strip()
    steps = [
        Step(
            title="Route 1: integral along the path",
            formula=special or general,
            numbers=numbers,
            result=uncertain(leg["delta"][key], error, kind),
            source=MAXWELL,
            note=note,
        )
    ]
    if len(pieces) > 1 and key in ("s", "h"):
        least = 1e-12 * sum(abs(piece["ds" if key == "s" else "dh"]) for piece in pieces)
        parts = [piece["ds" if key == "s" else "dh"] for piece in pieces]
        parts = [part if abs(part) > least else 0.0 for part in parts]
        steps.append(
            Step(
                title="Pieces of the path, cut at phase boundaries and corners",
                formula=rf"\Delta {key}=\sum_i \Delta {key}_i",
                numbers="+".join(bracketed(part, kind) for part in parts),
                result=with_unit(sum(parts), kind),
                note=f"In order: {', '.join(piece['phase'] for piece in pieces)}." + (CLAPEYRON if any(wet) else ""),
            )
        )
    return steps


def _route_2(solution: Solution, solved: SolvedLeg, key: str) -> Step:
    a, b = solution.states[solved.inlet_name], solution.states[solved.leg.name]
    kind, leg = KINDS[key], solution.legs[solved.leg.name]
    return Step(
        title="Route 2: difference of the state function",
        formula=rf"\Delta {key}={key}_2-{key}_1",
        numbers=rf"{shown(b[key], kind)}-{bracketed(a[key], kind)}",
        result=with_unit(b[key] - a[key], kind),
        note=f"Closure of the leg (largest relative difference of the two routes over s, u and h): "
        f"{rough(leg['maxwell']['closure'])}; error estimate {rough(leg['maxwell']['error'])}.",
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
        steps += closed_form_steps(solution, solved, "u")
        return [*steps, _route_2(solution, solved, "u")]
    leg = solution.legs[solved.leg.name]
    a, b = solution.states[solved.inlet_name], solution.states[solved.leg.name]
    step = Step(
        title="Enthalpy from internal energy",
        formula=r"\Delta h=\Delta u+p_2\,v_2-p_1\,v_1",
        numbers=rf"{shown(leg['delta']['u'], 'energy')}+{shown(b.p, 'p')}\times {number(b.v)}"
        rf"-{shown(a.p, 'p')}\times {number(a.v)}",
        result=with_unit(leg["delta"]["u"] + b.p * b.v - a.p * a.v, "energy"),
    )
    first = _route_1(solution, solved, "h", r"\Delta h=\int\left(T\,\mathrm{d}s+v\,\mathrm{d}p\right)", None)
    return [*first, step, _route_2(solution, solved, "h")]


def _free_energy(solution: Solution, solved: SolvedLeg, key: str, base: str) -> list[Step]:
    delta = solution.legs[solved.leg.name]["delta"]
    a, b = solution.states[solved.inlet_name], solution.states[solved.leg.name]
    isothermal = abs(b.T / a.T - 1.0) < 1e-12
    symbol = {"a": "Helmholtz energy", "g": "Gibbs energy"}[key]
    if isothermal:
        formula = rf"\Delta {key}=\Delta {base}-T\,\Delta s"
        numbers = rf"{shown(delta[base], 'energy')}-{number(a.T)}\times {bracketed(delta['s'], 'entropy')}"
        note = f"At constant temperature the change of {symbol} is the least work."
        if key == "g" and not solution.path.setting.flow:
            note = "At constant temperature the change of Gibbs energy is the least shaft work of steady flow."
        if key == "a" and solution.path.setting.flow:
            note = "At constant temperature the change of Helmholtz energy is the least work on a closed mass."
    else:
        formula = rf"\Delta {key}=\Delta {base}-\left(T_2\,s_2-T_1\,s_1\right)"
        numbers = (
            rf"{shown(delta[base], 'energy')}-\left({number(b.T)}\times {bracketed(b.s, 'entropy')}"
            rf"-{number(a.T)}\times {bracketed(a.s, 'entropy')}\right)"
        )
        note = "Between different temperatures this depends on the datum of entropy; do not read it as work."
    return [Step(symbol, formula, numbers, with_unit(delta[key], "energy"), note=note)]


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
                title="Reversible leg to the same end pressure",
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
        title = "Isentropic efficiency"
    elif efficiency is not None:
        ideal = float(solved.integrals["v_dp"][0]) / model_M
        steps.append(
            Step(
                title="Reversible isothermal work",
                formula=r"w_\mathrm{rev}=\int v\,\mathrm{d}p=\Delta g",
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
        title = "Isothermal efficiency"
    elif against is not None:
        p_ext = against.value
        title, formula = "Work against a constant pressure", r"w=-p_\mathrm{ext}\,(v_2-v_1)"
        numbers = rf"-{shown(p_ext, 'p')}\times({number(b.v)}-{number(a.v)})"
    else:
        title = "Work into the fluid"
        formula = formulas["work_flow" if flow else "work_closed"]
        numbers = ""
        if solved.leg.path == "adiabatic":
            energy = "h" if flow else "u"
            numbers = rf"{shown(b[energy], 'energy')}-{bracketed(a[energy], 'energy')}"
        elif solved.leg.path == "isobaric" and not flow:
            numbers = rf"-{shown(a.p, 'p')}\times({number(b.v)}-{number(a.v)})"
        elif solved.leg.path == "isochoric" and flow:
            numbers = rf"{number(a.v)}\times({shown(b.p, 'p')}-{shown(a.p, 'p')})"
    note = ""
    poly = getattr(solved.leg, "polytropic_efficiency", None)
    if poly is not None:
        sense = r"\frac{1}{\eta_p}" if b.p >= a.p else r"\eta_p"
        steps.append(
            Step(
                title="Polytropic efficiency",
                formula=rf"\mathrm{{d}}h={sense}\,v\,\mathrm{{d}}p",
                numbers=rf"\eta_p={number(poly.value)}",
                note="Every small step of the machine has this efficiency; solved along ln p by collocation.",
            )
        )
        push = float(solved.integrals["v_dp"][0]) / model_M
        up = b.p >= a.p
        steps.append(
            Step(
                title="The same by the integral of v dp along the way",
                formula=rf"w={sense}\int v\,\mathrm{{d}}p",
                numbers=rf"\frac{{{shown(push, 'energy')}}}{{{number(poly.value)}}}"
                if up
                else rf"{number(poly.value)}\times {bracketed(push, 'energy')}",
                result=with_unit(push / poly.value if up else push * poly.value, "energy"),
            )
        )
    steps.append(Step(title, formula, numbers, with_unit(leg.work, "energy"), note=note))
    return [*steps, *closed_form_steps(solution, solved, "work")]


def _heat(solution: Solution, solved: SolvedLeg) -> list[Step]:
    flow, leg = solution.path.setting.flow, solution.legs[solved.leg.name]
    if solved.leg.path in ("adiabatic", "throttling", "free-expansion", "separation", "mixing"):
        return [Step("Heat", r"q=0", "", "0", note="The leg is adiabatic.")]
    base = "h" if flow else "u"
    law = "of a flow through a device" if flow else "of a closed mass"
    steps = [
        Step(
            title=f"First law {law}",
            formula=rf"q=\Delta {base}-w",
            numbers=rf"{shown(leg['delta'][base], 'energy')}-{bracketed(leg.work, 'energy')}",
            result=with_unit(leg.heat, "energy"),
        )
    ]
    if solved.outcome.reversible:
        integral = float(solved.integrals["T_ds"][0]) / solution.path.model.M
        steps.append(
            Step(
                title="Second way: the heat of a reversible leg",
                formula=r"q=\int T\,\mathrm{d}s",
                result=with_unit(integral, "energy"),
            )
        )
    return steps


def _generated(solution: Solution, solved: SolvedLeg) -> list[Step]:
    leg, formulas = solution.legs[solved.leg.name], formulas_of(solved)
    reservoir = getattr(solved.leg, "reservoir", None)
    if reservoir is not None:
        return [
            Step(
                title="Entropy generated, heat exchanged with a reservoir",
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
                title="Entropy generated, streams parting or joining",
                formula=r"s_\mathrm{gen}=\Delta s-r\,(s_o-s_1)",
                numbers=rf"{shown(leg['delta']['s'], 'entropy')}-{share_numbers(solution, solved, 's')}",
                result=uncertain(leg.entropy_generated, abs(carried) * 1e-12, "entropy"),
                note=OTHER_NOTE,
            )
        ]
    return [
        Step(
            title="Entropy generated, heat crossing at the fluid's own temperature"
            if leg.heat
            else "Entropy generated",
            formula=rf"s_\mathrm{{gen}}=\Delta s-{formulas['boundary']}",
            numbers=rf"{shown(leg['delta']['s'], 'entropy')}-{bracketed(carried, 'entropy')}",
            result=with_unit(leg.entropy_generated, "entropy"),
            note="Reversible by definition." if solved.outcome.reversible else "",
        )
    ]


def _destroyed(solution: Solution, solved: SolvedLeg) -> list[Step]:
    leg, T0 = solution.legs[solved.leg.name], float(solution.path.setting.T0[0])
    return [
        Step(
            title="Exergy destroyed",
            formula=r"e_\mathrm{d}=T_0\,s_\mathrm{gen}",
            numbers=rf"{number(T0)}\times {bracketed(leg.entropy_generated, 'entropy')}",
            result=with_unit(leg.exergy_destroyed, "energy"),
            source="Theorem of Gouy and Stodola; any textbook of thermodynamics",
        )
    ]


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
                title="Sum over the legs",
                formula=formula,
                numbers=numbers,
                result=rf"{signed(solution.totals[key] * 1e-3)}\ {unit}".replace("(", "").replace(")", ""),
                note="Legs in order: " + ", ".join(solution.legs) + ".",
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
        title="Amount",
        formula=formula,
        numbers=rf"{number(moles)}\times {number(M)}",
        result=rf"{number(moles * M)}\ {unit}",
        note="" if q is None else f"amount: {q.text}",
    )
    return [step]
