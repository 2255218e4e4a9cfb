"""Vapour-liquid equilibrium of a pure substance: equal pressure and equal Gibbs energy.

At a trial (T, p) both volumes come from the equation; f = (g_liquid − g_vapour)/(R T) then has the slopes
∂f/∂ln p = p (v_l − v_v)/(R T) and ∂f/∂(1/T) = (h_l − h_v)/R. Where the equation has only a vapour (liquid)
volume the trial pressure is too low (high): that keeps a bracket. An equation that knows its coexistence curve
beforehand is taken at its word.
"""

from __future__ import annotations

from functools import lru_cache

import numpy as np

from pathcalc.equations.contract import P_STANDARD, Array, Model
from pathcalc.equilibrium import quantity, reasons
from pathcalc.equilibrium.points import Codes, Mask, Saturation

__all__ = [
    "NEAR_CRITICAL",
    "Saturation",
    "beside_critical",
    "difference",
    "ends",
    "nearest_T",
    "pressure_range",
    "quality",
    "saturation_at_T",
    "saturation_at_p",
]

NEAR_CRITICAL = 1e-8
"""Closer to T_c than this part of it liquid and vapour cannot be told apart reliably in double precision."""

_STEPS = 120
_TOLERANCE = 1e-8
_HARDLY_ABOVE = 1e-6
_AROUND = 0.1
_SCATTER = 3e-14
"""Part of a saturated energy or entropy that rounding of the equation's sums may take."""


def _lanes(value: Array | float) -> Array:
    return np.atleast_1d(np.asarray(value, dtype=np.float64))


def saturation_at_T(model: Model, T: Array | float) -> Saturation:
    """Saturation at the temperatures ``T`` (K), shape (n,)."""
    T = _lanes(T)
    reason = _why_not(model, T)
    n = T.size
    p, v_l, v_v, slope = (np.full(n, np.nan) for _ in range(4))
    go = np.flatnonzero(reason == 0)
    if go.size:
        every = go.size == n
        t = T if every else T[go]
        line = model.residual.coexistence
        if line is not None:
            _, p[go], v_l[go], v_v[go], slope[go] = line.at_T(t)
            return _clean(T.copy(), p, v_l, v_v, slope, reason)
        found_p = model.residual.saturation_start(t)
        found_p, ok = _solve_p(model, t, found_p)
        reason[go[~ok]] = reasons.NOT_CONVERGED
        p[go] = found_p
        v_l[go], v_v[go], slope[go] = _volumes(model, t, found_p)
    return _clean(T.copy(), p, v_l, v_v, slope, reason)


def saturation_at_p(model: Model, p: Array | float) -> Saturation:
    """Saturation at the pressures ``p`` (Pa), shape (n,)."""
    p = _lanes(p)
    n = p.size
    T, v_l, v_v, slope = (np.full(n, np.nan) for _ in range(4))
    reason = np.zeros(n, dtype=np.int16)
    if not model.has_dome:
        reason[:] = reasons.NO_COEXISTENCE
        return _clean(T, p.copy(), v_l, v_v, slope, reason)
    low, high = pressure_range(model)
    with np.errstate(invalid="ignore"):
        reason[p > high] = reasons.NEAR_CRITICAL
        reason[p >= model.p_c] = reasons.ABOVE_CRITICAL
        reason[p < low] = reasons.BELOW_RANGE
        reason[~(p > 0.0)] = reasons.NOT_A_STATE
    go = np.flatnonzero(reason == 0)
    if go.size:
        q = p if go.size == n else p[go]
        line = model.residual.coexistence
        if line is not None:
            T[go], _, v_l[go], v_v[go], slope[go] = line.at_p(q)
            return _clean(T, p.copy(), v_l, v_v, slope, reason)
        t, ok = _solve_T(model, q)
        reason[go[~ok]] = reasons.NOT_CONVERGED
        T[go] = t
        v_l[go], v_v[go], slope[go] = _volumes(model, t, q)
    return _clean(T, p.copy(), v_l, v_v, slope, reason)


def _why_not(model: Model, T: Array) -> Codes:
    reason = np.zeros(T.size, dtype=np.int16)
    if not model.has_dome:
        reason[:] = reasons.NO_COEXISTENCE
        return reason
    with np.errstate(invalid="ignore"):
        line = model.residual.coexistence
        top = model.T_c * (1.0 - NEAR_CRITICAL) if line is None else line.T_top
        reason[top < T] = reasons.NEAR_CRITICAL
        reason[model.T_c <= T] = reasons.ABOVE_CRITICAL
        reason[model.T_limits[0] > T] = reasons.BELOW_TRIPLE_POINT
        reason[~(T > 0.0)] = reasons.NOT_A_STATE
    return reason


def _clean(T: Array, p: Array, v_l: Array, v_v: Array, slope: Array, reason: Codes) -> Saturation:
    with np.errstate(invalid="ignore"):
        lost = (reason == 0) & ~((v_v > v_l) & np.isfinite(T + p + slope))
    reason[lost] = reasons.NOT_CONVERGED
    bad = reason != 0
    if bad.any():
        for a in (T, p, v_l, v_v, slope):
            a[bad] = np.nan
    return Saturation(T, p, v_l, v_v, slope, reason)


@lru_cache(maxsize=64)
def pressure_range(model: Model) -> tuple[float, float]:
    """Saturation pressures (Pa) at the lowest temperature and next to the critical point."""
    both = saturation_at_T(model, np.array([model.T_limits[0], nearest_T(model)]))
    return float(both.p[0]), float(both.p[1])


def nearest_T(model: Model) -> float:
    """The temperature (K) next to the critical one up to which saturation is looked for."""
    line = model.residual.coexistence
    return model.T_c * (1.0 - 1.5 * NEAR_CRITICAL) if line is None else line.T_top


def beside_critical(model: Model, T: Array, v: Array) -> Mask:
    """Where ``T`` (K), ``v`` (m3/mol) lie so close to the critical point that p hardly depends on v."""
    with np.errstate(invalid="ignore"):
        warm = (nearest_T(model) < T) & (model.T_c * (1.0 + _HARDLY_ABOVE) > T)
        return np.asarray(warm & (np.abs(v - model.v_c) < _AROUND * model.v_c))


def quality(key: str, wanted: Array, liquid: Array, vapour: Array) -> Array:
    """x from the values of both phases; one within rounding of an end is that end.

    Energies and entropies are rounded to the larger of both, as they count from anywhere; a volume to itself. Those
    of the equation scatter by some of their last digits: a liquid that hardly evaporates would be full of vapour.
    """
    size_l, size_v, digits = np.abs(liquid), np.abs(vapour), 4e-15
    if key != "v":
        size_l = size_v = np.maximum(size_l, size_v)
        digits = _SCATTER
    x = (wanted - liquid) / (vapour - liquid)
    at_liquid, at_vapour = np.abs(wanted - liquid) <= digits * size_l, np.abs(wanted - vapour) <= digits * size_v
    return np.asarray(np.where(at_liquid, 0.0, np.where(at_vapour, 1.0, x)))


def ends(model: Model, key: str, sat: Saturation) -> tuple[Array, Array]:
    """``key`` (v, h, s or u, per mole) of saturated liquid and vapour, shape (n,)."""
    if key == "v":
        return sat.v_liquid, sat.v_vapour
    line = model.residual.coexistence
    if line is None:
        return quantity.value(model, key, sat.T, sat.v_liquid), quantity.value(model, key, sat.T, sat.v_vapour)
    with np.errstate(all="ignore"):
        d10_l, d10_v, d00_l = line.energies(sat.T)
        _, h0_R, s0_R = model.ideal.terms(sat.T)
        RT = model.R * sat.T
        Z_l, Z_v = sat.p * sat.v_liquid / RT, sat.p * sat.v_vapour / RT
        if key == "s":
            ratio = np.log(sat.v_vapour / sat.v_liquid)
            d00_v = d00_l + (Z_l - Z_v) + ratio
            free = np.log(sat.v_vapour * (P_STANDARD / model.R) / sat.T) + s0_R
            liquid = model.R * (free - ratio + d10_l - d00_l) + model.s_offset
            return liquid, model.R * (free + d10_v - d00_v) + model.s_offset
        common = model.R * h0_R + model.h_offset
        if key == "u":
            common = common - RT
            return common + RT * d10_l, common + RT * d10_v
        return common + RT * (d10_l + (Z_l - 1.0)), common + RT * (d10_v + (Z_v - 1.0))


def difference(model: Model, T: Array, p: Array, v: Array) -> tuple[Array, Array, Array, Array]:
    """(g_l − g_v)/(R T), (h_l − h_v)/(R T), p (v_l − v_v)/(R T), and its ln p slope, for volumes (2, n)."""
    d = model.residual.reduced(T, 1.0 / v)
    RT = model.R * T
    pv = p * (v[0] - v[1]) / RT
    f = (d.d00[0] - d.d00[1]) + pv + np.log(v[1] / v[0])
    dh = (d.d10[0] - d.d10[1]) + pv
    Z = p * v / RT
    q = Z * Z / (1.0 + 2.0 * d.d01 + d.d02)  # -p^2 (dv/dp)_T/(R T)
    return f, dh, pv, pv - (q[0] - q[1])


def _solve_p(model: Model, T: Array, start: Array) -> tuple[Array, Mask]:
    """Saturation pressure by Halley's method in ln p, bracketed."""
    n = T.size
    out, okay = np.full(n, np.nan), np.zeros(n, dtype=np.bool_)
    lane = np.arange(n)
    with np.errstate(all="ignore"):
        x = np.log(start)
        low, high = x - 7.0, np.full(n, np.log(model.p_c))
        x = np.minimum(x, high)
        for _ in range(_STEPS):
            p = np.exp(x)
            v = model.residual.volume_roots(T, p)
            f, _, slope, bend = difference(model, T, p, v)
            no_liquid, no_vapour = np.isnan(v[0]), np.isnan(v[1])
            low = np.where(no_liquid | (f > 0.0), x, low)
            high = np.where(no_vapour | (f < 0.0), x, high)
            step = f / slope
            step = step / (1.0 - 0.5 * step * bend / slope)
            new = x - step
            inside = (new >= low) & (new <= high)
            done = (np.abs(step) <= _TOLERANCE) & inside
            stuck = ~done & (high - low <= 4e-16 * np.maximum(np.abs(x), 1.0))
            x = np.where(inside, new, 0.5 * (low + high))
            leave = done | stuck | (no_liquid & no_vapour)
            if leave.any():
                here = lane[leave]
                out[here] = np.exp(x[leave])
                okay[here] = done[leave] | (np.abs(f[leave]) < 1e-12)
                if leave.all():
                    break
                go = ~leave
                lane, x, low, high, T = (a[go] for a in (lane, x, low, high, T))
    return out, okay


def _start_T(model: Model, log_p: Array) -> Array:
    """Temperature (K) whose start pressure is near exp(log_p), by secants in (1/T, ln p)."""
    T_c, log_p_c = model.T_c, float(np.log(model.p_c))
    middle = float(model.residual.saturation_start(np.array([0.7 * T_c]))[0])
    steep = (log_p_c - float(np.log(middle))) / (1.0 / 0.7 - 1.0)
    z0 = np.ones_like(log_p)
    f0 = log_p_c - log_p
    z = 1.0 + f0 / steep
    z_max = T_c / (0.999 * model.T_limits[0])
    for _ in range(4):
        z = np.clip(z, 1.0, z_max)
        f = np.log(model.residual.saturation_start(T_c / z)) - log_p
        slope = (f - f0) / (z - z0)
        new = z - f / np.where(slope < 0.0, slope, -steep)
        z0, f0, z = z, f, np.where(np.isfinite(new), new, z)
    return T_c / np.clip(z, 1.0, z_max)


def _solve_T(model: Model, p: Array) -> tuple[Array, Mask]:
    """Saturation temperature by Newton's method in 1/T, bracketed."""
    n = p.size
    out, okay = np.full(n, np.nan), np.zeros(n, dtype=np.bool_)
    lane = np.arange(n)
    with np.errstate(all="ignore"):
        y = 1.0 / _start_T(model, np.log(p))
        low = np.full(n, 1.0 / model.T_c)
        high = np.full(n, 1.0 / (model.T_limits[0] * (1.0 - 1e-12)))
        y = np.where((y >= low) & (y <= high), y, 0.5 * (low + high))
        for _ in range(_STEPS):
            T = 1.0 / y
            v = model.residual.volume_roots(T, p)
            f, dh, _, _ = difference(model, T, p, v)
            no_liquid, no_vapour = np.isnan(v[0]), np.isnan(v[1])
            low = np.where(no_liquid | (f > 0.0), y, low)
            high = np.where(no_vapour | (f < 0.0), y, high)
            step = f / (dh * T)
            new = y - step
            inside = (new >= low) & (new <= high)
            done = (np.abs(step) <= _TOLERANCE * y) & inside
            stuck = ~done & (high - low <= 4e-16 * y)
            y = np.where(inside, new, 0.5 * (low + high))
            leave = done | stuck | (no_liquid & no_vapour)
            if leave.any():
                here = lane[leave]
                out[here] = 1.0 / y[leave]
                okay[here] = done[leave] | (np.abs(f[leave]) < 1e-12)
                if leave.all():
                    break
                go = ~leave
                lane, y, low, high, p = (a[go] for a in (lane, y, low, high, p))
    return out, okay


def _volumes(model: Model, T: Array, p: Array) -> tuple[Array, Array, Array]:
    """Both volumes and the slope of the saturation line by Clapeyron, dp/dT = (h_v − h_l)/(T (v_v − v_l))."""
    with np.errstate(all="ignore"):
        v = model.residual.volume_roots(T, p)
        _, dh, pv, _ = difference(model, T, p, v)
        return v[0], v[1], dh / pv * (p / T)
