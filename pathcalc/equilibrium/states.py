"""All properties of equilibrium states, per mole: of one phase from the equation, of two by mixing."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import full
from pathcalc.equilibrium.flash import BLOCK
from pathcalc.equilibrium.points import Points, mix


@dataclass(frozen=True)
class States:
    """Properties of shape (n,), molar SI; sound speed in m/s, Joule–Thomson coefficient in K/Pa.

    In two phases c_v, c_p, sound speed, expansivity, compressibility and Joule–Thomson coefficient are NaN, at a
    quality of exactly 0 or 1 those of the liquid or vapour; the fugacity coefficient is that of the coexisting phases.
    A failed lane is NaN throughout.
    """

    points: Points
    T: Array
    p: Array
    v: Array
    rho: Array
    u: Array
    h: Array
    s: Array
    a: Array
    g: Array
    cv: Array
    cp: Array
    sound_speed: Array
    Z: Array
    x: Array
    expansivity: Array
    compressibility: Array
    joule_thomson: Array
    fugacity_coefficient: Array


_MIXED = ("u", "h", "s", "a", "g")
_SINGLE = ("cv", "cp", "sound_speed", "expansivity", "compressibility", "joule_thomson")


def state_properties(model: Model, points: Points) -> States:
    """Every property of the result's list for the states ``points``."""
    n = points.T.size
    names = (*_MIXED, *_SINGLE, "Z", "fugacity_coefficient")
    out = {name: np.full(n, np.nan) for name in names}
    two = points.x == points.x
    ok = points.reason == 0
    with np.errstate(all="ignore"):
        for start in range(0, n, BLOCK):
            block = slice(start, start + BLOCK)
            one = np.flatnonzero(ok[block] & ~two[block]) + start
            if one.size:
                _one_phase(model, points, one, out, one.size == n)
            both = np.flatnonzero(ok[block] & two[block]) + start
            if both.size:
                _two_phases(model, points, both, out)
        rho = 1.0 / points.v
    return States(points=points, T=points.T, p=points.p, v=points.v, rho=rho, x=points.x, **out)


def _one_phase(model: Model, points: Points, at: NDArray[np.intp], out: dict[str, Array], every: bool) -> None:
    T, p, v = (points.T, points.p, points.v) if every else (points.T[at], points.p[at], points.v[at])
    f = full(model, T, v, p)
    for name in (*_MIXED, *_SINGLE, "Z"):
        out[name][at] = getattr(f, name)
    out["fugacity_coefficient"][at] = np.exp(f.ln_phi)


def _two_phases(model: Model, points: Points, at: NDArray[np.intp], out: dict[str, Array]) -> None:
    T, p, x = points.T[at], points.p[at], points.x[at]
    liquid = full(model, T, points.v_liquid[at], p)
    vapour = full(model, T, points.v_vapour[at], p)
    for name in _MIXED:
        out[name][at] = mix(x, getattr(liquid, name), getattr(vapour, name))
    for edge, phase in ((0.0, liquid), (1.0, vapour)):
        on = x == edge
        if on.any():
            for name in _SINGLE:
                out[name][at[on]] = getattr(phase, name)[on]
    out["Z"][at] = p * points.v[at] / (model.R * T)
    out["fugacity_coefficient"][at] = np.exp(vapour.ln_phi)
