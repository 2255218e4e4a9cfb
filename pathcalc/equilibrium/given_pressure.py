"""States of given pressure: with T, and with one of v, h, s, u.

On an isobar all four rise with T (c_p > 0, c_p/T > 0, thermal expansion), through the dome as well, so one
state at most has the value asked for.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equilibrium import quantity, reasons
from pathcalc.equilibrium.direct import at_pressure
from pathcalc.equilibrium.iterate import Root, guarded_newton
from pathcalc.equilibrium.points import Draft, Mask, Points, Saturation
from pathcalc.equilibrium.saturation import beside_critical, difference, ends, pressure_range, quality, saturation_at_p
from pathcalc.equilibrium.scan import scanned

AT_SATURATION = 1e-9
"""(T, p) closer to the saturation line than this part of the pressure does not fix a state."""


_ON_BRANCH = 1e-6
"""A volume further than this from the stable one at the T found for it lies inside the spinodal."""
_BESIDE = 3e-3
_NODES = 24
_HARDLY_WET = 1e-3


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
    settled = model.residual.volume_of(T, p)
    if settled is not None:
        v, above = settled
        with np.errstate(invalid="ignore"):
            reason[(reason == 0) & (np.abs(above) < AT_SATURATION)] = reasons.AT_SATURATION
        reason[(reason == 0) & ~np.isfinite(v)] = reasons.NO_ROOT
        draft.T, draft.p, draft.v, draft.reason = T.copy(), p.copy(), v, reason
        return draft.finish(model)
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
    edge = np.full(n, np.nan)
    start = _start(model, p, key, target)
    if model.has_dome:
        below, _ = pressure_range(model)
        with np.errstate(invalid="ignore"):
            domed = np.flatnonzero(good & (p < model.p_c) & (p >= below))
        if domed.size:
            sat = saturation_at_p(model, p[domed])
            _split(model, domed, sat, key, target, draft, branch, low, high, edge, start, good)
        branch[good & (p < below)] = 1
    todo = np.flatnonzero(good)
    if todo.size and key != "v" and model.residual.coexistence is not None:
        todo = _settled_directly(model, todo, p, key, target, draft, branch, low, high, edge)
    if key == "v" and model.residual.coexistence is not None:
        todo = _of_volume(model, todo, p, target, draft, branch, low, high)
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
    edge: Array,
    start: Array,
    good: Mask,
) -> None:
    """Sorts lanes below the critical pressure into liquid, vapour and two-phase, and settles the last."""
    wanted = target[at]
    with np.errstate(all="ignore"):
        liquid, vapour = ends(model, key, sat)
        x = quality(key, wanted, liquid, vapour)
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
        edge[here] = (sat.v_liquid if code < 0 else sat.v_vapour)[mask]
        (high if code < 0 else low)[here] = sat.T[mask]
    if (is_vapour.any() or is_liquid.any()) and (key == "v" or model.residual.coexistence is None):
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


def _settled_directly(
    model: Model,
    todo: NDArray[np.intp],
    p: Array,
    key: str,
    target: Array,
    draft: Draft,
    branch: NDArray[np.int8],
    low: Array,
    high: Array,
    edge: Array,
) -> NDArray[np.intp]:
    """Settles what Newton's method in both variables finds; returns the lanes left over."""
    lo, hi, q = low[todo], high[todo], p[todo]
    T, v, ok = at_pressure(model, key, q, target[todo], branch[todo].astype(np.float64), lo, hi, edge[todo])
    with np.errstate(invalid="ignore"):
        ok &= (lo * (1.0 - 1e-10) <= T) & (hi * (1.0 + 1e-10) >= T)
    draft.put(todo[ok], np.clip(T, lo, hi)[ok], q[ok], v[ok])
    return todo[~ok]


def _of_volume(
    model: Model,
    todo: NDArray[np.intp],
    p: Array,
    v: Array,
    draft: Draft,
    branch: NDArray[np.int8],
    low: Array,
    high: Array,
) -> NDArray[np.intp]:
    """Keeps the isochore out of the dome, and settles lanes where volume falls with T before it rises.

    Such a liquid (water below 4 °C) has the volume asked for at two temperatures, or at one on either side of the
    densest state.
    """
    line = model.residual.coexistence
    assert line is not None
    thin = todo[p[todo] < pressure_range(model)[0]]
    if thin.size:
        coldest = volume_on(model, np.full(thin.size, model.T_limits[0]), p[thin], np.ones(thin.size))
        below = thin[v[thin] < coldest * (1.0 - 1e-12)]
        draft.reason[below] = reasons.BELOW_TRIPLE_POINT
        todo = todo[~np.isin(todo, below)]
    dense = todo[branch[todo] <= 0]
    low[dense] = np.maximum(low[dense], np.minimum(line.T_near(v[dense]) * (1.0 - _BESIDE), high[dense]))
    cold = todo[(branch[todo] <= 0) & (v[todo] < model.v_c) & (low[todo] < 0.7 * model.T_c)]
    cold = cold[_contracts(model, p[cold])]
    if cold.size:
        first, second, count = _cold_liquid(model, p[cold], v[cold], high[cold])
        found = cold[count >= 1]
        draft.put(found, first.x[count >= 1], p[found], v[found])
        twice = cold[count >= 2]
        draft.reason[twice] = reasons.TWO_SOLUTIONS
        draft.T_other[twice], draft.p_other[twice] = second.x[count >= 2], p[twice]
        todo = todo[~np.isin(todo, found)]
    # a little vapour makes up for the contraction
    wet = np.flatnonzero((draft.reason == 0) & (draft.x > 0.0) & (draft.x < _HARDLY_WET))
    wet = wet[_contracts(model, p[wet])]
    if wet.size:
        first, _, count = _cold_liquid(model, p[wet], v[wet], draft.T[wet])
        both = wet[count >= 1]
        draft.reason[both] = reasons.TWO_SOLUTIONS
        draft.T_other[both], draft.p_other[both] = first.x[count >= 1], p[both]
    return todo


def _contracts(model: Model, p: Array) -> Mask:
    """Where the coldest liquid at ``p`` contracts on heating."""
    if p.size == 0:
        return np.zeros(0, dtype=np.bool_)
    T_low = np.full(p.size, model.T_limits[0])
    w = volume_on(model, T_low, p, np.full(p.size, -1.0))
    return np.asarray(model.residual.pressure(T_low, w).p_T < 0.0)


def _cold_liquid(model: Model, p: Array, v: Array, top: Array) -> tuple[Root, Root, Array]:
    """Temperatures below ``top`` at which liquid at ``p`` has the volume ``v``: first, second, their number."""
    edge = np.minimum(top, np.maximum(1.3 * model.T_limits[0], 0.6 * model.T_c))
    nodes = model.T_limits[0] + np.linspace(0.0, 1.0, _NODES)[:, None] * (edge - model.T_limits[0])

    def fun(T: Array, p: Array, wanted: Array) -> Array:
        return np.asarray(np.log(volume_on(model, T, p, np.full(T.size, -1.0)) / wanted))

    return scanned(fun, nodes, (p, v))


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
        v = volume_on(model, T, p, branch)
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
        v = volume_on(model, T, q, b)
    ok, blurred = root.ok, None
    if key == "v":
        wanted = target[todo]
        with np.errstate(all="ignore"):
            on_branch = np.abs(v / wanted - 1.0) < _ON_BRANCH
            if model.has_dome:
                # the volume of a pressure has lost its digits there
                blurred = beside_critical(model, T, wanted)
                on_branch |= blurred & (model.residual.pressure(T, wanted).p_v < 0.0)
        ok = ok & on_branch
        v = wanted.copy()
    middle = 0.5 * (T_low + T_high)
    failed = np.where(middle > T, reasons.BELOW_TRIPLE_POINT, reasons.ABOVE_RANGE)
    if not model.has_dome:
        with np.errstate(all="ignore"):
            dense = np.isnan(volume_on(model, T * (1.0 - 1e-6), q, b))
        failed = np.where(dense, reasons.NO_ROOT, failed)
    if blurred is not None:
        failed = np.where(blurred, reasons.NEAR_CRITICAL, failed)
    draft.put(todo, T, q, v, np.where(ok, 0, failed).astype(np.int16))


def volume_on(model: Model, T: Array, p: Array, branch: Array) -> Array:
    """The volume on a branch: −1 liquid-like, 1 vapour-like, 0 whichever there is (dense first)."""
    settled = model.residual.volume_of(T, p, branch)
    if settled is not None:
        return settled[0]
    roots = model.residual.volume_roots(T, p)
    liquid, vapour = roots[0], roots[1]
    dense = np.where(np.isnan(liquid), vapour, liquid)
    light = np.where(np.isnan(vapour), liquid, vapour)
    chosen: Array = np.where(branch > 0.0, light, dense)
    return chosen
