"""States of given pressure: with T, and with one of v, h, s, u.

On an isobar all four rise with T (c_p > 0, c_p/T > 0, thermal expansion), through the dome as well, so one
state at most has the value asked for.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equilibrium import quantity, reasons
from pathcalc.equilibrium.iterate import guarded_newton
from pathcalc.equilibrium.points import Draft, Mask, Points, Saturation
from pathcalc.equilibrium.saturation import difference, pressure_range, saturation_at_p

AT_SATURATION = 1e-9
"""(T, p) closer to the saturation line than this part of the pressure does not fix a state."""


_ON_BRANCH = 1e-6
"""A volume further than this from the stable one at the T found for it lies inside the spinodal."""


def range_reason(model: Model, T: Array) -> NDArray[np.int16]:
    """0 where T (K) lies within the limits of the model, else the reason."""
    reason = np.zeros(T.size, dtype=np.int16)
    low, high = model.T_limits
    reason[low > T] = reasons.BELOW_TRIPLE_POINT
    reason[high < T] = reasons.ABOVE_RANGE
    reason[~((T > 0.0) & (np.inf > T))] = reasons.NOT_A_STATE
    return reason


def flash_Tp(model: Model, T: Array, p: Array) -> Points:
    """The stable state at ``T`` (K), ``p`` (Pa): of two volumes, that of the lower Gibbs energy."""
    draft = Draft(T.size)
    reason = range_reason(model, T)
    reason[~((p > 0.0) & (p < np.inf))] = reasons.NOT_A_STATE
    with np.errstate(all="ignore"):
        roots = model.residual.volume_roots(T, p)
        v = np.where(np.isnan(roots[1]), roots[0], roots[1])
        both = ~np.isnan(roots[0]) & ~np.isnan(roots[1])
        if both.any():
            if both.all():
                f, _, slope, _ = difference(model, T, p, roots)
                v = np.where(f < 0.0, roots[0], roots[1])
            else:
                f, _, slope, _ = difference(model, T[both], p[both], roots[:, both])
                v[both] = np.where(f < 0.0, roots[0, both], roots[1, both])
            near = np.abs(f) < AT_SATURATION * np.abs(slope)
            if near.any():
                at = np.flatnonzero(both)[near]
                reason[at] = np.where(reason[at] == 0, reasons.AT_SATURATION, reason[at])
        reason[(reason == 0) & ~np.isfinite(v)] = reasons.NO_ROOT
    draft.T, draft.p, draft.v, draft.reason = T.copy(), p.copy(), v, reason
    return draft.finish(model)


def flash_p(model: Model, p: Array, key: str, target: Array) -> Points:
    """The state at ``p`` (Pa) where ``key`` (v, h, s or u, per mole) has the value ``target``."""
    n = p.size
    draft = Draft(n)
    good = np.isfinite(target) & (p > 0.0) & (p < np.inf)
    if key == "v":
        good &= target > 0.0
    draft.reason[~good] = reasons.NOT_A_STATE
    branch = np.zeros(n, dtype=np.int8)
    T_low, T_high = model.T_limits
    low, high = np.full(n, T_low), np.full(n, T_high)
    start = _start(model, p, key, target)
    if model.has_dome:
        below, _ = pressure_range(model)
        with np.errstate(invalid="ignore"):
            domed = np.flatnonzero(good & (p < model.p_c) & (p >= below))
        if domed.size:
            sat = saturation_at_p(model, p[domed])
            _split(model, domed, sat, key, target, draft, branch, low, high, start, good)
        branch[good & (p < below)] = 1
    todo = np.flatnonzero(good)
    if todo.size:
        _single_phase(model, todo, p, key, target, draft, branch, low, high, start)
    return draft.finish(model)


def _start(model: Model, p: Array, key: str, target: Array) -> Array:
    """A temperature to begin with where there is no saturation line to begin from."""
    with np.errstate(all="ignore"):
        if key == "v":
            return p * target / model.R
        return np.full(p.size, 1.2 * model.T_c if model.has_dome else 400.0)


def _split(
    model: Model,
    at: NDArray[np.intp],
    sat: Saturation,
    key: str,
    target: Array,
    draft: Draft,
    branch: NDArray[np.int8],
    low: Array,
    high: Array,
    start: Array,
    good: Mask,
) -> None:
    """Sorts lanes below the critical pressure into liquid, vapour and two-phase, and settles the last."""
    wanted = target[at]
    with np.errstate(all="ignore"):
        liquid = quantity.value(model, key, sat.T, sat.v_liquid)
        vapour = quantity.value(model, key, sat.T, sat.v_vapour)
        x = (wanted - liquid) / (vapour - liquid)
        end = 4e-15 * np.maximum(np.abs(liquid), np.abs(vapour)) / (vapour - liquid)
        x = np.where(np.abs(x) <= end, 0.0, np.where(np.abs(x - 1.0) <= end, 1.0, x))
        known = sat.reason == 0
        inside = known & (x >= 0.0) & (x <= 1.0)
        is_liquid, is_vapour = known & (x < 0.0), known & (x > 1.0)
    if inside.any():
        here = at[inside]
        part = Saturation(*(getattr(sat, name)[inside] for name in Saturation.__dataclass_fields__))
        draft.put_mixed(here, part, x[inside])
        good[here] = False
    for mask, code in ((is_liquid, -1), (is_vapour, 1)):
        here = at[mask]
        branch[here] = code
        start[here] = sat.T[mask]
        (high if code < 0 else low)[here] = sat.T[mask]
    if is_vapour.any() or is_liquid.any():
        _better_start(model, at, sat, key, wanted, start, is_liquid, is_vapour, liquid, vapour)
    # next to the critical pressure there is no dome to speak of: the whole isobar is searched


def _better_start(
    model: Model,
    at: NDArray[np.intp],
    sat: Saturation,
    key: str,
    wanted: Array,
    start: Array,
    is_liquid: Mask,
    is_vapour: Mask,
    liquid: Array,
    vapour: Array,
) -> None:
    """Starts single-phase lanes from the saturation line with the heat capacity there."""
    for mask, volumes, values in ((is_liquid, sat.v_liquid, liquid), (is_vapour, sat.v_vapour, vapour)):
        if not mask.any() or (key == "v" and mask is is_vapour):
            continue
        T = sat.T[mask]
        with np.errstate(all="ignore"):
            slope = quantity.at_pressure(model, key, T, volumes[mask])[1]
            step = (wanted[mask] - values[mask]) / slope
            step = T * np.expm1(np.clip(step / T, -3.0, 3.0)) if key == "s" else step
        start[at[mask]] = T + step
    if key == "v" and is_vapour.any():
        here = at[is_vapour]
        start[here] = sat.T[is_vapour] * wanted[is_vapour] / sat.v_vapour[is_vapour]


def _single_phase(
    model: Model,
    todo: NDArray[np.intp],
    p: Array,
    key: str,
    target: Array,
    draft: Draft,
    branch: NDArray[np.int8],
    low: Array,
    high: Array,
    start: Array,
) -> None:
    logarithmic = key == "s"

    def fun(x: Array, p: Array, wanted: Array, branch: Array) -> tuple[Array, Array]:
        T = np.exp(x) if logarithmic else x
        v = _root(model, T, p, branch)
        X, slope = quantity.at_pressure(model, key, T, v)
        f = X - wanted
        lost = v != v  # beyond the end of a branch: densest side
        f = np.where(lost, -1.0, f)
        return f, np.where(lost, np.nan, slope * T if logarithmic else slope)

    def at_volume(T: Array, p: Array, v: Array, branch: Array) -> tuple[Array, Array]:
        t = model.residual.pressure(T, v)
        return t.p - p, t.p_T

    lo, hi, x = (a[todo] for a in (low, high, start))
    q, b = p[todo], branch[todo].astype(np.float64)
    T_low, T_high = lo, hi
    with np.errstate(all="ignore"):
        if logarithmic:
            lo, hi, x = np.log(lo), np.log(hi), np.log(x)
        lo = lo - 1e-12 * np.abs(lo)
        hi = hi + 1e-12 * np.abs(hi)
        args = (q, target[todo], b)
        root = guarded_newton(at_volume if key == "v" else fun, x, lo, hi, args, unit=1.0 if logarithmic else None)
        T = np.clip(np.exp(root.x) if logarithmic else root.x, T_low, T_high)
        v = _root(model, T, q, b)
    ok = root.ok
    if key == "v":
        with np.errstate(all="ignore"):
            ok = ok & (np.abs(v / target[todo] - 1.0) < _ON_BRANCH)
        v = target[todo].copy()
    middle = 0.5 * (T_low + T_high)
    failed = np.where(middle > T, reasons.BELOW_TRIPLE_POINT, reasons.ABOVE_RANGE)
    if not model.has_dome:
        with np.errstate(all="ignore"):
            dense = np.isnan(_root(model, T * (1.0 - 1e-6), q, b))
        failed = np.where(dense, reasons.NO_ROOT, failed)
    draft.put(todo, T, q, v, np.where(ok, 0, failed).astype(np.int16))


def _root(model: Model, T: Array, p: Array, branch: Array) -> Array:
    """The volume on a branch: −1 liquid-like, 1 vapour-like, 0 whichever there is (dense first)."""
    roots = model.residual.volume_roots(T, p)
    liquid, vapour = roots[0], roots[1]
    dense = np.where(np.isnan(liquid), vapour, liquid)
    light = np.where(np.isnan(vapour), liquid, vapour)
    chosen: Array = np.where(branch > 0.0, light, dense)
    return chosen
