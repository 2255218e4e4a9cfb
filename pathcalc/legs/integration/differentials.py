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
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model, SaturationLine
from pathcalc.legs.integration.families import Nodes
from pathcalc.legs.integration.quadrature import GAUSS_WEIGHTS, KRONROD_WEIGHTS, NODES, estimate, integrate, over_nodes

QUANTITIES = ("ds", "du", "dh", "p_dv", "v_dp", "T_ds", "dh_over_T")
"""What is integrated along every curve: J/(mol K), J/mol, J/mol, J/mol, J/mol, J/mol, J/(mol K)."""

_BLOCK = 4096
_ACROSS = 0.95
"""Below this part of T_c a liquid's heat capacity is taken by way of the saturation line."""

_EXPANSION = 2e-11
"""Relative error of d²p/dT² along the saturation line (found: below 2·10^-12, all substances)."""

_ROUNDING = 1e-9
"""Error of c_v/R by that way which rounding of the equation leaves (found: below 5·10^-10)."""

_CAUTION = 10.0
"""Times the estimate of a halved integral: where terms cancel, rounding may exceed it (found: up to 6 times)."""

_WANTED = 1e-11
"""Error of c_v/R, and of a panel of its integral, above which the integral is taken in more panels."""


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
    """The integral and its error.

    Equations of many terms swing wildly inside their dome: cold liquids are reached across the saturation line.
    """
    line = model.residual.coexistence
    if line is None:
        return _panel(model, T, v / NODES[:, None], -T / v)
    value, error = np.empty(T.size), np.empty(T.size)
    dense = (v < model.v_c) & (_ACROSS * model.T_c > T) & (line.T_low <= T)
    across, straight = np.flatnonzero(dense), np.flatnonzero(~dense)
    if straight.size:
        value[straight], error[straight] = _refined(model, None, T[straight], v[straight])
    if across.size:
        value[across], error[across] = _across(model, line, T[across], v[across])
    return value, error


def _across(model: Model, line: SaturationLine, T: Array, v: Array) -> tuple[Array, Array]:
    """c_v − c_v⁰ of a liquid by way of saturated vapour and the saturation line.

    As Δs = p' Δv along the line, T dΔs/dT = c_σ,v − c_σ,l with c_σ = c_v + T (∂p/∂T)_v v' and
    v' = [p' − (∂p/∂T)_v]/(∂p/∂v)_T of each phase; so c_v,l = c_v,v + T [(p_T v')_v − (p_T v')_l − (p' Δv)'].
    """
    sat = line.at_T(T)
    vapour, slip = _refined(model, None, T, sat.v_vapour)
    along = []
    for volume in (sat.v_liquid, sat.v_vapour):
        t = model.residual.pressure(T, volume)
        along.append((t.p_T, (sat.dp_dT - t.p_T) / t.p_v))
    (p_T_l, w_l), (p_T_v, w_v) = along
    wide = sat.v_vapour - sat.v_liquid
    bent = line.d2p_dT2(T) * wide
    saturated = vapour + T * ((p_T_v * w_v - p_T_l * w_l) - bent - sat.dp_dT * (w_v - w_l))
    rest, more = _refined(model, 1.0 / sat.v_liquid, T, v)
    return saturated + rest, slip + more + _EXPANSION * T * np.abs(bent) + _ROUNDING * model.R


def _refined(model: Model, rho: Array | None, T: Array, v: Array) -> tuple[Array, Array]:
    """The integral from the density ``rho`` (None: zero) to 1/v, in more panels where it needs them."""
    first = np.zeros(T.size) if rho is None else rho
    volume = v / NODES[:, None] if rho is None else 1.0 / (first + (1.0 / v - first) * NODES[:, None])
    value, error = _panel(model, T, volume, -T * (1.0 / v - first))
    rough = np.flatnonzero(error > _WANTED * model.R)
    if rough.size:
        value[rough], error[rough] = _bisected(model, first[rough], T[rough], 1.0 / v[rough])
    return value, error


def _bisected(model: Model, first: Array, T: Array, last: Array) -> tuple[Array, Array]:
    """The integral between two densities, (n,), by halving of panels, cut at the critical density.

    Next to the critical point the integrand has its peak there, the sharper the nearer.
    """
    middle = np.clip(1.0 / model.v_c, first, last)
    low, high = np.concatenate([first, middle]), np.concatenate([middle, last])
    lane = np.flatnonzero(high > low)
    low, width, warm = low[lane], (high - low)[lane], np.tile(T, 2)[lane]

    def integrand(x: Array, k: NDArray[np.intp]) -> tuple[Array, Array, Array]:
        volume = 1.0 / (low[k] + x * width[k])
        value = -warm[k] * width[k] * model.residual.pressure_curvature(warm[k], volume) * volume * volume
        return value[None], np.abs(value)[None], np.zeros_like(value)[None]

    found = integrate(integrand, 1, lane.size, np.full((1, lane.size), model.R), rtol=_WANTED)
    value, error = np.zeros(2 * T.size), np.zeros(2 * T.size)
    value[lane], error[lane] = found.value[0], _CAUTION * found.error[0]
    return value.reshape(2, -1).sum(axis=0), error.reshape(2, -1).sum(axis=0)


def _panel(model: Model, T: Array, volume: Array, scale: Array) -> tuple[Array, Array]:
    curvature = model.residual.pressure_curvature(T, volume) * volume * volume
    kronrod = over_nodes(KRONROD_WEIGHTS[:, None] * curvature) * scale
    gauss = over_nodes(GAUSS_WEIGHTS[:, None] * curvature) * scale
    spread = over_nodes(KRONROD_WEIGHTS[:, None] * np.abs(curvature * scale - kronrod))
    return kronrod, estimate(kronrod, gauss, spread, np.abs(kronrod))


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
