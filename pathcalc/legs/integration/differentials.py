"""The differentials of a single phase along a curve in the (T, v) plane, ready for quadrature.

From p(T, v), its derivatives and the ideal-gas heat capacity alone (Maxwell relations):

    ds = (c_v/T) dT + (dp/dT)_v dv
    du = c_v dT + [T (dp/dT)_v - p] dv
    dh = [c_v + v (dp/dT)_v] dT + [T (dp/dT)_v + v (dp/dv)_T] dv
    c_v(T, v) = c_v0(T) + T * integral from infinite volume to v of (d2p/dT2)_v dv

The residual Helmholtz energy is not used here: the closed-form state functions stay an independent check.
"""

from __future__ import annotations

import numpy as np

from pathcalc.equations.contract import Array, Model
from pathcalc.legs.integration.families import Nodes
from pathcalc.legs.integration.quadrature import GAUSS_WEIGHTS, KRONROD_WEIGHTS, NODES, estimate, over_nodes

QUANTITIES = ("ds", "du", "dh", "p_dv", "v_dp", "T_ds", "dh_over_T")
"""What is integrated along every curve: J/(mol K), J/mol, J/mol, J/mol, J/mol, J/mol, J/(mol K)."""

_BLOCK = 4096
_TARGET = 1e-12
"""Error of the inner integral, in R, below which no more panels are taken."""
_MOST_PANELS = 64
_DECIDED = 4
_HOPELESS = 1e-3
# Below T_c the integral from zero density to a liquid runs through the unstable region, where reference equations
# swing by many powers of ten. Where _DECIDED panels do not bring the error below _HOPELESS R, c_v is taken from the
# fundamental equation; the path integrals of the liquid stay a check on its first derivatives.


def isochoric_heat_capacity(model: Model, T: Array, v: Array) -> tuple[Array, Array]:
    """c_v (J/(mol K)) and the error of its inner integral, for arrays T, v of one shape.

    The integral over volume is taken in density, where the integrand (d2p/dT2)_v v^2 is smooth down to zero.
    """
    shape = T.shape
    T_flat, v_flat = T.reshape(-1), v.reshape(-1)
    total, error = np.empty(T_flat.size), np.empty(T_flat.size)
    for first in range(0, T_flat.size, _BLOCK):
        part = slice(first, first + _BLOCK)
        total[part], error[part] = _inner(model, T_flat[part], v_flat[part])
    cv = model.R * (model.ideal.cp0_R(T_flat) - 1.0) + total
    return cv.reshape(shape), error.reshape(shape)


def _inner(model: Model, T: Array, v: Array) -> tuple[Array, Array]:
    """Residual part of c_v and its error: equal panels in density, as many as each point needs."""
    total, error = _panels(model, T, v, 1)
    count = 1
    while count < _MOST_PANELS:
        open_ = np.flatnonzero(error > _TARGET * model.R)
        if open_.size == 0:
            break
        count *= 2
        total[open_], error[open_] = _panels(model, T[open_], v[open_], count)
        if count == _DECIDED:
            hopeless = np.flatnonzero(~(error < _HOPELESS * model.R) & (T < model.T_c))
            if hopeless.size:
                total[hopeless] = _closed_form(model, T[hopeless], v[hopeless])
                error[hopeless] = _TARGET * model.R
    return total, error


def _closed_form(model: Model, T: Array, v: Array) -> Array:
    """The residual part of c_v by the fundamental equation itself, J/(mol K)."""
    return -model.R * model.residual.reduced(T, 1.0 / v).d20


def _panels(model: Model, T: Array, v: Array, count: int) -> tuple[Array, Array]:
    total, error = np.zeros(T.size), np.zeros(T.size)
    scale = -T / v / count
    for panel in range(count):
        with np.errstate(over="ignore", invalid="ignore"):
            volume = v * count / (panel + NODES[:, None])
            curvature = model.residual.pressure_curvature(T, volume) * volume * volume * scale
        kronrod = over_nodes(KRONROD_WEIGHTS[:, None] * curvature)
        gauss = over_nodes(GAUSS_WEIGHTS[:, None] * curvature)
        spread = over_nodes(KRONROD_WEIGHTS[:, None] * np.abs(curvature - kronrod))
        total = total + kronrod
        error = error + estimate(kronrod, gauss, spread, np.abs(kronrod))
    return total, error


def differentials(model: Model, nodes: Nodes) -> tuple[Array, Array, Array]:
    """Integrands, their magnitudes and inherited errors, each (7, nodes, k), in the order of QUANTITIES.

    NaN at nodes that are no states: outside the temperature limits, or mechanically unstable (beyond rounding next
    to the critical point).
    """
    T, v, dT, dv = nodes
    t = model.residual.pressure(T, v)
    low, high = model.T_limits
    with np.errstate(invalid="ignore"):
        state = (low * (1.0 - 1e-9) <= T) & (high * (1.0 + 1e-9) >= T) & (t.p_v * v < 1e-6 * np.abs(t.p))
    if np.any(dT):
        cv, cv_error = isochoric_heat_capacity(model, T, v)
    else:
        cv, cv_error = np.zeros(T.shape), np.zeros(T.shape)
    heat_by_T, heat_by_v = cv * dT, T * t.p_T * dv
    p_dv = t.p * dv
    pressure_by_T, pressure_by_v = v * t.p_T * dT, v * t.p_v * dv
    T_ds = np.where(state, heat_by_T + heat_by_v, np.nan)
    v_dp = pressure_by_T + pressure_by_v
    heat_size = np.abs(heat_by_T) + np.abs(heat_by_v)
    push_size = np.abs(pressure_by_T) + np.abs(pressure_by_v)
    dh = T_ds + v_dp
    values = np.stack([T_ds / T, T_ds - p_dv, dh, p_dv, v_dp, T_ds, dh / T])
    h_size = heat_size + push_size
    sizes = np.stack([heat_size / T, heat_size + np.abs(p_dv), h_size, np.abs(p_dv), push_size, heat_size, h_size / T])
    slip = cv_error * np.abs(dT)
    zero = np.zeros_like(slip)
    inherited = np.stack([slip / T, slip, slip, zero, zero, slip, slip / T])
    return values, sizes, inherited
