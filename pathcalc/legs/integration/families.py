"""Families of curves that legs follow: their geometry in one phase, in the dome, and at its boundary.

A piece runs from (T_a, v_a) to (T_b, v_b) as its coordinate x runs from 0 to 1. Every family of curves
gives T(x), v(x) and their slopes for a block of abscissas (nodes, k). Except on isochores the coordinate is
linear in ln v: at fixed volume every property that a path can hold (p, s, h, u) determines the temperature
uniquely, so that no density root has to be looked for. Inside the dome a family gives the overall volume at a
given temperature; at the boundary it tells by how much a saturated state misses the curve.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal, NamedTuple, Protocol

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import Thermal, thermal
from pathcalc.legs.integration.saturation_line import Side

Lanes = NDArray[np.intp]

NEWTON_LIMIT = 40
STEP_TOLERANCE = 2.0e-13
SETTLED = 12
NOISE = 1e-9
"""After SETTLED steps a step of this part of T (or v) counts as the rounding of the held property."""


class Ends(NamedTuple):
    """The two ends of a piece, arrays (k,): K and m3/mol."""

    T_a: Array
    v_a: Array
    T_b: Array
    v_b: Array

    def take(self, lanes: Lanes) -> Ends:
        """The ends of some lanes."""
        return Ends(self.T_a[lanes], self.v_a[lanes], self.T_b[lanes], self.v_b[lanes])


class Nodes(NamedTuple):
    """States at the abscissas, arrays (nodes, k): K, m3/mol and their slopes along x."""

    T: Array
    v: Array
    dT: Array
    dv: Array


Coordinate = Literal["v", "T", "p"]


class Family(Protocol):
    """A family of curves, one curve a lane; constants of the curves are arrays over the lanes of the leg.

    ``coordinate`` is what grows or falls steadily along a curve (volumes and pressures by their logarithm);
    ``level_in_dome`` says that temperature and pressure do not change inside the dome.
    """

    @property
    def coordinate(self) -> Coordinate:
        """The quantity that tells how far along the curve a state is."""
        ...

    @property
    def level_in_dome(self) -> bool:
        """True for isotherms and isobars."""
        ...

    def nodes(self, model: Model, ends: Ends, x: Array, lanes: Lanes) -> Nodes:
        """States at abscissas ``x`` (nodes, k) on the pieces of ``lanes`` (k,) with ``ends`` (k,)."""
        ...

    def mismatch(self, side: Side, lanes: Lanes | None) -> Array:
        """Zero where a saturated state lies on the curve; ``lanes`` None: against every lane at once."""
        ...

    def dome_volume(self, liquid: Side, vapour: Side, lanes: Lanes) -> Array:
        """Overall volume on the curve where it is inside the dome at the temperature of the two sides."""
        ...

    def middle(self, model: Model, ends: Ends, lanes: Lanes) -> dict[str, Array]:
        """Two properties of a state on the curve between the ends, for a phase test."""
        ...


Held = Callable[[Thermal, Array, Array], tuple[Array, Array, Array]]
"""From thermal properties at T and v: a property with its derivatives by T at fixed v and by v at fixed T."""


def _pressure(t: Thermal, T: Array, v: Array) -> tuple[Array, Array, Array]:
    return t.p, t.p_T, t.p_v


def _entropy(t: Thermal, T: Array, v: Array) -> tuple[Array, Array, Array]:
    return t.s, t.cv / T, t.p_T


def _enthalpy(t: Thermal, T: Array, v: Array) -> tuple[Array, Array, Array]:
    return t.h, t.cv + v * t.p_T, T * t.p_T + v * t.p_v


def _internal_energy(t: Thermal, T: Array, v: Array) -> tuple[Array, Array, Array]:
    return t.u, t.cv, T * t.p_T - t.p


HELD: dict[str, Held] = {"p": _pressure, "s": _entropy, "h": _enthalpy, "u": _internal_energy}


def temperature_at_volume(
    model: Model, held: Held, v: Array, target: Array, slope_scale: Array, guess: Array
) -> tuple[Array, Thermal]:
    """Temperatures at which the held property reaches ``target`` at fixed ``v``: Newton, arrays of one shape.

    ``slope_scale`` is kept for lanes whose step is below rounding of the property itself. Nodes that do not
    converge come back as NaN.
    """
    T = guess
    done = np.zeros(T.shape, dtype=bool)
    state = thermal(model, T, v)
    for iteration in range(NEWTON_LIMIT):
        value, by_T, _by_v = held(state, T, v)
        with np.errstate(divide="ignore", invalid="ignore"):
            step = (target - value) / by_T
        step = np.clip(step, -0.4 * T, 0.6 * T)
        step = np.where(done, 0.0, step)
        least = STEP_TOLERANCE if iteration < SETTLED else NOISE
        small = ~(np.abs(step) > np.maximum(least * T, slope_scale / np.abs(by_T)))
        T = T + step
        done |= small
        if done.all():
            break
        state = thermal(model, T, v)
    return np.where(done, T, np.nan), thermal(model, T, v)


def _of(values: Array, lanes: Lanes | None) -> Array:
    return values if lanes is None else values[lanes]


def _side_value(side: Side, key: str) -> Array:
    value: Array = getattr(side, key)
    return value


@dataclass(frozen=True)
class Isotherm:
    """T constant (``T``, K, (lanes,)), ln v linear in x."""

    T: Array

    @property
    def coordinate(self) -> Coordinate:
        """See :class:`Family`."""
        return "v"

    @property
    def level_in_dome(self) -> bool:
        """See :class:`Family`."""
        return True

    def nodes(self, model: Model, ends: Ends, x: Array, lanes: Lanes) -> Nodes:
        """See :class:`Family`."""
        span = np.log(ends.v_b / ends.v_a)
        v = ends.v_a * np.exp(x * span)
        T = np.broadcast_to(ends.T_a, v.shape)
        return Nodes(T, v, np.zeros_like(v), v * span)

    def mismatch(self, side: Side, lanes: Lanes | None) -> Array:
        """See :class:`Family`."""
        return side.T - _of(self.T, lanes)

    def dome_volume(self, liquid: Side, vapour: Side, lanes: Lanes) -> Array:
        """See :class:`Family`."""
        raise AssertionError("an isotherm is level in the dome")

    def middle(self, model: Model, ends: Ends, lanes: Lanes) -> dict[str, Array]:
        """See :class:`Family`."""
        return {"T": ends.T_a, "v": np.sqrt(ends.v_a * ends.v_b)}


@dataclass(frozen=True)
class Isochore:
    """v constant (``v``, m3/mol, (lanes,)), T linear in x."""

    v: Array

    @property
    def coordinate(self) -> Coordinate:
        """See :class:`Family`."""
        return "T"

    @property
    def level_in_dome(self) -> bool:
        """See :class:`Family`."""
        return False

    def nodes(self, model: Model, ends: Ends, x: Array, lanes: Lanes) -> Nodes:
        """See :class:`Family`."""
        span = ends.T_b - ends.T_a
        T = ends.T_a + x * span
        return Nodes(T, np.broadcast_to(ends.v_a, T.shape), np.broadcast_to(span, T.shape), np.zeros_like(T))

    def mismatch(self, side: Side, lanes: Lanes | None) -> Array:
        """See :class:`Family`."""
        return np.log(side.v / _of(self.v, lanes))

    def dome_volume(self, liquid: Side, vapour: Side, lanes: Lanes) -> Array:
        """See :class:`Family`."""
        return np.broadcast_to(self.v[lanes], liquid.T.shape)

    def middle(self, model: Model, ends: Ends, lanes: Lanes) -> dict[str, Array]:
        """See :class:`Family`."""
        return {"T": 0.5 * (ends.T_a + ends.T_b), "v": ends.v_a}


@dataclass(frozen=True)
class Constant:
    """A property of state held constant (``key`` one of p s h u), ln v linear in x; ``value`` (lanes,)."""

    key: str
    value: Array

    @property
    def coordinate(self) -> Coordinate:
        """See :class:`Family`."""
        return "v"

    @property
    def level_in_dome(self) -> bool:
        """See :class:`Family`."""
        return False

    def nodes(self, model: Model, ends: Ends, x: Array, lanes: Lanes) -> Nodes:
        """See :class:`Family`."""
        return _along_volume(model, HELD[self.key], ends, x, self.value[lanes], 0.0 * self.value[lanes])

    def mismatch(self, side: Side, lanes: Lanes | None) -> Array:
        """See :class:`Family`."""
        return _side_value(side, self.key) - _of(self.value, lanes)

    def dome_volume(self, liquid: Side, vapour: Side, lanes: Lanes) -> Array:
        """See :class:`Family`."""
        low, high = _side_value(liquid, self.key), _side_value(vapour, self.key)
        return liquid.v + (self.value[lanes] - low) / (high - low) * (vapour.v - liquid.v)

    def middle(self, model: Model, ends: Ends, lanes: Lanes) -> dict[str, Array]:
        """See :class:`Family`."""
        return {"v": np.sqrt(ends.v_a * ends.v_b), self.key: self.value[lanes]}


@dataclass(frozen=True)
class Polytrope:
    """p v^n constant, ln v linear in x; ``exponent`` and ``log_constant`` = ln p + n ln v, both (lanes,)."""

    exponent: Array
    log_constant: Array

    @property
    def coordinate(self) -> Coordinate:
        """See :class:`Family`."""
        return "v"

    @property
    def level_in_dome(self) -> bool:
        """See :class:`Family`."""
        return not np.any(self.exponent)

    def nodes(self, model: Model, ends: Ends, x: Array, lanes: Lanes) -> Nodes:
        """See :class:`Family`."""
        n = self.exponent[lanes]
        nodes = _along_volume(model, _pressure, ends, x, self.log_constant[lanes], n, logarithmic=True)
        dense = np.flatnonzero((n == 0.0) & _dense(model, ends))
        if dense.size:
            level = np.exp(self.log_constant[lanes][dense])
            by_T = _along_temperature(model, ends.take(dense), x[:, dense], level)
            nodes = Nodes(*(_replaced(old, dense, new) for old, new in zip(nodes, by_T, strict=True)))
        return nodes

    def mismatch(self, side: Side, lanes: Lanes | None) -> Array:
        """See :class:`Family`."""
        return np.log(side.p) + _of(self.exponent, lanes) * np.log(side.v) - _of(self.log_constant, lanes)

    def dome_volume(self, liquid: Side, vapour: Side, lanes: Lanes) -> Array:
        """See :class:`Family`."""
        return np.exp((self.log_constant[lanes] - np.log(liquid.p)) / self.exponent[lanes])

    def middle(self, model: Model, ends: Ends, lanes: Lanes) -> dict[str, Array]:
        """See :class:`Family`."""
        v = np.sqrt(ends.v_a * ends.v_b)
        return {"v": v, "p": np.exp(self.log_constant[lanes] - self.exponent[lanes] * np.log(v))}


def _along_volume(
    model: Model,
    held: Held,
    ends: Ends,
    x: Array,
    constant: Array,
    exponent: Array,
    *,
    logarithmic: bool = False,
) -> Nodes:
    span = np.log(ends.v_b / ends.v_a)
    v = ends.v_a * np.exp(x * span)
    if logarithmic:
        target = np.exp(constant - exponent * np.log(v))
        target_slope = -exponent * target * span
    else:
        target = np.broadcast_to(constant, v.shape)
        target_slope = np.zeros_like(v)
    slopes = []
    for T_end, v_end in ((ends.T_a, ends.v_a), (ends.T_b, ends.v_b)):
        at_end = thermal(model, T_end, v_end)
        value, by_T, by_v = held(at_end, T_end, v_end)
        change = -exponent * value * span if logarithmic else 0.0
        slopes.append((change - by_v * v_end * span) / by_T)
    guess = _hermite(x, ends.T_a, ends.T_b, slopes[0], slopes[1])
    low = 0.5 * np.minimum(ends.T_a, ends.T_b)
    high = 2.0 * np.maximum(ends.T_a, ends.T_b)
    guess = np.clip(guess, low, high)
    rounding = 4.0e-16 * np.abs(target)
    T, state = temperature_at_volume(model, held, v, target, rounding, guess)
    _value, by_T, by_v = held(state, T, v)
    dv = v * span
    return Nodes(T, v, (target_slope - by_v * dv) / by_T, dv)


DENSE = 0.75
"""Isobars of liquids denser than this part of the critical volume are followed by temperature."""


def _dense(model: Model, ends: Ends) -> NDArray[np.bool_]:
    """Lanes whose isobar is followed by temperature: there a pressure fixes the volume sharply but not the

    temperature, and some liquids shrink when they are warmed.
    """
    return (np.maximum(ends.v_a, ends.v_b) < DENSE * model.v_c) & (np.abs(np.log(ends.v_b / ends.v_a)) < 0.4)


def _replaced(values: Array, columns: Lanes, by: Array) -> Array:
    changed = np.array(values)
    changed[:, columns] = by
    return changed


def _along_temperature(model: Model, ends: Ends, x: Array, level: Array) -> Nodes:
    """An isobar of pressure ``level`` with T linear in x; volumes by Newton in ln v."""
    span = ends.T_b - ends.T_a
    T = ends.T_a + x * span
    slopes = []
    for T_end, v_end in ((ends.T_a, ends.v_a), (ends.T_b, ends.v_b)):
        t = model.residual.pressure(T_end, v_end)
        slopes.append(-t.p_T * span / (t.p_v * v_end))
    log_v = _hermite(x, np.log(ends.v_a), np.log(ends.v_b), slopes[0], slopes[1])
    done = np.zeros(T.shape, dtype=bool)
    for iteration in range(NEWTON_LIMIT):
        v = np.exp(log_v)
        t = model.residual.pressure(T, v)
        step = np.where(done, 0.0, np.clip((level - t.p) / (t.p_v * v), -0.1, 0.1))
        log_v = log_v + step
        done |= ~(np.abs(step) > (1e-13 if iteration < SETTLED else NOISE))
        if done.all():
            break
    v = np.exp(log_v)
    t = model.residual.pressure(T, v)
    dT = np.broadcast_to(span, T.shape)
    return Nodes(T, np.where(done, v, np.nan), dT, -t.p_T / t.p_v * dT)


def _hermite(x: Array, start: Array, end: Array, slope_a: Array, slope_b: Array) -> Array:
    cubic = x * x * (3.0 - 2.0 * x)
    rest = x * (1.0 - x)
    return start + (end - start) * cubic + rest * ((1.0 - x) * slope_a - x * slope_b)


@dataclass(frozen=True)
class HeatedWithDrop:
    """Pressure and enthalpy both linear in x along the whole leg: the drop spread in proportion to the heat.

    ``p_a, h_a, p_b, h_b`` are the values at the ends of the leg, (lanes,); a piece of it runs between the
    abscissas at which its own ends have those pressures.
    """

    p_a: Array
    h_a: Array
    p_b: Array
    h_b: Array

    @property
    def coordinate(self) -> Coordinate:
        """See :class:`Family`."""
        return "p"

    @property
    def level_in_dome(self) -> bool:
        """See :class:`Family`."""
        return False

    def nodes(self, model: Model, ends: Ends, x: Array, lanes: Lanes) -> Nodes:
        """See :class:`Family`."""
        first, last = thermal(model, ends.T_a, ends.v_a), thermal(model, ends.T_b, ends.v_b)
        dp, dh = last.p - first.p, last.h - first.h
        p, h = first.p + x * dp, first.h + x * dh
        T = ends.T_a + x * (ends.T_b - ends.T_a)
        log_v = np.log(ends.v_a) + x * np.log(ends.v_b / ends.v_a)
        done = np.zeros(T.shape, dtype=bool)
        for iteration in range(NEWTON_LIMIT):
            v = np.exp(log_v)
            state = thermal(model, T, v)
            _h, h_T, h_v = _enthalpy(state, T, v)
            miss_p, miss_h = p - state.p, h - state.h
            determinant = state.p_T * h_v - state.p_v * h_T
            with np.errstate(divide="ignore", invalid="ignore"):
                step_T = np.where(done, 0.0, (miss_p * h_v - state.p_v * miss_h) / determinant)
                step_v = np.where(done, 0.0, (state.p_T * miss_h - miss_p * h_T) / determinant / v)
            step_T, step_v = np.clip(step_T, -0.3 * T, 0.3 * T), np.clip(step_v, -0.3, 0.3)
            T, log_v = T + step_T, log_v + step_v
            least_T, least_v = (1e-13, 1e-12) if iteration < SETTLED else (NOISE, NOISE)
            done |= ~((np.abs(step_T) > least_T * T) | (np.abs(step_v) > least_v))
            if done.all():
                break
        v = np.exp(log_v)
        state = thermal(model, T, v)
        _h, h_T, h_v = _enthalpy(state, T, v)
        determinant = state.p_T * h_v - state.p_v * h_T
        dT = (dp * h_v - state.p_v * dh) / determinant
        dv = (state.p_T * dh - dp * h_T) / determinant
        return Nodes(np.where(done, T, np.nan), v, dT, dv)

    def mismatch(self, side: Side, lanes: Lanes | None) -> Array:
        """See :class:`Family`."""
        p_a, h_a, p_b, h_b = (_of(a, lanes) for a in (self.p_a, self.h_a, self.p_b, self.h_b))
        return (side.h - h_a) * (p_b - p_a) - (side.p - p_a) * (h_b - h_a)

    def dome_volume(self, liquid: Side, vapour: Side, lanes: Lanes) -> Array:
        """See :class:`Family`."""
        along = (liquid.p - self.p_a[lanes]) / (self.p_b - self.p_a)[lanes]
        h = self.h_a[lanes] + along * (self.h_b - self.h_a)[lanes]
        return liquid.v + (h - liquid.h) / (vapour.h - liquid.h) * (vapour.v - liquid.v)

    def middle(self, model: Model, ends: Ends, lanes: Lanes) -> dict[str, Array]:
        """See :class:`Family`."""
        return {"p": 0.5 * (self.p_a + self.p_b)[lanes], "h": 0.5 * (self.h_a + self.h_b)[lanes]}


@dataclass(frozen=True)
class ConstantQuality:
    """The quality constant (``x``, (lanes,)): the whole curve lies in the dome or on its boundary."""

    x: Array

    @property
    def coordinate(self) -> Coordinate:
        """See :class:`Family`."""
        return "T"

    @property
    def level_in_dome(self) -> bool:
        """See :class:`Family`."""
        return False

    def nodes(self, model: Model, ends: Ends, x: Array, lanes: Lanes) -> Nodes:
        """See :class:`Family`."""
        raise AssertionError("a line of constant quality lies in the dome")

    def mismatch(self, side: Side, lanes: Lanes | None) -> Array:
        """See :class:`Family`."""
        return np.ones_like(side.T)

    def dome_volume(self, liquid: Side, vapour: Side, lanes: Lanes) -> Array:
        """See :class:`Family`."""
        x = self.x[lanes]
        return (1.0 - x) * liquid.v + x * vapour.v

    def middle(self, model: Model, ends: Ends, lanes: Lanes) -> dict[str, Array]:
        """See :class:`Family`."""
        return {"T": 0.5 * (ends.T_a + ends.T_b), "x": self.x[lanes]}
