"""One quantity of a single phase with its slopes at (T, v), by its letter: v, p, h, s, u."""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache

import numpy as np

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import Thermal, thermal

Triple = tuple[Array, Array, Array]


def of(key: str, t: Thermal, T: Array, v: Array) -> Triple:
    """X, (∂X/∂T)_v, (∂X/∂v)_T."""
    return _FORMULAS[key](t, T, v)


def _entropy(t: Thermal, T: Array, v: Array) -> Triple:
    return t.s, t.cv / T, t.p_T


def _energy(t: Thermal, T: Array, v: Array) -> Triple:
    return t.u, t.cv, T * t.p_T - t.p


def _enthalpy(t: Thermal, T: Array, v: Array) -> Triple:
    return t.h, t.cv + v * t.p_T, T * t.p_T + v * t.p_v


def _volume(t: Thermal, T: Array, v: Array) -> Triple:
    return v, 0.0 * v, 0.0 * v + 1.0


def _pressure(t: Thermal, T: Array, v: Array) -> Triple:
    return t.p, t.p_T, t.p_v


_FORMULAS: dict[str, Callable[[Thermal, Array, Array], Triple]] = {
    "s": _entropy,
    "u": _energy,
    "h": _enthalpy,
    "v": _volume,
    "p": _pressure,
}


def value(model: Model, key: str, T: Array, v: Array) -> Array:
    """X alone at (T, v)."""
    with np.errstate(all="ignore"):
        return of(key, thermal(model, T, v), T, v)[0]


def at_pressure(model: Model, key: str, T: Array, v: Array) -> tuple[Array, Array]:
    """X and (∂X/∂T)_p at (T, v)."""
    t = thermal(model, T, v)
    X, X_T, X_v = of(key, t, T, v)
    return X, X_T - X_v * t.p_T / t.p_v


@lru_cache(maxsize=64)
def is_ideal(model: Model) -> bool:
    """Whether the residual part vanishes: u and h then depend on T alone."""
    T = np.array([max(model.T_limits[0], 300.0)])
    d = model.residual.reduced(T, np.array([1000.0]))
    return bool((d.d01 == 0.0) & (d.d10 == 0.0))


def volume_ceiling(model: Model, T: Array) -> Array:
    """The largest volume (m3/mol) looked at: that of an ideal gas at 1 nPa."""
    return model.R * T * 1e9
