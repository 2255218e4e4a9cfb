"""States of given temperature: with one of v, s, u, h.

On an isotherm p falls and s rises with v, u too as long as molecules attract; each fixes one state. h need
not be monotone (its slope changes sign where the Joule–Thomson coefficient does), so it is scanned, and two
states are told apart from one.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium import quantity, reasons
from pathcalc.equilibrium.fence import SMALL
from pathcalc.equilibrium.given_pressure import range_reason
from pathcalc.equilibrium.iterate import Root, guarded_newton
from pathcalc.equilibrium.points import Draft, Points, Saturation
from pathcalc.equilibrium.saturation import beside_critical, ends, quality, saturation_at_T
from pathcalc.equilibrium.scan import scanned

_NODES = 80
_BESIDE = 10.0 ** np.arange(-8.0, -1.4, 0.5)
_ONE_STATE = 1e-9
_P_LEAST = 1.0
_P_MOST = 1e10
_P_INVERSE_MOST = 1e-15
"""1/Pa: no free volume below that of an ideal gas at 10^15 Pa is looked at."""


def flash_T(model: Model, T: Array, key: str, target: Array) -> Points:
    """The state at ``T`` (K) where ``key`` (v, s, u or h, per mole) has the value ``target``."""
    draft = Draft(T.size)
    reason = range_reason(model, T)
    bad = ~np.isfinite(target) | ((target <= 0.0) if key == "v" else False)
    reason[bad] = reasons.NOT_A_STATE
    if key in ("u", "h") and quantity.is_ideal(model):
        reason[reason == 0] = reasons.PAIR_NOT_INDEPENDENT
    draft.reason[:] = np.where(reason == 0, reasons.NOT_CONVERGED, reason)
    go = np.flatnonzero(reason == 0)
    if go.size == 0:
        return draft.finish(model)
    cold = go[T[go] < model.T_c] if model.has_dome else go[:0]
    rest = go[T[go] >= model.T_c] if model.has_dome else go
    if cold.size:
        rest = np.concatenate([rest, _with_dome(model, cold, T, key, target, draft)])
    if rest.size:
        floor = model.residual.v_min(T[rest])
        scan = key == "h" or (key == "u" and model.residual.coexistence is not None)
        _on_branch(model, rest, T, key, target, draft, floor, quantity.volume_ceiling(model, T[rest]), scan)
    return draft.finish(model)


def _with_dome(model: Model, at: NDArray[np.intp], T: Array, key: str, target: Array, draft: Draft) -> NDArray[np.intp]:
    """Settles lanes below T_c; returns those so close to T_c that they are treated as without a dome."""
    sat = saturation_at_T(model, T[at])
    wanted = target[at]
    known = sat.reason == 0
    several = _several(model, key, sat)
    with np.errstate(all="ignore"):
        liquid, vapour = ends(model, key, sat)
        x = quality(key, wanted, liquid, vapour)
        inside = known & (x >= 0.0) & (x <= 1.0)
        # where the quantity is not monotone, states inside the dome and on both branches are looked for
        liquid_side, vapour_side = known & (several | (x < 0.0)), known & (several | (x > 1.0))
    ceiling = quantity.volume_ceiling(model, T[at])
    floor = model.residual.v_min(T[at])
    if inside.any():
        part = Saturation(*(getattr(sat, name)[inside] for name in Saturation.__dataclass_fields__))
        draft.put_mixed(at[inside], part, x[inside])
    for side, low, high in ((liquid_side, floor, sat.v_liquid), (vapour_side, sat.v_vapour, ceiling)):
        for mask, scan in ((side & several, True), (side & ~several, False)):
            if mask.any():
                _on_branch(model, at[mask], T, key, target, draft, low[mask], high[mask], scan)
    near: NDArray[np.intp] = at[~known]
    return near


def _several(model: Model, key: str, sat: Saturation) -> NDArray[np.bool_]:
    """Where a quantity may have one value at several volumes of an isotherm below T_c.

    h always; u in dense liquids, as far as the equation is to be trusted there; s in liquids that contract on
    heating, as water does below 4 °C: told by (∂p/∂T)_v of the saturated liquid.
    """
    every = np.ones(sat.T.size, dtype=np.bool_)
    if key == "h":
        return every
    line = model.residual.coexistence
    if line is None or key == "v":
        return ~every
    if key == "u":
        return every
    cold = np.flatnonzero(0.6 * model.T_c > sat.T)
    falls = ~every
    if cold.size:
        falls[cold] = model.residual.pressure(sat.T[cold], sat.v_liquid[cold]).p_T < 0.0
    return falls


def _on_branch(
    model: Model,
    at: NDArray[np.intp],
    T: Array,
    key: str,
    target: Array,
    draft: Draft,
    low: Array,
    high: Array,
    scan: bool,
) -> None:
    """A single-phase state between the volumes ``low`` and ``high``; all of them where ``scan``."""
    t, wanted = T[at], target[at]
    if key == "v":
        v = wanted.copy()
        reason = np.where((v > low) | (v > model.residual.v_min(t)), 0, reasons.NO_ROOT)
        with np.errstate(all="ignore"):
            state = thermal(model, t, v)
        lost = (reason == 0) & ~((state.p > 0.0) & (state.p_v < 0.0))
        reason[lost] = reasons.NO_ROOT
        if model.has_dome:
            reason[lost & beside_critical(model, t, v)] = reasons.NEAR_CRITICAL
        draft.put(at, t, state.p, v, reason.astype(np.int16))
        return
    if scan and model.residual.coexistence is not None:
        _scan_isotherm(model, at, key, t, wanted, draft, low, high)
        return
    floor = model.residual.v_min(t)
    with np.errstate(all="ignore"):
        lowest = np.log(np.where(low > floor, low - floor, model.R * t * _P_INVERSE_MOST))
        highest = np.log(high - floor)
    if scan:
        _scan_enthalpy(model, at, t, wanted, draft, floor, lowest, highest)
        return

    def fun(x: Array, T: Array, wanted: Array, floor: Array) -> tuple[Array, Array]:
        free = np.exp(x)
        v = floor + free
        X, _, X_v = quantity.of(key, thermal(model, T, v), T, v)
        return X - wanted, X_v * free

    start = highest if key == "s" else 0.5 * (lowest + highest)
    with np.errstate(all="ignore"):
        at_end, slope = fun(highest, t, wanted, floor)
        start = np.clip(highest - at_end / slope, lowest, highest) if key == "s" else start
        root = guarded_newton(fun, start, lowest, highest, (t, wanted, floor), unit=1.0)
        v = floor + np.exp(root.x)
        p = thermal(model, t, v).p
    reason = np.where(root.ok & (p > 0.0), 0, reasons.TARGET_NOT_REACHED)
    draft.put(at, t, p, v, reason.astype(np.int16))


def _scan_enthalpy(
    model: Model,
    at: NDArray[np.intp],
    T: Array,
    wanted: Array,
    draft: Draft,
    floor: Array,
    lowest: Array,
    highest: Array,
) -> None:
    """h at given T: all states with p up to the equation's limit; two are a reason of their own."""

    def fun(x: Array, T: Array, wanted: Array, floor: Array) -> Array:
        v = floor + np.exp(x)
        t = thermal(model, T, v)
        return np.where(t.p <= model.p_max, t.h - wanted, np.nan)

    p_most = model.p_max if np.isfinite(model.p_max) else _P_MOST
    with np.errstate(all="ignore"):
        free = np.log(model.R * T)
    near, far = (
        np.maximum(lowest, free - np.log(100.0 * p_most)),
        np.minimum(highest, free - np.log(_P_LEAST)),
    )
    near = np.minimum(near, highest)
    far = np.maximum(far, near)
    nodes = near + np.linspace(0.0, 1.0, _NODES)[:, None] * (far - near)
    nodes[-1] = highest
    nodes[0] = np.where(lowest > near - 0.5 * (far - near) / _NODES, lowest, near)
    first, second, count = scanned(fun, nodes, (T, wanted, floor), unit=1.0)
    _settle(model, at, T, draft, floor, first, second, count)


def _settle(
    model: Model, at: NDArray[np.intp], T: Array, draft: Draft, floor: Array, first: Root, second: Root, count: Array
) -> None:
    """The states found by a scan; two, or one more than is known already, are a reason of their own."""
    with np.errstate(all="ignore"):
        v, v_second = floor + np.exp(first.x), floor + np.exp(second.x)
        p, p_second = thermal(model, T, v).p, thermal(model, T, v_second).p
        v, p, p_second, count = _allowed(model, T, (v, p), (v_second, p_second), count)
        already = draft.reason[at] == 0
        if _without_mixtures(model):
            already &= ~(draft.x[at] == draft.x[at])
        # two on the same spot, or saturated liquid and the liquid just beside it: one state to rounding
        count = np.where((count == 2) & (np.abs(v_second / v - 1.0) < _ONE_STATE), 1.0, count)
        count = np.where(already & (np.abs(v / draft.v[at] - 1.0) < _ONE_STATE), 0.0, count)
    new = (count >= 1) & ~already
    reason = np.where(count >= 2, reasons.TWO_SOLUTIONS, 0)
    fresh = at[new]
    draft.put(fresh, T[new], p[new], v[new], reason[new].astype(np.int16))
    draft.x[fresh] = draft.v_liquid[fresh] = draft.v_vapour[fresh] = np.nan
    draft.p_other[fresh] = np.where(count[new] >= 2, p_second[new], np.nan)
    draft.T_other[fresh] = np.where(count[new] >= 2, T[new], np.nan)
    again = (count >= 1) & already
    both = at[again]
    draft.reason[both] = reasons.TWO_SOLUTIONS
    draft.T_other[both], draft.p_other[both] = T[again], p[again]
    none = at[(count == 0) & (draft.reason[at] == reasons.NOT_CONVERGED)]
    draft.reason[none] = reasons.TARGET_NOT_REACHED


def _without_mixtures(model: Model) -> bool:
    """Whether the equation is of a mixture treated as one component: it has no states inside the dome."""
    limits = model.residual.limits
    return limits is not None and limits.dew_and_bubble(np.array([model.T_c])) is not None


def _allowed(
    model: Model, T: Array, one: tuple[Array, Array], two: tuple[Array, Array], count: Array
) -> tuple[Array, Array, Array, Array]:
    """v, p of the first state and p of the second, without those between dew and bubble lines; their number."""
    limits = model.residual.limits
    lines = None if limits is None else limits.dew_and_bubble(T)
    if lines is None:
        return (*one, two[1], count)
    first, second = (~((p > lines[0]) & (p < lines[1])) for _, p in (one, two))
    v, p = (np.where(first, a, b) for a, b in zip(one, two, strict=True))
    return v, p, two[1], (first & (count >= 1)) + 1.0 * (second & (count >= 2))


def _scan_isotherm(
    model: Model, at: NDArray[np.intp], key: str, T: Array, wanted: Array, draft: Draft, low: Array, high: Array
) -> None:
    """All states of an isotherm between the volumes ``low`` and ``high``, up to the melting or the largest pressure."""
    limits = model.residual.limits
    assert limits is not None
    melting = limits.melting_pressure(T)
    # a little beyond, so that a state on the very end is not lost
    most = np.where(melting > 0.0, np.minimum(melting, model.p_max), model.p_max) * (1.0 + 1e-6)
    most += SMALL * model.R * T / model.residual.v_min(T)
    line = model.residual.coexistence
    least = _P_LEAST if line is None else min(_P_LEAST, 1e-3 * line.p_low)
    with np.errstate(all="ignore"):
        densest = model.residual.volume_of(T, most, np.full(T.size, -1.0) * (low < model.v_c))
        assert densest is not None
        far = np.minimum(high, model.R * T / least)
        near = np.where(densest[0] > low, densest[0], low)
        if line is not None:
            # next to the triple point the melting line may begin below saturation: no liquid but the saturated one
            near = np.where((low < model.v_c) & (most < line.p_at(T)), far, near)
        near = np.log(np.minimum(near, far))
        share = np.linspace(0.0, 1.0, _NODES)[:, None]
        wide = np.log(far) - near
        nodes = near + wide * np.where(wide > 3.0, share * share, share)
        # h turns next to the saturation line as well
        beside = np.minimum(_BESIDE[:, None], 0.4 * wide)
        nodes = np.sort(np.concatenate([nodes, near + beside, near + wide - beside]), axis=0)

    def fun(x: Array, T: Array, wanted: Array) -> Array:
        return quantity.value(model, key, T, np.exp(x)) - wanted

    first, second, count = scanned(fun, nodes, (T, wanted), unit=1.0)
    _settle(model, at, T, draft, np.zeros(T.size), first, second, count)
