"""States of given volume: with one of s, u, h.

At fixed volume all three rise with T through one phase and through the dome (c_v > 0), so one state at most
has the value asked for. The single-phase state is found first; where it would lie inside the dome the
two-phase one is found in its place.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium import quantity, reasons
from pathcalc.equilibrium.iterate import Root, guarded_newton
from pathcalc.equilibrium.points import Draft, Mask, Points, Saturation, mix
from pathcalc.equilibrium.saturation import beside_critical, nearest_T, quality, saturation_at_T
from pathcalc.equilibrium.scan import scanned

_ROUNDING = 1e-11
_NODES = 60
_BESIDE = 3e-3
"""How well the saturation line tells the temperature of a volume."""


def flash_v(model: Model, v: Array, key: str, target: Array) -> Points:
    """The state of volume ``v`` (m3/mol) where ``key`` (s, u or h, per mole) has the value ``target``."""
    n = v.size
    draft = Draft(n)
    good = np.isfinite(target) & (v > 0.0) & (v < np.inf)
    draft.reason[~good] = reasons.NOT_A_STATE
    T_low, T_high = model.T_limits
    with np.errstate(invalid="ignore"):
        dense = good & ~(v > model.residual.v_min(np.full(n, T_low)))
    draft.reason[dense] = reasons.NO_ROOT
    at = np.flatnonzero(good & ~dense)
    if at.size == 0:
        return draft.finish(model)
    w, wanted = v[at], target[at]
    low, high = np.full(at.size, T_low * (1.0 - 1e-12)), np.full(at.size, T_high * (1.0 + 1e-12))

    def fun(T: Array, v: Array, wanted: Array) -> tuple[Array, Array]:
        X, X_T, _ = quantity.of(key, thermal(model, T, v), T, v)
        return X - wanted, X_T

    if model.residual.coexistence is not None:
        _through_dome(model, at, w, wanted, key, draft)
        return draft.finish(model)
    start = np.full(at.size, 1.2 * model.T_c if model.has_dome else 400.0)
    root = guarded_newton(fun, start, low, high, (w, wanted))
    T = np.clip(root.x, T_low, T_high)
    with np.errstate(all="ignore"):
        t = thermal(model, T, w)
        stable = root.ok & (t.p > 0.0) & (t.p_v < 0.0)
    failed = np.where(0.5 * (T_low + T_high) > T, reasons.BELOW_TRIPLE_POINT, reasons.ABOVE_RANGE)
    reason = np.where(stable, 0, np.where(root.ok, reasons.NO_ROOT, failed)).astype(np.int16)
    draft.put(at, T, t.p, w, reason)
    if model.has_dome:
        below = at[(model.T_c > T) | ~root.ok]
        if below.size:
            _below_critical(model, below, v, key, target, draft)
    return draft.finish(model)


def _through_dome(model: Model, at: NDArray[np.intp], v: Array, wanted: Array, key: str, draft: Draft) -> None:
    """The stable state at once, for equations that are wild inside their dome."""
    T_low, T_high = model.T_limits
    line = model.residual.coexistence
    assert line is not None
    boundary = line.T_near(v)

    def fun(T: Array, v: Array, wanted: Array) -> tuple[Array, Array]:
        X, slope, _, _ = stable(model, key, np.clip(T, T_low, T_high), v)
        return X - wanted, slope

    low, high = np.full(at.size, T_low * (1.0 - 1e-12)), np.full(at.size, T_high * (1.0 + 1e-12))
    edge = np.clip(boundary, T_low, T_high)
    at_edge = fun(edge, v, wanted)[0]
    hotter = at_edge < 0.0
    low, high = np.where(hotter, edge * (1.0 - _BESIDE), low), np.where(hotter, high, edge * (1.0 + _BESIDE))
    low, high = np.maximum(low, T_low * (1.0 - 1e-12)), np.minimum(high, T_high * (1.0 + 1e-12))
    start = np.where(hotter, edge * (1.0 + _BESIDE), edge * (1.0 - _BESIDE))
    if model.residual.limits is not None:
        # pressure is nearly linear in T on an isochore: this is beyond the highest one
        with np.errstate(all="ignore"):
            slope = thermal(model, start, v).p_T
            end = start + 1.5 * model.residual.limits.p_max / slope
            high = np.where(end > start, np.minimum(high, end), high)
    root = guarded_newton(fun, start, low, high, (v, wanted))
    lost = np.flatnonzero(~root.ok)
    if lost.size:
        _search(model, key, v[lost], wanted[lost], root, lost)
    T = np.clip(root.x, T_low, T_high)
    sat = saturation_at_T(model, T)
    with np.errstate(all="ignore"):
        x = quality("v", v, sat.v_liquid, sat.v_vapour)
        inside = (x >= 0.0) & (x <= 1.0)
        t = thermal(model, T, v)
        sound = (t.p > 0.0) & (t.p_v < 0.0)
    failed = np.where(0.5 * (T_low + T_high) > T, reasons.BELOW_TRIPLE_POINT, reasons.ABOVE_RANGE)
    lost = np.where(beside_critical(model, T, v), reasons.NEAR_CRITICAL, reasons.NO_ROOT)
    reason = np.where(root.ok, np.where(sound | inside, 0, lost), failed).astype(np.int16)
    draft.put(at, T, t.p, v, reason)
    both = np.flatnonzero(inside)
    if both.size:
        here = at[both]
        draft.put_mixed(here, Saturation(*(getattr(sat, k)[both] for k in _FIELDS)), x[both])
        draft.v[here] = v[both]
        draft.reason[here] = np.where(root.ok[both], draft.reason[here], reason[both])


def _search(model: Model, key: str, v: Array, wanted: Array, root: Root, at: NDArray[np.intp]) -> None:
    """Goes through the temperatures at which a very dense state has a pressure that the equation covers."""
    limits = model.residual.limits
    assert limits is not None
    T_low, T_high = model.T_limits
    nodes = T_low * (T_high / T_low) ** np.linspace(0.0, 1.0, _NODES)[:, None] + np.zeros(at.size)

    def fun(T: Array, v: Array, wanted: Array) -> Array:
        t = thermal(model, T, v)
        sound = (t.p > 0.0) & (t.p_v < 0.0) & (t.cv > 0.0) & (t.p <= limits.p_max)
        return np.where(sound, quantity.of(key, t, T, v)[0] - wanted, np.nan)

    first, _, count = scanned(fun, nodes, (v, wanted))
    good = first.ok & (count == 1)
    root.x[at[good]], root.ok[at[good]] = first.x[good], True


def _below_critical(model: Model, at: NDArray[np.intp], v: Array, key: str, target: Array, draft: Draft) -> None:
    """Keeps the lanes whose single-phase state lies outside the dome, solves the others inside it."""
    T = draft.T[at]
    sat = saturation_at_T(model, np.clip(T, model.T_limits[0], nearest_T(model)))
    with np.errstate(all="ignore"):
        outside = (sat.v_liquid >= v[at]) | (v[at] >= sat.v_vapour)
    todo = at[~outside]
    if todo.size == 0:
        return
    w, wanted = v[todo], target[todo]
    bottom, top = model.T_limits[0], nearest_T(model)
    low, high = np.full(todo.size, bottom * (1.0 - 1e-12)), np.full(todo.size, top)

    def fun(T: Array, v: Array, wanted: Array) -> tuple[Array, Array]:
        X, slope, _, _ = stable(model, key, np.clip(T, bottom, top), v)
        return X - wanted, slope

    root = guarded_newton(fun, np.clip(draft.T[todo], bottom, top), low, high, (w, wanted))
    found = np.clip(root.x, bottom, top)
    _, _, sat, x = stable(model, key, found, w)
    with np.errstate(all="ignore"):
        x = np.where((x < 0.0) & (x > -_ROUNDING), 0.0, np.where((x > 1.0) & (x < 1.0 + _ROUNDING), 1.0, x))
        inside: Mask = (x >= 0.0) & (x <= 1.0)
    reason = np.where(found < 0.5 * (bottom + top), reasons.BELOW_TRIPLE_POINT, reasons.NEAR_CRITICAL)
    reason = np.where(root.ok, 0, reason).astype(np.int16)
    alone = ~inside
    if alone.any():
        here = todo[alone]
        draft.put(here, found[alone], thermal(model, found[alone], w[alone]).p, w[alone], reason[alone])
    here = todo[inside]
    draft.put_mixed(here, Saturation(*(getattr(sat, k)[inside] for k in _FIELDS)), x[inside])
    draft.v[here] = w[inside]
    draft.reason[here] = np.where(root.ok[inside], draft.reason[here], reason[inside])


_FIELDS = tuple(Saturation.__dataclass_fields__)


def stable(model: Model, key: str, T: Array, v: Array) -> tuple[Array, Array, Saturation, Array]:
    """X and (∂X/∂T)_v of the stable state below T_c, one phase or two; saturation at T; x (not clipped)."""
    sat = saturation_at_T(model, T)
    with np.errstate(all="ignore"):
        x = (v - sat.v_liquid) / (sat.v_vapour - sat.v_liquid)
        X, slope = mixed(model, key, sat, x)
        outside = ~((x >= 0.0) & (x <= 1.0))
        if outside.any():
            T1, v1 = T[outside], v[outside]
            X[outside], slope[outside], _ = quantity.of(key, thermal(model, T1, v1), T1, v1)
    return X, slope, sat, x


def mixed(model: Model, key: str, sat: Saturation, x: Array) -> tuple[Array, Array]:
    """X of the two-phase state and its T-slope at constant volume.

    With ' along the saturation line, v' = (dp/dT − (∂p/∂T)_v)/(∂p/∂v)_T for each phase and
    x' = −[(1 − x) v_l' + x v_v']/(v_v − v_l) at constant volume.
    """
    values, along, widths = [], [], []
    for v in (sat.v_liquid, sat.v_vapour):
        t = thermal(model, sat.T, v)
        X, X_T, X_v = quantity.of(key, t, sat.T, v)
        v_along = (sat.dp_dT - t.p_T) / t.p_v
        values.append(X)
        along.append(X_T + X_v * v_along)
        widths.append(v_along)
    x_T = -mix(x, widths[0], widths[1]) / (sat.v_vapour - sat.v_liquid)
    slope = mix(x, along[0], along[1]) + x_T * (values[1] - values[0])
    return mix(x, values[0], values[1]), slope
