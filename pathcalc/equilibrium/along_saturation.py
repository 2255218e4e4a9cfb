"""States on or beside the saturation line: a quality, a superheat or a subcooling, with one more quantity."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equilibrium import quantity, reasons
from pathcalc.equilibrium.given_pressure import flash_Tp, volume_on
from pathcalc.equilibrium.points import Draft, Points, Saturation, mix
from pathcalc.equilibrium.saturation import ends, nearest_T, saturation_at_p, saturation_at_T
from pathcalc.equilibrium.scan import scanned

_NODES = 80
_ROUNDING = 1e-10
_TOP = 10.0 ** np.linspace(-6.0, -2.0, 33)
_BOTTOM = 10.0 ** np.linspace(-6.0, -1.0, 33)
"""Parts of the saturation line at which there are further nodes next to its ends: s and h at given quality turn there
(helium, methanol, long molecules), and the volume of cold water."""


def flash_x(model: Model, x: Array, key: str, given: Array) -> Points:
    """The state of quality ``x`` where ``key`` (T, p, v, h, s or u) has the value ``given``; shape (n,)."""
    draft = Draft(x.size)
    wrong = ~((x >= 0.0) & (x <= 1.0))
    if key in ("T", "p"):
        sat = saturation_at_T(model, given) if key == "T" else saturation_at_p(model, given)
        draft.put_mixed(np.arange(x.size), sat, x)
    else:
        _scan(model, draft, key, given, x, lambda T, x: _mixture(model, key, T, x), _settle_quality)
    draft.reason[wrong] = reasons.QUALITY_OUT_OF_RANGE
    return draft.finish(model)


def flash_beside(model: Model, offset: Array, key: str, given: Array) -> Points:
    """Superheated by ``offset`` > 0 (K) above, or subcooled by −``offset`` below, the saturation
    temperature at p.

    An offset of zero is saturated vapour; for saturated liquid ask for x = 0. ``key`` is T, p, v, h, s or u.
    """
    draft = Draft(offset.size)
    if key in ("T", "p"):
        sat = saturation_at_T(model, given - offset) if key == "T" else saturation_at_p(model, given)
        _settle_beside(model, draft, np.arange(offset.size), sat, offset)
    else:
        _scan(model, draft, key, given, offset, lambda T, d: _neighbour(model, key, T, d), _settle_beside, offset)
    draft.reason[~np.isfinite(offset)] = reasons.NOT_A_STATE
    return draft.finish(model)


def _mixture(model: Model, key: str, T: Array, x: Array) -> Array:
    sat = saturation_at_T(model, T)
    return mix(x, *ends(model, key, sat))


def _neighbour(model: Model, key: str, T: Array, offset: Array) -> Array:
    sat = saturation_at_T(model, T)
    with np.errstate(all="ignore"):
        v = volume_on(model, T + offset, sat.p, np.where(offset >= 0.0, 1.0, -1.0))
    low, high = model.T_limits
    outside = (T + offset < low * (1.0 - _ROUNDING)) | (T + offset > high * (1.0 + _ROUNDING))
    return np.where(outside, np.nan, quantity.value(model, key, T + offset, v))


def _held(model: Model, T: Array) -> Array:
    """``T`` (K), at an end of the model's range where it lies beyond by no more than rounding."""
    within = np.clip(T, *model.T_limits)
    return np.where(np.abs(within / T - 1.0) < _ROUNDING, within, T)


def _settle_quality(model: Model, draft: Draft, at: NDArray[np.intp], sat: Saturation, x: Array) -> None:
    draft.put_mixed(at, sat, x)


def _settle_beside(model: Model, draft: Draft, at: NDArray[np.intp], sat: Saturation, offset: Array) -> None:
    where = at
    draft.put_mixed(where, sat, np.ones(where.size))
    off = (offset != 0.0) & (sat.reason == 0)
    if off.any():
        points = flash_Tp(model, _held(model, sat.T[off] + offset[off]), sat.p[off])
        draft.take(where[off], points)


def _scan(
    model: Model,
    draft: Draft,
    key: str,
    given: Array,
    parameter: Array,
    along: Callable[[Array, Array], Array],
    settle: Callable[[Model, Draft, NDArray[np.intp], Saturation, Array], None],
    away: Array | None = None,
) -> None:
    """All saturation temperatures where the quantity has the value given; two are a reason of their own.

    The states told of two are ``away`` (K) from those temperatures.
    """
    n = given.size
    if not model.has_dome:
        draft.reason[:] = reasons.NO_COEXISTENCE
        return
    top = nearest_T(model) / model.T_c
    bottom = model.T_limits[0] / model.T_c
    # nodes crowd towards the critical point, where volumes and entropies turn
    share = np.linspace(0.0, 1.0, _NODES)
    nodes = model.T_c * (top - (top - bottom) * (1.0 - share) ** 3)
    nodes[0] = model.T_limits[0]
    width = nodes[-1] - nodes[0]
    nodes = np.sort(np.concatenate([nodes, nodes[0] + width * _BOTTOM, nodes[-1] - width * _TOP]))

    def fun(T: Array, parameter: Array, given: Array) -> Array:
        return along(T, parameter) - given

    first, second, count = scanned(fun, nodes[:, None] + np.zeros(n), (parameter, given))
    found = np.flatnonzero(first.ok & (count == 1))
    if found.size:
        settle(model, draft, found, saturation_at_T(model, first.x[found]), parameter[found])
    twice = np.flatnonzero(count >= 2)
    if twice.size:
        a, b = saturation_at_T(model, first.x[twice]), saturation_at_T(model, second.x[twice])
        off = 0.0 if away is None else away[twice]
        draft.T[twice], draft.T_other[twice] = _held(model, a.T + off), _held(model, b.T + off)
        draft.p[twice], draft.p_other[twice] = a.p, b.p
        draft.reason[twice] = reasons.TWO_SOLUTIONS
    draft.reason[count == 0] = reasons.TARGET_NOT_REACHED
