"""Solutions for the report tests, from closed-form ideal-gas numbers; layout data, not check values.

``two_stages`` is a nitrogen compression in two stages with constant heat capacity c_p = 7/2 R, whose numbers
follow from p v = R T alone. ``throttled`` crosses a made-up dome of smooth curves: its numbers mean nothing.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from types import SimpleNamespace
from typing import Any

import numpy as np

from pathcalc.path.steps import Basis, Constant, Curve, CurvePiece, Dome, StateParts, Step, Verified
from pathcalc.quantities import Quantity, Relative, parse_text

R = 8.314462618
M = 0.0280134
RS = R / M
CP = 3.5 * RS
CV = 2.5 * RS
T0, P0 = 293.15, 101300.0


@dataclass
class MadeSolution:
    """Stands where a solved path would."""

    case: Any
    result: dict[str, Any]
    explanations: dict[str, list[Step]] = field(default_factory=dict)
    curves: list[Curve] = field(default_factory=list)
    dome: Dome | None = None
    basis: Basis = field(default_factory=lambda: nitrogen_basis())
    state_parts: tuple[StateParts, ...] = ()
    streams: dict[str, Any] = field(default_factory=dict)
    verified: tuple[Verified, ...] = ()

    def to_dict(self) -> dict[str, Any]:
        return self.result


def nitrogen_basis() -> Basis:
    cited = "Made for the layout tests"
    return Basis(
        substance="nitrogen",
        formula="N2",
        hazards=("asphyxiant", "cryogenic"),
        constants=(
            Constant("M", "molar mass", 28.0134, "g/mol", cited),
            Constant("T_c", "critical temperature", 126.192, "K", cited),
            Constant("p_c", "critical pressure", 3.3958, "MPa", cited),
            Constant("R", "molar gas constant", R, "J/(mol K)", "CODATA 2018"),
        ),
        equation_title="ideal gas",
        equation_formula=r"p = \frac{R T}{v}",
        parameters=(),
        equation_source="the limit of every gas at low density",
        range_text="low density",
        ideal_gas_text="constant, c_p = 7/2 R",
        ideal_gas_source="equipartition, rigid linear molecule",
        ideal_gas_range="200 K to 600 K",
    )


def ideal_state(name: str, t: float, p: float) -> dict[str, Any]:
    v = RS * t / p
    h, u = CP * (t - 298.15), CP * (t - 298.15) - RS * t
    s = CP * np.log(t / 298.15) - RS * np.log(p / 1e5)
    h0, s0 = CP * (T0 - 298.15), CP * np.log(T0 / 298.15) - RS * np.log(P0 / 1e5)
    return {
        "name": name,
        "T": t,
        "p": p,
        "v": v,
        "rho": 1 / v,
        "u": u,
        "h": h,
        "s": float(s),
        "a": float(u - t * s),
        "g": float(h - t * s),
        "cv": CV,
        "cp": CP,
        "sound_speed": (1.4 * RS * t) ** 0.5,
        "Z": 1.0,
        "x": None,
        "phase": "gas",
        "expansivity": 1 / t,
        "compressibility": 1 / p,
        "joule_thomson": 0.0,
        "fugacity_coefficient": 1.0,
        "exergy": float(h - h0 - T0 * (s - s0)),
    }


def leg(name: str, path: str, a: dict[str, Any], b: dict[str, Any], heat: float, flow: float) -> dict[str, Any]:
    delta = {k: b[k] - a[k] for k in ("T", "p", "v", "u", "h", "s", "a", "g")}
    work = delta["h"] - heat
    generated = max(delta["s"], 0.0) if heat == 0 else 0.0
    flows = {"heat": heat, "work": work, "entropy_generated": generated, "exergy_destroyed": T0 * generated}
    return {
        "name": name,
        "path": path,
        "from": a["name"],
        "to": b["name"],
        "delta": delta,
        **flows,
        "amount": flow,
        "total": {k: v * flow for k, v in flows.items()},
        "maxwell": {
            "ds": delta["s"],
            "du": delta["u"],
            "dh": delta["h"],
            "error": 3.1e-13,
            "closure": -1.2e-14,
        },
        "pieces": [{"phase": "gas", "ds": delta["s"], "dh": delta["h"]}],
    }


def curve(name: str, a: dict[str, Any], b: dict[str, Any]) -> Curve:
    f = np.linspace(0, 1, 60)
    t = a["T"] * (b["T"] / a["T"]) ** f
    p = a["p"] * (b["p"] / a["p"]) ** f
    s = CP * np.log(t / 298.15) - RS * np.log(p / 1e5)
    h = CP * (t - 298.15)
    return Curve(name, (CurvePiece("gas", t, p, RS * t / p, s, h, h - RS * t),))


TEXT = """\
pathcalc: 1
title: Nitrogen purge booster, two stages with an intercooler
record:
  number: C-2041-07
# a comment with <b>markup</b> & `ticks`
"""


def q(text: str, dimension: str, **more: Any) -> Quantity:
    from dataclasses import replace

    return replace(parse_text(text, (dimension,), ambient=P0), **more)


def two_stages(title: str = "Nitrogen purge booster, two stages with an intercooler") -> MadeSolution:
    flow = 0.35
    t1, p1 = 288.15, 221300.0
    p2, p3, eta1, eta2 = 551300.0, 536300.0, 0.76, 0.74
    t2 = t1 * (1 + ((p2 / p1) ** (2 / 7) - 1) / eta1)
    t3 = 308.15
    p4 = 3.1 * p3
    t4 = t3 * (1 + ((p4 / p3) ** (2 / 7) - 1) / eta2)
    st = [
        ideal_state("start", t1, p1),
        ideal_state("first stage", t2, p2),
        ideal_state("intercooler", t3, p3),
        ideal_state("second stage", t4, p4),
    ]
    legs = [
        leg("first stage", "adiabatic", st[0], st[1], 0.0, flow),
        leg("intercooler", "workless", st[1], st[2], st[2]["h"] - st[1]["h"], flow),
        leg("second stage", "adiabatic", st[2], st[3], 0.0, flow),
    ]
    totals: dict[str, Any] = {
        k: sum(x["total"][k] for x in legs) for k in ("heat", "work", "entropy_generated", "exergy_destroyed")
    }
    totals["delta"] = {k: flow * (st[-1][k] - st[0][k]) for k in ("u", "h", "s", "a", "g")}
    result = {
        "pathcalc": 1,
        "case": {"id": "boosters/purge-booster", "title": title, "sha256": "0f" * 32},
        "software": {"pathcalc": "0.1.0", "numpy": "2.0.0", "scipy": "1.14.0"},
        "fluid": {
            "substance": "nitrogen",
            "equation": "ideal-gas",
            "molar_mass": M,
            "datum": "ideal-gas-298",
            "sources": ["Made for the layout tests"],
        },
        "boundary": "flow",
        "amount": {"value": flow, "unit": "kg/s"},
        "surroundings": {"T": T0, "p": P0},
        "states": st,
        "legs": legs,
        "totals": totals,
        "cycle": None,
        "checks": [
            {"name": "route closure", "at": x["name"], "passed": True, "value": 1.2e-14, "tolerance": 1e-9}
            for x in legs
        ]
        + [{"name": "energy balance", "at": None, "passed": True, "value": 0.0, "tolerance": 1e-9}],
        "limits": [
            {
                "quantity": "first stage.T",
                "value": t2,
                "min": None,
                "max": 433.15,
                "passed": True,
                "margin": 433.15 - t2,
            },
            {
                "quantity": "totals.work",
                "value": totals["work"],
                "min": None,
                "max": 120e3,
                "passed": True,
                "margin": 120e3 - totals["work"],
            },
        ],
        "comparison": [
            {
                "equation": "peng-robinson",
                "quantities": {
                    "first stage.T": t2 + 0.41,
                    "intercooler.heat": legs[1]["heat"] * 1.01,
                    "totals.work": 9e4,
                },
            },
        ],
        "warnings": [
            {
                "code": "outside-range",
                "at": "second stage",
                "text": "A made-up warning, to see where it stands.",
            },
        ],
    }
    case = SimpleNamespace(
        id="boosters/purge-booster",
        title=title,
        text=TEXT,
        includes=(("../shared/site.yaml", "surroundings: {T: 20 degC}\n"),),
        sha256="0f" * 32,
        record={
            "number": "C-2041-07",
            "revision": "B",
            "date": "2026-03-02",
            "author": "A. Writer",
            "purpose": "Discharge temperatures, cooler duty and shaft power for the booster data sheet.",
            "assumptions": ["Steady flow. Changes of kinetic and potential energy are neglected."],
            "sources": {"vendor": "Booster data sheet D-118, revision 2, rated point"},
        },
        fluid=SimpleNamespace(substance="nitrogen", equation="ideal-gas"),
        amount=q("0.35 kg/s", "mass-flow"),
        surroundings=SimpleNamespace(
            T=q("20 degC", "temperature"), p=q("1.013 bar", "pressure"), T_given=True, p_given=True
        ),
        start={"T": q("15 degC", "temperature"), "p": q("1.2 barg", "pressure", u=2e3, shape="normal")},
        legs=[
            {
                "name": "first stage",
                "path": "adiabatic",
                "to": {"p": q("4.5 barg", "pressure")},
                "efficiency": Quantity(0.76, "fraction", "", "0.76", u=0.02, shape="normal", source="vendor"),
            },
            {
                "name": "intercooler",
                "path": "workless",
                "to": {"T": q("35 degC", "temperature")},
                "pressure_drop": q("0.15 bar", "pressure"),
            },
            {
                "name": "second stage",
                "path": "adiabatic",
                "to": {"p": Relative("ratio", Quantity(3.1, "fraction", "", "3.1"))},
                "efficiency": Quantity(0.74, "fraction", "", "0.74"),
            },
        ],
        limits=[
            {"quantity": "first stage.T", "max": q("160 degC", "temperature")},
            {"quantity": "totals.work", "max": q("120 kW", "power")},
        ],
        units={"T": "degC", "p": "bar", "energy": "kJ", "mass": "kg", "time": "s"},
        report=SimpleNamespace(diagrams=["T-s", "p-h", "p-v"], compare_with=["peng-robinson"]),
        positions={},
    )
    work = Step(
        "Work of the adiabatic stage",
        r"w = h_2 - h_1",
        r"w = 100.123\ \mathrm{kJ/kg} - (-10.412)\ \mathrm{kJ/kg}",
        r"110.535\ \mathrm{kJ/kg}",
        "first law for steady flow",
        "kinetic and potential energies neglected",
    )
    ideal = Step(
        "Outlet enthalpy from the isentropic efficiency",
        r"h_2 = h_1 + \frac{h_{2s} - h_1}{\eta_s}",
        r"h_2 = -10.412 + \frac{73.6 - (-10.412)}{0.76}",
        "100.123 kJ/kg",
    )
    return MadeSolution(
        case,
        result,
        {
            "first stage.work": [ideal, work],
            "first stage.T": [ideal],
            "start.exergy": [
                Step(
                    "Exergy of the inlet",
                    r"e_x = (h - h_0) - T_0 (s - s_0)",
                    r"e_x = \notacommand{x}",
                    "67.8 kJ/kg",
                )
            ],
        },
        [curve(x["name"], a, b) for x, a, b in zip(legs, st, st[1:], strict=False)],
    )


def made_dome() -> Dome:
    t = np.linspace(200.0, 304.0, 80)
    p = 7.38e6 * np.exp(6.8 * (1 - 304.13 / t))
    gap = (1 - t / 304.13) ** 0.4
    h_c, s_c, v_c = 332e3, 1.43e3, 1 / 467.6
    h_l, h_v = h_c - 190e3 * gap - 60e3 * gap**2, h_c + 150e3 * gap - 45e3 * gap**2
    return Dome(
        T=t,
        p=p,
        v_l=v_c * np.exp(-1.0 * gap),
        v_v=v_c * np.exp(1.0 * gap + 3.6 * gap**1.5),
        s_l=s_c + (h_l - h_c) / 280.0,
        s_v=s_c + (h_l - h_c) / 280.0 + (h_v - h_l) / t,
        h_l=h_l,
        h_v=h_v,
        T_c=304.13,
        p_c=7.38e6,
        v_c=v_c,
        s_c=s_c,
        h_c=h_c,
    )


def throttled() -> MadeSolution:
    """A made-up two-phase path: throttling from the liquid side, then boiling at constant pressure."""
    solution = two_stages("Made-up two-phase path")
    dome = made_dome()

    def inside(name: str, i: int, x: float | None) -> dict[str, Any]:
        y = 0.0 if x is None else x
        state = ideal_state(name, float(dome.T[i]), float(dome.p[i]))
        for k in "vsh":
            low, high = getattr(dome, f"{k}_l")[i], getattr(dome, f"{k}_v")[i]
            state[k] = float(low + y * (high - low))
        state |= {
            "rho": 1 / state["v"],
            "x": x,
            "phase": "liquid" if x is None else "two-phase",
            "cv": None,
            "cp": None,
            "sound_speed": None,
            "joule_thomson": None,
        }
        return state

    a, b, c = inside("start", 60, None), inside("first stage", 18, 0.34), inside("intercooler", 18, 0.9)
    f = np.linspace(0, 1, 40)

    def line(name: str, one: dict[str, Any], two: dict[str, Any], phase: str) -> Curve:
        arrays = {k: one[k] + f * (two[k] - one[k]) for k in ("T", "p", "v", "s", "h", "u")}
        return Curve(name, (CurvePiece(phase, **arrays),))

    legs = [
        leg("first stage", "throttling", a, b, 0.0, 0.1),
        leg("intercooler", "workless", b, c, c["h"] - b["h"], 0.1),
    ]
    legs[0]["pieces"] = [
        {"phase": "liquid", "ds": 1.0, "dh": 0.0},
        {"phase": "two-phase", "ds": 2.0, "dh": 0.0},
    ]
    solution.result |= {"states": [a, b, c], "legs": legs, "limits": [], "warnings": [], "comparison": []}
    solution.curves = [line("first stage", a, b, "two-phase"), line("intercooler", b, c, "two-phase")]
    solution.dome = dome
    solution.explanations = {}
    return solution
