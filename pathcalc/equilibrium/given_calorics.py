"""States given by two of h, s, u.

Along an isentrope dh = v dp and du = −p dv, so h and u rise with p: one state has the (h, s) or (u, s)
asked for. With h and u the product p v = h − u is known; along that line u is scanned, as it need not be
monotone.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium import quantity, reasons
from pathcalc.equilibrium.given_pressure import flash_p
from pathcalc.equilibrium.given_volume import mixed
from pathcalc.equilibrium.iterate import guarded_newton
from pathcalc.equilibrium.points import Draft, Points, Saturation, mix
from pathcalc.equilibrium.saturation import pressure_range, saturation_at_T
from pathcalc.equilibrium.scan import scanned

_P_LEAST = 1e-3
_P_MOST = 1e10
_NODES = 200
_DENSE_NODES, _LIGHT_NODES = 200, 60
_HARDLY_WET = 1e-6
_COLD = 1.06
"""Times the lowest temperature: warmer liquids expand on heating."""

_DOME_NODES = 60
_HIGHEST_Z = 2.0
"""p v/(R T) of the thinnest states looked at is no larger."""

_APART = 1e-9
_MISSED = 1e-7
"""A sign change of a scan that leaves more than this is a jump, not a state."""
_CRITICAL = 1e-6
_POLISHING = 24
"""Steps: u hardly changes along an isentrope of a liquid near p = 0, where they only halve what is missing."""

_STILL = 1e-12
_REACHED = 3e-12
"""Part of h or u that equations whose terms cancel (R-22, R-123) scatter by."""

_FIELDS = tuple(Saturation.__dataclass_fields__)


def flash_s(model: Model, s: Array, key: str, target: Array) -> Points:
    """The state of entropy ``s`` (J/(mol K)) where ``key`` (h or u, J/mol) has the value ``target``."""
    n = s.size

    def fun(x: Array, s: Array, wanted: Array) -> tuple[Array, Array]:
        p = np.exp(x)
        points = flash_p(model, p, "s", s)
        X, compliance = _on_isentrope(model, points, key)
        f = X - wanted
        too_high = (points.reason == reasons.ABOVE_RANGE) | (points.reason == reasons.NO_ROOT)
        failed = points.reason != 0
        f = np.where(failed, np.where(too_high, 1.0, -1.0), f)
        slope = p * points.v if key == "h" else -p * p * compliance
        return f, np.where(failed, np.nan, slope)

    usable = np.isfinite(s) & np.isfinite(target)
    draft = Draft(n)
    draft.reason[~usable] = reasons.NOT_A_STATE
    at = np.flatnonzero(usable)
    if at.size == 0:
        return draft.finish(model)
    low, high = np.full(at.size, np.log(_least(model))), np.full(at.size, np.log(_P_MOST))
    start = np.full(at.size, np.log(1e5))
    root = guarded_newton(fun, start, low, high, (s[at], target[at]), unit=1.0, tolerance=3e-9)
    points = flash_p(model, np.exp(root.x), "s", s[at])
    draft.take(at, points)
    tried = at[points.ok]
    # a cold liquid hardly changes h or u with p: there the value itself decides
    miss = np.abs(_on_isentrope(model, points, key)[0] - target[at])
    settled = _polish(model, draft, tried, s, key, target, miss[points.ok])
    reached = points.ok & (root.ok | (miss <= _REACHED * (np.abs(target[at]) + model.R * points.T)))
    reached |= np.isin(at, settled)
    missed = at[~reached]
    why = np.where(points.reason == 0, reasons.TARGET_NOT_REACHED, points.reason)
    if model.has_dome:
        why[points.ok & (np.abs(points.T / model.T_c - 1.0) < _CRITICAL)] = reasons.NEAR_CRITICAL
    draft.reason[missed] = why[~reached]
    return draft.finish(model)


def _polish(
    model: Model, draft: Draft, at: NDArray[np.intp], s: Array, key: str, target: Array, miss: Array
) -> NDArray[np.intp]:
    """Newton steps in T and v on both values themselves: p is a poor measure of a liquid that hardly compresses.

    Returns the lanes where they settled. A trace of vapour is given up only for a liquid that meets both better than
    ``miss``, what is missing of h or u with it.

    With X = h or u, det = (c_v/T) (∂X/∂v)_T − (∂p/∂T)_v (∂X/∂T)_v.
    """
    wet = draft.x[at] > _HARDLY_WET
    at, miss = at[~wet], miss[~wet]
    if at.size == 0 or model.residual.coexistence is None:
        return at[:0]
    barely = draft.x[at] == draft.x[at]
    T, v = draft.T[at], np.where(barely, draft.v_liquid[at], draft.v[at])
    wanted_s, wanted = s[at], target[at]
    with np.errstate(all="ignore"):
        settled, good = np.zeros(at.size, dtype=np.bool_), np.zeros(at.size, dtype=np.bool_)
        least, T_best, v_best = np.full(at.size, np.inf), T, v
        for _ in range(_POLISHING):
            t = thermal(model, T, v)
            S, S_T, S_v = quantity.of("s", t, T, v)
            X, X_T, X_v = quantity.of(key, t, T, v)
            det = S_T * X_v - S_v * X_T
            dT = ((wanted_s - S) * X_v - S_v * (wanted - X)) / det
            dv = (S_T * (wanted - X) - X_T * (wanted_s - S)) / det
            near = (np.abs(dT) < 1e-3 * T) & (np.abs(dv) < 1e-3 * v)
            # what is left bounces at the rounding of u: the least of it counts
            left = np.abs(wanted - X) + T * np.abs(wanted_s - S)
            better = (left < least) & ~settled
            least, T_best, v_best = (np.where(better, a, b) for a, b in ((left, least), (T, T_best), (v, v_best)))
            good = np.where(better, (np.abs(dT) < 1e-7 * T) & (np.abs(dv) < 1e-6 * v), good)
            go = near & ~settled
            T, v = np.where(go, T + dT, T), np.where(go, v + dv, v)
            settled |= ~near | ((np.abs(dT) < _STILL * T) & (np.abs(dv) < _STILL * v))
            if settled.all():
                break
        T, v = T_best, v_best
        p = thermal(model, T, v).p
        p_s = np.zeros(at.size)
        p_s[barely] = saturation_at_T(model, T[barely]).p
        good &= (p > p_s) & (~barely | (least < miss))
    here = at[good]
    draft.T[here], draft.v[here], draft.p[here] = T[good], v[good], p[good]
    for a in (draft.x, draft.v_liquid, draft.v_vapour):
        a[here] = np.nan
    return here


def _on_isentrope(model: Model, points: Points, key: str) -> tuple[Array, Array]:
    """X and (∂v/∂p)_s; in two phases the latter is −(ds/dT)_v/(dp_sat/dT)²."""
    X, compliance = np.full(points.T.size, np.nan), np.full(points.T.size, np.nan)
    two = points.x == points.x
    with np.errstate(all="ignore"):
        one = np.flatnonzero(~two)
        if one.size:
            T, v = points.T[one], points.v[one]
            t = thermal(model, T, v)
            X[one] = quantity.of(key, t, T, v)[0]
            compliance[one] = t.cv / t.cp(T) / t.p_v
        at = np.flatnonzero(two)
        if at.size:
            T, x, v_l, v_v = points.T[at], points.x[at], points.v_liquid[at], points.v_vapour[at]
            X_l, X_v = quantity.value(model, key, T, v_l), quantity.value(model, key, T, v_v)
            X[at] = mix(x, X_l, X_v)
            ds = quantity.value(model, "s", T, v_v) - quantity.value(model, "s", T, v_l)
            sat = Saturation(T, points.p[at], v_l, v_v, ds / (v_v - v_l), points.reason[at])
            compliance[at] = -mixed(model, "s", sat, x)[1] / (sat.dp_dT * sat.dp_dT)
    return X, compliance


def _least(model: Model) -> float:
    """The lowest pressure (Pa) looked at."""
    return min(_P_LEAST, 0.5 * pressure_range(model)[0]) if model.has_dome else _P_LEAST


def _by_volume(model: Model, pv: Array, least: float, most: float) -> Array:
    """Nodes of ln p (k, n) at given p v, each lane's in order.

    A liquid has all its temperatures within a few per cent of its volume, and u turns where the line meets the dome.
    """
    line = model.residual.coexistence
    assert line is not None
    cold = np.array([line.T_low])
    dense = np.linspace(np.log(model.residual.v_min(cold)[0]), np.log(1.1 * model.v_c), _DENSE_NODES)
    thinnest = np.log(_HIGHEST_Z * model.R * model.T_limits[1]) - least
    light = dense[-1] + np.linspace(0.0, 1.0, _LIGHT_NODES)[1:] ** 1.5 * (thinnest - dense[-1])
    v = np.concatenate([dense, light])
    nodes = [np.log(pv) - v[:, None]]
    share = np.linspace(0.0, 1.0, _DOME_NODES)[:, None] ** 2
    T = line.T_top - (line.T_top - line.T_low) * share + np.zeros(pv.size)
    for side in ("v_liquid", "v_vapour"):

        def fun(T: Array, pv: Array, side: str = side) -> Array:
            sat = line.at_T(np.clip(T, line.T_low, line.T_top))
            return np.asarray(np.log(sat.p * getattr(sat, side) / pv))

        for root in scanned(fun, T[::-1], (pv,))[:2]:
            met = np.log(line.p_at(np.where(np.isfinite(root.x), root.x, line.T_top)))
            nodes.append(met + np.array([[-_APART], [0.0], [_APART]]))
    return np.asarray(np.sort(np.clip(np.concatenate(nodes), least, most), axis=0))


def _some(points: Points, at: NDArray[np.intp]) -> Points:
    return Points(**{name: getattr(points, name)[at] for name in Points.__dataclass_fields__})


def _contracting(model: Model, pv: Array, u: Array) -> NDArray[np.bool_]:
    """Where liquid of this p v contracts on heating (water below 4 °C): p and v then have two temperatures."""
    line = model.residual.coexistence
    assert line is not None
    T = np.full(pv.size, model.T_limits[0])
    v = line.at_T(T).v_liquid
    warm = line.at_T(_COLD * T)
    with np.errstate(all="ignore"):
        settled = model.residual.volume_of(T, pv / v, np.full(pv.size, -1.0))
        assert settled is not None
        falls = model.residual.pressure(T, settled[0]).p_T < 0.0
        return np.asarray(falls & (u < quantity.value(model, "u", warm.T, warm.v_liquid)))


def flash_uh(model: Model, u: Array, h: Array) -> Points:
    """The state of energy ``u`` and enthalpy ``h`` (J/mol): p v = h − u is known, u is scanned along it.

    Saturated liquid itself is a turning point of u on that line: its own u and h may be called not reached.
    """
    n = u.size
    draft = Draft(n)
    if quantity.is_ideal(model):
        draft.reason[:] = reasons.PAIR_NOT_INDEPENDENT
        return draft.finish(model)
    pv = h - u
    usable = np.isfinite(pv) & (pv > 0.0)
    draft.reason[~usable] = np.where(np.isfinite(pv[~usable]), reasons.TARGET_NOT_REACHED, reasons.NOT_A_STATE)
    at = np.flatnonzero(usable)
    if at.size == 0:
        return draft.finish(model)

    def fun(x: Array, pv: Array, wanted: Array) -> Array:
        p = np.exp(x)
        points = flash_p(model, p, "v", pv / p)
        return _on_isentrope(model, points, "u")[0] - wanted

    top = min(model.p_max, _P_MOST)
    least = min(1.0, pressure_range(model)[0]) if model.has_dome else 1.0
    nodes = np.linspace(np.log(least), np.log(top), _NODES)[:, None] + np.zeros(at.size)
    if model.residual.coexistence is not None:
        nodes = _by_volume(model, pv[at], np.log(least), np.log(top))
    first, second, count = scanned(fun, nodes, (pv[at], u[at]), unit=1.0)
    with np.errstate(all="ignore"):
        p = np.exp(first.x)
        draft.take(at, flash_p(model, p, "v", pv[at] / p))
        q = np.exp(second.x)
        other = flash_p(model, q, "v", pv[at] / q)
    found = draft.finish(model)
    miss = np.abs(_on_isentrope(model, found, "u")[0][at] - u[at])
    jumped = (found.reason[at] == 0) & ~(miss <= _MISSED * (np.abs(u[at]) + model.R * found.T[at]))
    draft.reason[at] = np.where((count == 0) | jumped, reasons.TARGET_NOT_REACHED, draft.reason[at])
    twice = count >= 2
    limits = model.residual.limits
    lines = None if limits is None else limits.dew_and_bubble(np.append(other.T, found.T[at]))
    if lines is not None:
        # a mixture treated as one component has no states inside the dome, nor next to it
        T, q = np.append(other.T, found.T[at]), np.append(other.p, found.p[at])
        wet = np.append(other.x, found.x[at])
        barred = ((q > lines[0]) & (q < lines[1])) | (wet == wet) | ~(T > 0.0)
        second, first_barred = ~barred[: at.size], barred[at.size :]
        instead = np.flatnonzero(twice & first_barred & second)
        draft.take(at[instead], _some(other, instead))
        twice = twice & ~first_barred & second
    draft.reason[at[twice]] = reasons.TWO_SOLUTIONS
    if model.residual.coexistence is not None:
        once = at[count == 1]
        draft.reason[once[_contracting(model, pv[once], u[once])]] = reasons.TWO_SOLUTIONS
    draft.T_other[at[twice]], draft.p_other[at[twice]] = other.T[twice], other.p[twice]
    return draft.finish(model)
