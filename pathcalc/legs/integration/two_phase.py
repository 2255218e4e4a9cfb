"""Pieces of a path inside the dome.

State changes go from the first end by vaporisation or condensation at constant temperature to the boundary,
along the boundary, and back into the dome at the temperature of the second end. The two ends of that way obey
Clapeyron's relation (ds = (dp_sat/dT) dv), the boundary the differentials of a single phase. The integrals of
p dv and v dp are those of the leg's own curve.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model, PressureTerms
from pathcalc.equilibrium.saturation import Saturation, saturation_at_T
from pathcalc.legs.integration.differentials import QUANTITIES, differentials
from pathcalc.legs.integration.families import Ends, Family, Lanes, Nodes
from pathcalc.legs.integration.quadrature import Quadrature, integrate
from pathcalc.legs.integration.saturation_line import Side, side_of

DomeVolume = Callable[[Side, Side, Lanes], Array]


@dataclass(frozen=True)
class _Crossing:
    """Change of phase at constant temperature from volume ``v_from`` to ``v_to``; all (k,)."""

    ds: Array
    du: Array
    dh: Array

    @classmethod
    def of(cls, T: Array, p: Array, dp_dT: Array, v_from: Array, v_to: Array) -> _Crossing:
        """Clapeyron: ds = (dp_sat/dT) dv, dh = T ds, du = dh - p dv."""
        change = v_to - v_from
        ds = dp_dT * change
        return cls(ds, T * ds - p * change, T * ds)


def level_piece(model: Model, ends: Ends) -> Quadrature:
    """A piece at constant temperature and pressure inside the dome; arrays (7, k)."""
    sat = saturation_at_T(model, ends.T_a)
    crossing = _Crossing.of(ends.T_a, sat.p, sat.dp_dT, ends.v_a, ends.v_b)
    p_dv = sat.p * (ends.v_b - ends.v_a)
    zero = np.zeros_like(p_dv)
    value = np.stack([crossing.ds, crossing.du, crossing.dh, p_dv, zero, crossing.dh, crossing.ds])
    size = np.abs(value)
    loose = _boundary_entropy_error(model, sat)
    zero_error = np.zeros_like(loose)
    heat_error = ends.T_a * loose
    error = saturation_error(size) + np.stack(
        [loose, heat_error, heat_error, zero_error, zero_error, heat_error, loose]
    )
    one = np.ones(p_dv.shape, dtype=np.intp)
    return Quadrature(value, error, size, sat.reason == 0, one)


def saturation_error(size: Array) -> Array:
    """What the vapour pressure's own convergence (relative 1e-13) leaves in a change of phase."""
    return 4.0e-13 * size


def sloping_piece(model: Model, family: Family, ends: Ends, lanes: Lanes, floors: Array) -> Quadrature:
    """A piece inside the dome along which the temperature changes; arrays (7, k)."""
    first, last = saturation_at_T(model, ends.T_a), saturation_at_T(model, ends.T_b)
    quality = (ends.v_a - first.v_liquid) / (first.v_vapour - first.v_liquid)
    vapour = quality > 0.5
    near_a = np.where(vapour, first.v_vapour, first.v_liquid)
    near_b = np.where(vapour, last.v_vapour, last.v_liquid)
    out = _Crossing.of(ends.T_a, first.p, first.dp_dT, ends.v_a, near_a)
    back = _Crossing.of(ends.T_b, last.p, last.dp_dT, near_b, ends.v_b)
    # the boundary volumes have a square-root singularity at the critical point: x is linear in sqrt(T_c - T)
    root_a, root_b = (np.sqrt(np.maximum(model.T_c - T, 0.0)) for T in (ends.T_a, ends.T_b))
    span = root_b - root_a

    def integrand(x: Array, k: NDArray[np.intp]) -> tuple[Array, Array, Array]:
        root = root_a[k] + x * span[k]
        T = model.T_c - root * root
        sat = saturation_at_T(model, T.reshape(-1))
        liquid, gas = (_shaped(side_of(model, sat, is_gas), T) for is_gas in (False, True))
        use = np.broadcast_to(vapour[k], T.shape)
        v = np.where(use, gas.v, liquid.v)
        terms = model.residual.pressure(T, v)
        dT = -2.0 * root * span[k]
        dv = (liquid.dp_dT - terms.p_T) / terms.p_v * dT
        values, sizes, inherited = differentials(model, Nodes(T, v, dT, dv))
        push = family.dome_volume(liquid, gas, lanes[k]) * liquid.dp_dT * dT
        values[4], sizes[4] = push, np.abs(push)
        values[6], sizes[6] = push / T, np.abs(push) / T
        inherited = sizes * _looseness(model, T, liquid, gas, v, terms)
        return values, sizes, inherited

    along = integrate(integrand, len(QUANTITIES), span.size, floors, rtol=1e-10, breaks=_kinks(model, root_a, span))
    value = along.value.copy()
    size = along.magnitude.copy()
    for row, name in enumerate(("ds", "du", "dh")):
        parts = getattr(out, name), getattr(back, name)
        value[row] += parts[0] + parts[1]
        size[row] += np.abs(parts[0]) + np.abs(parts[1])
    v_dp, push_over_T = along.value[4], along.value[6]
    p_dv = last.p * ends.v_b - first.p * ends.v_a - v_dp
    value[3], value[5], value[6] = p_dv, value[1] + p_dv, value[0] + push_over_T
    size[3] = np.abs(last.p * ends.v_b) + np.abs(first.p * ends.v_a) + size[4]
    size[5], size[6] = size[1] + size[3], size[0] + along.magnitude[6]
    error = along.error + saturation_error(size)
    error[3] += along.error[4]
    error[5], error[6] = error[1] + error[3], error[0] + along.error[6]
    good = along.converged & (first.reason == 0) & (last.reason == 0)
    return Quadrature(value, error, size, good, along.panels)


def _kinks(model: Model, root_a: Array, span: Array) -> Array | None:
    """Abscissas at which the temperature is one where the ideal-gas heat capacity has a kink, (K, k)."""
    cold = [T for T in model.ideal.kinks if model.T_c > T]
    if not cold:
        return None
    roots = np.sqrt(model.T_c - np.array(cold))[:, None]
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray((roots - root_a) / span)


def _boundary_entropy_error(model: Model, sat: Saturation) -> Array:
    """Entropy that the volumes of a change of phase are uncertain by next to the critical point, J/(mol K)."""
    liquid, gas = side_of(model, sat, False), side_of(model, sat, True)
    total = np.zeros_like(sat.T)
    for side in (liquid, gas):
        terms = model.residual.pressure(sat.T, side.v)
        total = total + sat.dp_dT * side.v * _looseness(model, sat.T, liquid, gas, side.v, terms)
    return total


def _looseness(model: Model, T: Array, liquid: Side, gas: Side, v: Array, terms: PressureTerms) -> Array:
    """Relative error of a boundary volume and of its slope.

    Equal Gibbs energy is met to 5e-14 R T, which fixes the pressure to that over the change of volume, and the
    pressure fixes the volume by its compressibility. Next to some critical points the volumes found miss equal Gibbs
    energy and equal pressure by more, steadily along the boundary. The slope of the boundary then is wrong by more
    than the volume itself: it goes with 1/(v - v_c).
    """
    change = np.maximum(gas.v - liquid.v, 1e-300)
    gap = np.abs((liquid.h - T * liquid.s) - (gas.h - T * gas.s))
    with np.errstate(divide="ignore", invalid="ignore"):
        missed = (gap / change + np.abs(terms.p - liquid.p)) * v / np.abs(v - model.v_c)
        loose: Array = (5e-14 * model.R * T / change + missed) / np.abs(terms.p_v * v)
    return np.minimum(np.where(np.isfinite(loose), loose, 0.0), 1e-3)


def _shaped(side: Side, like: Array) -> Side:
    return Side(*(a.reshape(like.shape) for a in side))
