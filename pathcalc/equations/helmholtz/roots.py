"""Volumes of a reference equation at given temperature and pressure.

Newton's method in ln ρ, from one call of D01 and D02 a step. With Z = 1 + D01, K = 1 + 2 D01 + D02 (so that
(∂p/∂ρ)_T = R T K) a step is (p − p(ρ))/(ρ R T K) for a liquid and −(Z/K) ln(p(ρ)/p) for a gas, where ln p is
nearly linear in ln ρ.

Equations of many terms have more than one loop inside the dome, so that not every density with K > 0 is a
state. Roots are therefore sought from the coexistence curve outwards: liquid from the density of saturated
liquid, vapour from that of saturated vapour. A stable root lies between there and the end of the equation; a
metastable one is followed from there into the dome and given up where K ≤ 0.

Starts: for a liquid ρ_l (1 + n (p − p_s)/B)^(1/n) with B = ρ (∂p/∂ρ)_T of saturated liquid (F. D. Murnaghan, Proc.
Natl. Acad. Sci. 30 (1944) 244; n = 10.5 by trial); for a vapour the parabola Z(p/p_s) through 1, and Z_v with its
slope; above the critical temperature the grid of :mod:`pathcalc.equations.helmholtz.hot_starts`.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array

if TYPE_CHECKING:
    from pathcalc.equations.helmholtz.residual import HelmholtzResidual

Mask = NDArray[np.bool_]

STEPS = 80
SETTLED = 1e-9
"""A Newton step in ln ρ below this is the last one."""

PREDICTED = 1e-13
"""So is one after which convergence of the second order, seen in the last two steps, leaves less than this."""

_CLOSE = 1e-4
"""Larger steps than this are never the last, however fast they shrink."""

_MURNAGHAN = 10.5
_BEND = 0.15
"""Beyond this, near the critical point, the parabola is no better than a straight line."""

_SLOPES = ((0, 1), (0, 2))
_CLIMB = np.linspace(0.0, 1.2, 241)


class Sides(NamedTuple):
    """What bounds the roots of lanes (n,): starts and bounds of ln ρ, and which lanes are liquid."""

    start: Array
    low: Array
    high: Array
    liquid: Mask


def volume_of(residual: HelmholtzResidual, T: Array, p: Array, branch: Array | None = None) -> tuple[Array, Array]:
    """The volume (m3/mol) of the stable phase at ``T`` (K), ``p`` (Pa), shape (n,), and ln(p/p_sat).

    NaN where the equation has no such volume. The second is NaN where there is no saturation at ``T``. ``branch``
    asks for liquid (−1) or vapour (1) instead, 0 for the stable one: meant for states on the saturation line, as
    those beyond it, which are metastable, are only followed a billionth part.
    """
    line = residual.coexistence
    n = T.size
    cold = (line.T_top > T) & (line.T_low <= T)
    beside = np.full(n, np.nan)
    at = np.flatnonzero(cold)
    if at.size == n:
        sides, beside = _cold(residual, T, p, branch)
    else:
        sides = _hot(residual, T, p)
        if at.size:
            part, beside[at] = _cold(residual, T[at], p[at], None if branch is None else branch[at])
            for whole, some in zip(sides, part, strict=True):
                whole[at] = some
    return np.exp(-newton(residual, T, p, sides)), beside


def volume_roots(residual: HelmholtzResidual, T: Array, p: Array) -> Array:
    """Mechanically stable volumes (m3/mol) at ``T`` (K), ``p`` (Pa), shape (2, n); NaN where there is none.

    Below the critical temperature the stable and, where there is one, the metastable root; above it the one root,
    in row 1 if it is larger than the critical volume, else in row 0.
    """
    T, p = (np.ascontiguousarray(a) for a in np.broadcast_arrays(np.asarray(T, float), np.asarray(p, float)))
    line = residual.coexistence
    v, beside = volume_of(residual, T, p)
    vapour_like = np.where(beside == beside, beside < 0.0, ~(v <= 1.0 / line.rho_x))
    out = np.full((2, T.size), np.nan)
    lane = np.arange(T.size)
    out[vapour_like.astype(np.intp), lane] = v
    at = np.flatnonzero(beside == beside)
    if at.size:
        other = metastable_volume(residual, T[at], p[at], vapour_like[at])
        out[1 - vapour_like[at].astype(np.intp), at] = other
    return out


def metastable_volume(residual: HelmholtzResidual, T: Array, p: Array, liquid: Mask) -> Array:
    """The volume of superheated liquid (where ``liquid``) or subcooled vapour, NaN beyond its limit."""
    line = residual.coexistence
    _, ln_l, ln_v, _, _ = line.beside(T)
    ln_x = np.log(line.rho_x)
    edge = np.where(liquid, ln_l, ln_v) + ln_x
    halfway = 0.5 * (ln_l + ln_v) + ln_x
    x = edge.copy()
    going = np.ones(T.shape, dtype=np.bool_)
    RT = residual.R * T
    with np.errstate(all="ignore"):
        for _ in range(STEPS):
            rho = np.exp(x)
            d01, d02 = residual.derivatives(T, rho, _SLOPES)
            stiff = 1.0 + 2.0 * d01 + d02
            step = (p - RT * rho * (1.0 + d01)) / (RT * rho * stiff)
            new = x + step
            beyond = ~(stiff > 0.0) | np.where(liquid, new < halfway, new > halfway)
            x = np.where(going, np.where(beyond, np.nan, new), x)
            going &= ~beyond & (np.abs(step) > SETTLED)
            if not going.any():
                break
        x[going] = np.nan
        inward = np.where(liquid, x <= edge + 1e-12, x >= edge - 1e-12)
        rho = np.exp(x)
        d01, d02 = residual.derivatives(T, rho, _SLOPES)
        return np.where(inward & (1.0 + 2.0 * d01 + d02 > 0.0), 1.0 / rho, np.nan)


def _cold(residual: HelmholtzResidual, T: Array, p: Array, branch: Array | None) -> tuple[Sides, Array]:
    """Starts and bounds below the critical temperature, and ln(p/p_sat)."""
    line = residual.coexistence
    ln_p, ln_l, ln_v, stiff_l, stiff_v = line.beside(T)
    above = np.log(p / line.p_x) - ln_p
    ln_x = float(np.log(line.rho_x))
    ln_l += ln_x
    ln_v += ln_x
    liquid = above > 0.0
    if branch is not None:
        liquid = np.where(branch == 0.0, liquid, branch < 0.0)
    p_s = line.p_x * np.exp(ln_p)
    RT = residual.R * T
    push = _MURNAGHAN * (p - p_s) / (np.exp(ln_l) * RT * stiff_l)
    dense = ln_l + np.log1p(np.maximum(push, 0.0)) * (1.0 / _MURNAGHAN)
    Z_v = p_s / (RT * np.exp(ln_v))
    part = np.minimum(p / p_s, 1.0)
    bend = Z_v * (1.0 - Z_v / stiff_v) - (Z_v - 1.0)
    bend = np.where(np.abs(bend) < _BEND, bend, 0.0)
    light = np.log(p / RT) - np.log1p(part * ((Z_v - 1.0) + bend * (part - 1.0)))
    free = np.minimum(np.log(p / RT), ln_v) - 1.0
    return Sides(
        np.where(liquid, dense, light),
        np.where(liquid, ln_l - 1e-9, free),
        np.where(liquid, residual.ln_rho_max, ln_v + 1e-9),
        liquid,
    ), above


def _hot(residual: HelmholtzResidual, T: Array, p: Array) -> Sides:
    """Starts and bounds above the critical temperature."""
    return between(residual, T, p, residual.hot_starts.ln_rho(T, p))


def between(residual: HelmholtzResidual, T: Array, p: Array, start: Array) -> Sides:
    """The start ``start`` of ln ρ with the bounds of a gas above the critical temperature."""
    top = np.full(T.shape, residual.ln_rho_max)
    low = np.minimum(np.log(p / (residual.R * T)), top) - 4.0
    return Sides(np.minimum(start, top - 1e-3), low, top, np.zeros(T.shape, dtype=np.bool_))


def newton(residual: HelmholtzResidual, T: Array, p: Array, sides: Sides) -> Array:
    """ln ρ at ``T``, ``p`` between the bounds; NaN where no root was found."""
    n = T.size
    out = np.full(n, np.nan)
    lane = np.arange(n)
    x, low, high, liquid = sides
    last = np.full(n, np.inf)
    RT = residual.R * T
    with np.errstate(all="ignore"):
        x = np.minimum(np.maximum(x, low), high)
        for _ in range(STEPS):
            rho = np.exp(x)
            d01, d02 = residual.derivatives(T, rho, _SLOPES)
            Z = 1.0 + d01
            stiff = Z + d01 + d02
            got = rho * RT * Z
            less = got < p
            low, high = np.where(less, x, low), np.where(less, high, x)
            step = np.where(liquid, (p - got) / (rho * RT * stiff), np.log(p / got) * Z / stiff)
            size = np.abs(step)
            new = x + step
            held = ~((new >= low) & (new <= high) & (size < 0.7 * last) & (stiff > 0.0))
            ratio = size / last
            done = ~held & ((size < SETTLED) | ((size * ratio * ratio < PREDICTED) & (size < _CLOSE) & (last < np.inf)))
            done |= high - low < 4e-16 * np.abs(x)
            if held.any():
                new = np.where(held, 0.5 * (low + high), new)
                size = np.where(held, high - low, size)
            if done.any():
                here = lane[done]
                ended = np.where(held, np.where(np.abs(got / p - 1.0) < 1e-6, x, np.nan), new)
                out[here] = ended[done]
                if done.all():
                    return out
                go = np.flatnonzero(~done)
                lane, liquid = lane[go], liquid[go]
                T, RT, p, low, high, new, size = (a.take(go) for a in (T, RT, p, low, high, new, size))
            x, last = new, size
    return out


def ceiling(residual: HelmholtzResidual, p_limit: float, temperatures: Array) -> float:
    """ln of the density (mol/m3) that no state below ``p_limit`` (Pa) exceeds.

    At each temperature densities are climbed from that of saturated liquid (the critical one above T_c) until the
    pressure reaches the limit or ceases to rise.
    """
    line = residual.coexistence
    top = -np.inf
    for T in temperatures:
        cold = line.T_top > T
        first = float(line.beside(np.array([T]))[1][0]) if cold else 0.0
        x = np.log(line.rho_x) + first + _CLIMB
        rho = np.exp(x)
        t = np.full(x.shape, T)
        d01, d02 = residual.derivatives(t, rho, _SLOPES)
        with np.errstate(all="ignore"):
            ended = ~(1.0 + 2.0 * d01 + d02 > 0.0) | (residual.R * t * rho * (1.0 + d01) >= p_limit)
        ended[:2] = False
        k = int(np.argmax(ended)) if ended.any() else x.size - 1
        top = max(top, float(x[k]))
    return top


def v_min(residual: HelmholtzResidual, T: Array) -> Array:
    """The smallest volume at which the equation is evaluated, m3/mol."""
    return np.full(np.shape(T), float(np.exp(-residual.ln_rho_max)))


def saturation_start(residual: HelmholtzResidual, T: Array) -> Array:
    """The saturation pressure (Pa) at ``T`` (K) by the expansions; NaN outside them."""
    line = residual.coexistence
    inside = (line.T_top >= T) & (line.T_low <= T)
    with np.errstate(invalid="ignore"):
        return np.where(inside, line.p_at(np.clip(T, line.T_low, line.T_top)), np.nan)
