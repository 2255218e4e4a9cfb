"""What the properties of a state are put together from, so that they can be worked out again by hand.

Of one phase: the residual Helmholtz energy α^r = a^r/(R T) with its derivatives, the ideal-gas parts, and the two
derivatives of p(T, v); formulas after R. Span, Multiparameter Equations of State (Springer 2000), table 3.9. Of two
phases: the saturated phases and the slope of the vapour pressure.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pathcalc.equations.contract import P_STANDARD, Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.legs.run import Place
from pathcalc.path.steps import Part, StateParts

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution

KPA = 1e-3
DEAD = "surroundings"
"""The fluid at the temperature and pressure of the surroundings: the dead state of exergy."""
ENERGY, ENTROPY = r"\mathrm{kJ/kg}", r"\mathrm{kJ/(kg\,K)}"


def parts_of(solution: Solution) -> tuple[StateParts, ...]:
    """The parts of every state of an ordinary solve in the order of the path, last those of the dead state."""
    path = solution.path
    places = {"start": path.start, **{leg.leg.name: leg.end for leg in path.legs}}
    found = [parts_of_state(path.model, name, place) for name, place in places.items()]
    if np.isfinite(solution.dead.h[0]):
        found.append(parts_of_state(path.model, DEAD, solution.dead))
    return tuple(found)


def parts_of_state(model: Model, name: str, place: Place) -> StateParts:
    """The parts of one state (lane 0)."""
    x = float(place.points.x[0])
    with np.errstate(all="ignore"):
        wet = 0.0 < x < 1.0
        rows = _of_two_phases(model, place) if wet else _of_one_phase(model, place)
    return StateParts(name, wet, rows, (model.h_offset / model.M * 1e-3, model.s_offset / model.M * 1e-3))


def _of_one_phase(model: Model, place: Place) -> tuple[Part, ...]:
    T, v, M = place.T[:1], place.v[:1], model.M
    d = model.residual.reduced(T, 1.0 / v)
    cp0, h0, s0 = (float(a[0]) for a in model.ideal.terms(T))
    terms = model.residual.pressure(T, v)
    R = model.R / M
    rows = (
        ("R", "R", "kJ/(kg K)", R * 1e-3),
        ("T", "T", "K", float(T[0])),
        ("v", "v", "m3/kg", float(v[0]) / M),
        ("a", r"\alpha^\mathrm{r}", "", float(d.d00[0])),
        ("a_d", r"\delta\alpha^\mathrm{r}_\delta", "", float(d.d01[0])),
        ("a_dd", r"\delta^2\alpha^\mathrm{r}_{\delta\delta}", "", float(d.d02[0])),
        ("a_dt", r"\delta\tau\alpha^\mathrm{r}_{\delta\tau}", "", float(d.d11[0])),
        ("a_t", r"\tau\alpha^\mathrm{r}_\tau", "", float(d.d10[0])),
        ("a_tt", r"\tau^2\alpha^\mathrm{r}_{\tau\tau}", "", float(d.d20[0])),
        ("h0", r"h^\circ", "kJ/kg", (R * h0 + model.h_offset / M) * 1e-3),
        ("s0", r"s^\circ", "kJ/(kg K)", (R * s0 + model.s_offset / M) * 1e-3),
        ("cp0", r"c_p^\circ", "kJ/(kg K)", R * cp0 * 1e-3),
        ("p_T", r"p_T", "kPa/K", float(terms.p_T[0]) * KPA),
        ("p_v", r"p_v", "kPa kg/m3", float(terms.p_v[0]) * M * KPA),
    )
    return tuple(Part(*row) for row in rows)


def _of_two_phases(model: Model, place: Place) -> tuple[Part, ...]:
    T, M = place.points.T[:1], model.M
    v_l, v_v = place.points.v_liquid[:1], place.points.v_vapour[:1]
    liquid, vapour = thermal(model, T, v_l), thermal(model, T, v_v)

    def each(low: Array, high: Array, scale: float) -> tuple[float, float]:
        return float(low[0]) / M * scale, float(high[0]) / M * scale

    volumes, h, s = each(v_l, v_v, 1.0), each(liquid.h, vapour.h, 1e-3), each(liquid.s, vapour.s, 1e-3)
    slope = (s[1] - s[0]) / (volumes[1] - volumes[0])
    rows = (
        ("T", "T", "K", float(T[0])),
        ("p", "p", "kPa", float(place.p[0]) * KPA),
        ("x", "x", "", float(place.points.x[0])),
        ("v_l", "v'", "m3/kg", volumes[0]),
        ("v_v", "v''", "m3/kg", volumes[1]),
        ("h_l", "h'", "kJ/kg", h[0]),
        ("h_v", "h''", "kJ/kg", h[1]),
        ("s_l", "s'", "kJ/(kg K)", s[0]),
        ("s_v", "s''", "kJ/(kg K)", s[1]),
        ("dp_dT", r"\mathrm{d}p_\mathrm{sat}/\mathrm{d}T", "kPa/K", slope),
    )
    return tuple(Part(*row) for row in rows)


def gas_constant(solution: Solution) -> float:
    """R of the equation, kJ/(kg K)."""
    return solution.path.model.R / solution.path.model.M * 1e-3


STANDARD_KPA = P_STANDARD * KPA
