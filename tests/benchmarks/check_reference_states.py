"""Every built-in reference equation over its whole range, against CoolProp and against itself; run by hand:

    python tests/benchmarks/check_reference_states.py [SUBSTANCE…] [--points N] [--energies N]

A row a substance, then every failure on lines of its own; the exit code is 1 if there is any. The columns:

- ``one``, ``two``: states of one and of two phases that were tried.
- ``rho p h s cp w``: worst deviation from the library's (p, T) solution (rho) and from its properties at our T and
  density. rho and p are measured by p or the bulk modulus ρ(∂p/∂ρ)_T, whichever is larger; h by R T; s by R.
- ``none``: states of which the library tells nothing, its own iteration or range being at an end.
- ``p_s rho' rho'' h' h''``: the same along saturation, from the lowest temperature to 0.999 T_c.
- ``pairs``: worst deviation of T and v after a round trip through each pair of the case format.
- ``twice``, ``more``: round trips that rightly tell two states, and those of them in which the one we came from is a
  third or fourth.
- ``unclear``: round trips to another state that has both values to their rounding, or refused next to an end of the
  equation that their rounding reaches over.
- ``fail``: failures of any kind.

A round trip may lose what the pair itself loses: the deviation allowed is 10⁻⁸ and what a few units of the last digit
of both values are worth by the slopes of the equation at that state.
"""

from __future__ import annotations

import argparse
import itertools
import sys
import time
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field
from pathlib import Path

import CoolProp.CoolProp as CP
import numpy as np

sys.path.insert(0, str(Path(__file__).parents[1] / "equilibrium" / "reference"))

from substances import NAMES, library_name, model, seed

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium import quantity, reasons
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.given_volume import mixed
from pathcalc.equilibrium.points import Points, Saturation
from pathcalc.equilibrium.saturation import pressure_range, saturation_at_p, saturation_at_T
from pathcalc.equilibrium.states import States, state_properties

STRICT = 1e-8
SATURATED = 1e-7
EPS = float(np.finfo(np.float64).eps)
DIGITS = 2e-15
"""Part of a value that rounding takes in any case."""

EXPANDED = 2e-14
"""The same of energies and entropies of saturated phases, whose expansions are rounded too."""

ALIKE = 1e-5
"""Temperatures further apart than this part of themselves are those of two states, whatever their values."""

SCATTER = 4.0
"""Times the scatter seen at a few neighbours that the worst of it may be."""

PSEUDO_PURE = {"air"}
"""A mixture treated as one component: no two-phase states here, and other lines in the library."""

IDEAL_TEMPERATURE = {"R-123": 456.82 / 456.831}
"""The library evaluates c_p0 of R-123 at T times this: its file has another T_c than the one it divides by."""

ONE_PHASE = [pair for pair in itertools.combinations("Tpvhsu", 2) if set(pair) != {"h", "u"}]
TWO_PHASES = [*(pair for pair in ONE_PHASE if set(pair) != {"T", "p"}), *(("x", key) for key in "Tpvhsu")]


@dataclass
class Row:
    """What was found for one substance."""

    name: str
    worst: dict[str, float] = field(default_factory=dict)
    counts: dict[str, int] = field(default_factory=dict)
    failures: list[str] = field(default_factory=list)

    def see(self, key: str, value: float) -> None:
        self.worst[key] = max(self.worst.get(key, 0.0), float(value))

    def add(self, key: str, number: int) -> None:
        self.counts[key] = self.counts.get(key, 0) + int(number)

    def fail(self, text: str) -> None:
        self.failures.append(f"{self.name}: {text}")


def one_phase_states(m: Model, n: int) -> tuple[Array, Array]:
    """T and p in six parts: all over; below 1.5 T_c; beside the dome as vapour and as liquid; dense; near-critical."""
    rng = np.random.default_rng(seed(m.name) + n)
    valid, limits = m.residual.reference.valid, m.residual.limits
    low, high, k = m.T_limits[0], min(valid.T_max, m.T_limits[1]), n // 6
    cold, last = 0.999999 * m.residual.coexistence.T_top, n - 5 * (n // 6)
    T = np.concatenate(
        [
            rng.uniform(low, high, k),
            rng.uniform(low, min(1.5 * m.T_c, high), k),
            rng.uniform(low, cold, 2 * k),
            low + (min(1.3 * m.T_c, high) - low) * rng.uniform(0.0, 1.0, k) ** 2,
            m.T_c * (1.0 + rng.choice([-1.0, 1.0], last) * 10.0 ** rng.uniform(-6.0, -1.3, last)),
        ]
    )
    T[0], T[1], T[2], T[k] = low, high, 0.5 * (low + high), low
    p = np.exp(rng.uniform(np.log(1e2), np.log(valid.p_max), n))
    p[:3], p[k] = valid.p_max, valid.p_max
    p_s = saturation_at_T(m, T[2 * k : 4 * k]).p
    off = 10.0 ** rng.uniform(-7.0, -0.01, 2 * k)
    p[2 * k : 3 * k] = p_s[:k] * (1.0 - off[:k])
    p[3 * k : 4 * k] = np.minimum(p_s[k:] * (1.0 + 10.0 * off[k:]), valid.p_max)
    melting = limits.melting_pressure(T)
    top = np.where(melting > 0.0, np.minimum(melting, valid.p_max), valid.p_max)
    p[4 * k : 5 * k] = (top * rng.uniform(0.1, 1.0, n))[4 * k : 5 * k]
    p[5 * k :] = m.p_c * (1.0 + rng.choice([-1.0, 1.0], last) * 10.0 ** rng.uniform(-6.0, -0.3, last))
    at = cold > T
    beside = np.full(n, np.nan)
    beside[at] = np.abs(p[at] / saturation_at_T(m, T[at]).p - 1.0)
    p = np.where(beside < 2e-9, p * (1.0 - 1e-7), p)
    return T, np.minimum(p, top * (1.0 - 1e-9))


def two_phase_states(m: Model, n: int) -> States:
    """Qualities from 10⁻⁸ to 1 − 10⁻⁸ at temperatures up to some millionths below the critical one."""
    rng = np.random.default_rng(seed(m.name) + n + 1)
    low, top = m.T_limits[0], m.residual.coexistence.T_top
    T = np.where(rng.random(n) < 0.8, rng.uniform(low, top, n), top - (top - low) * 10.0 ** rng.uniform(-6.0, -1.0, n))
    x, edge = rng.uniform(0.0, 1.0, n), 10.0 ** rng.uniform(-8.0, -2.0, n)
    part = rng.random(n)
    x = np.where(part < 0.1, edge, np.where(part < 0.2, 1.0 - edge, x))
    return state_properties(m, flash(m, {"T": T, "x": x}))


def check_finite(row: Row, states: States, what: str) -> None:
    """(c) A state that is told is whole: every property of one phase, and of two all that two phases have."""
    ok, two = states.points.ok, states.x == states.x
    for key in ("T", "p", "v", "rho", "u", "h", "s", "a", "g", "Z", "fugacity_coefficient"):
        bad = ok & ~np.isfinite(getattr(states, key))
        if bad.any():
            row.fail(f"{what}: {key} is not finite in {bad.sum()} states")
    for key in ("cv", "cp", "sound_speed", "expansivity", "compressibility", "joule_thomson"):
        bad = ok & ~two & ~np.isfinite(getattr(states, key))
        for k in np.flatnonzero(bad)[:3]:
            row.fail(f"{what}: {key} is not finite at {place(states.T[k], states.p[k])}")
    for key in ("cv", "cp", "sound_speed", "compressibility"):
        bad = ok & ~two & ~(getattr(states, key) > 0.0)
        for k in np.flatnonzero(bad)[:3]:
            row.fail(f"{what}: {key} is not positive at {place(states.T[k], states.p[k])}")


def library(name: str) -> CP.AbstractState:
    return CP.AbstractState("HEOS", library_name(name))


def check_library(row: Row, m: Model, ours: States) -> None:
    """(a) The states of one phase against the library."""
    state, n = library(m.name), ours.T.size
    R_ratio = m.R / state.gas_constant()
    got = np.full((6, n), np.nan)
    for k in range(n):
        T, v = float(ours.T[k]), float(ours.v[k])
        try:
            if m.name not in PSEUDO_PURE:
                state.update(CP.PT_INPUTS, float(ours.p[k] / R_ratio), T)
                got[0, k] = state.rhomolar()
        except ValueError:
            pass
        state.specify_phase(CP.iphase_gas)
        if abs(np.log(got[0, k] * v)) > 0.1:
            # two phases are told: that of the lower Gibbs energy, by the library itself, is the right one
            gibbs = []
            for density in (got[0, k], 1.0 / v):
                state.update(CP.DmolarT_INPUTS, density, T)
                gibbs.append(state.gibbsmolar() + (ours.p[k] / R_ratio - state.p()) / density)
            if gibbs[1] < gibbs[0]:
                got[0, k] = np.nan
        state.update(CP.DmolarT_INPUTS, 1.0 / v, T)
        state.unspecify_phase()
        got[1:, k] = state.p(), state.hmolar(), state.smolar(), state.cpmolar(), state.speed_sound()
    got[1:5] *= R_ratio
    got[5] *= np.sqrt(R_ratio)
    t = thermal(m, ours.T, ours.v)
    bulk = -ours.v * t.p_v
    factor = IDEAL_TEMPERATURE.get(m.name, 1.0)
    cp0, h0, s0 = (np.asarray(a) for a in m.ideal.terms(ours.T))
    cp0_lib, h0_lib, s0_lib = (np.asarray(a) for a in m.ideal.terms(ours.T * factor))
    shift = m.R * (cp0_lib - cp0)
    shift[ours.T * factor < m.T_limits[0]] = np.nan
    cp, cv = ours.cp + shift, ours.cv + shift
    w = ours.sound_speed * np.sqrt(cp / cv / (ours.cp / ours.cv))
    h = ours.h + m.R * (h0_lib / factor - h0) - got[2]
    s = ours.s + m.R * (s0_lib - s0) - got[3]
    unclear = 1e-14 * m.R * ours.T / ours.v / bulk  # what 1 + 2 D01 + D02 loses near the critical point
    with np.errstate(invalid="ignore"):
        rho = np.abs(np.log(got[0] * ours.v)) * np.minimum(1.0, bulk / ours.p)
    misses = {
        "rho": rho,
        "p": np.abs(got[1] - ours.p) / np.maximum(ours.p, bulk),
        "h": np.abs(h - np.nanmedian(h)) / (m.R * ours.T),
        "s": np.abs(s - np.nanmedian(s)) / m.R,
        "cp": np.abs(cp / got[4] - 1.0) - unclear,
        "w": np.abs(w / got[5] - 1.0) - unclear,
    }
    lost = np.isnan(rho)
    untold = {"rho": lost} | {key: np.isnan(shift) for key in ("h", "s", "cp", "w")}
    row.add("none", int(lost.sum()) if m.name not in PSEUDO_PURE else 0)
    for key, miss in misses.items():
        told = ~untold.get(key, np.zeros(n, dtype=bool))
        row.see(key, miss[told].max(initial=0.0))
        for k in np.flatnonzero(~(miss < STRICT) & told):
            row.fail(f"{key} deviates {miss[k]:.2e} from the library at {place(ours.T[k], ours.p[k])}")


def check_saturation(row: Row, m: Model, n: int) -> None:
    """(a) Pressure, both densities and enthalpies. The pressure is the library's own at its density of the vapour."""
    T = np.linspace(m.T_limits[0], 0.999 * m.T_c, n)
    sat = saturation_at_T(m, T)
    back = saturation_at_p(m, sat.p)
    if sat.reason.any() or back.reason.any() or np.max(np.abs(back.T / T - 1.0)) > 1e-12:
        row.fail("saturation at T or p is not found everywhere, or one is not the inverse of the other")
    liquid, vapour = (state_properties(m, flash(m, {"T": T, "x": x})) for x in (0.0, 1.0))
    state = library(m.name)
    R_ratio = m.R / state.gas_constant()
    got = np.full((5, n), np.nan)
    for k, t in enumerate(T.tolist()):
        try:
            state.update(CP.QT_INPUTS, 1.0, t)
        except ValueError:
            row.add("none", 1)
            continue
        keyed = state.saturated_liquid_keyed_output
        got[1:, k] = keyed(CP.iDmolar), state.rhomolar(), keyed(CP.iHmolar), state.hmolar()
        state.specify_phase(CP.iphase_gas)
        state.update(CP.DmolarT_INPUTS, got[2, k], t)
        got[0, k] = state.p()
        state.unspecify_phase()
    got[[0, 3, 4]] *= R_ratio
    factor = IDEAL_TEMPERATURE.get(m.name, 1.0)
    ideal = m.R * (m.ideal.terms(T * factor)[1] / factor - m.ideal.terms(T)[1])
    h_l, h_v = liquid.h + ideal - got[3], vapour.h + ideal - got[4]
    shift = np.nanmedian(h_v)
    misses = {
        "p_s": np.abs(sat.p / got[0] - 1.0),
        "rho'": np.abs(1.0 / (sat.v_liquid * got[1]) - 1.0),
        "rho''": np.abs(1.0 / (sat.v_vapour * got[2]) - 1.0),
        "h'": np.abs(h_l - shift) / (m.R * T),
        "h''": np.abs(h_v - shift) / (m.R * T),
    }
    for key, miss in misses.items():
        row.see(key, np.nanmax(miss))
        for k in np.flatnonzero(miss > SATURATED):
            row.fail(f"saturation: {key} deviates {miss[k]:.2e} from the library at T = {float(T[k])!r}")


def roundings(m: Model, states: States) -> dict[str, Array]:
    """What rounding may take of each value: some of its last digits, and the scatter of the equation's own sums.

    The scatter is that of values at neighbouring floating-point numbers of T and v, less the slopes.
    """
    T, two = states.T, states.x == states.x
    energy = m.R * T
    out = {
        "T": T, "v": states.v, "p": states.p, "x": np.ones(T.size),
        "h": np.abs(states.h - m.h_offset) + abs(m.h_offset) + energy,
        "u": np.abs(states.u - m.h_offset) + abs(m.h_offset) + energy,
        "s": np.abs(states.s - m.s_offset) + abs(m.s_offset) + m.R,
    }  # fmt: skip
    out = {key: DIGITS * size for key, size in out.items()}
    places = (np.where(two, states.points.v_liquid, states.v), np.where(two, states.points.v_vapour, states.v))
    with np.errstate(all="ignore"):
        for v in places:
            t = thermal(m, T, v)
            here = {key: quantity.of(key, t, T, v) for key in "phsu"}
            for i, j in itertools.product((-3, 0, 2), (-2, 0, 3)):
                T1, v1 = T * (1.0 + i * EPS), v * (1.0 + j * EPS)
                t1 = thermal(m, T1, v1)
                for key, (X, X_T, X_v) in here.items():
                    off = np.abs(quantity.of(key, t1, T1, v1)[0] - X - X_T * (T1 - T) - X_v * (v1 - v))
                    if key == "p":
                        off = np.where(two, 0.0, off)
                    out[key] = np.maximum(out[key], SCATTER * off)
    return out


def slopes(m: Model, states: States) -> dict[str, tuple[Array, Array]]:
    """Changes of each quantity with ln T and ln v at the states, of one phase or two."""
    T, v, two = states.T, states.v, states.x == states.x
    out: dict[str, tuple[Array, Array]] = {"T": (T, 0.0 * T), "v": (0.0 * T, v)}
    with np.errstate(all="ignore"):
        t = thermal(m, T, v)
        for key in "phsu":
            _, by_T, by_v = quantity.of(key, t, T, v)
            out[key] = (T * by_T, v * by_v)
        at = np.flatnonzero(two)
        if at.size:
            sat, x = saturation_at_T(m, T[at]), states.x[at]
            out["p"][0][at], out["p"][1][at] = T[at] * sat.dp_dT, 0.0
            for key in "hsu":
                low, high = (quantity.value(m, key, T[at], w) for w in (sat.v_liquid, sat.v_vapour))
                out[key][0][at] = T[at] * mixed(m, key, sat, x)[1]
                out[key][1][at] = v[at] * (high - low) / (sat.v_vapour - sat.v_liquid)
            width = sat.v_vapour - sat.v_liquid
            out["x"] = (0.0 * T, 0.0 * T)
            out["x"][0][at], out["x"][1][at] = T[at] * _quality_slope(m, sat, x), v[at] / width
    return out


def _quality_slope(m: Model, sat: Saturation, x: Array) -> Array:
    """(∂x/∂T)_v in two phases."""
    along = []
    for v in (sat.v_liquid, sat.v_vapour):
        t = thermal(m, sat.T, v)
        along.append((sat.dp_dT - t.p_T) / t.p_v)
    return np.asarray(-((1.0 - x) * along[0] + x * along[1]) / (sat.v_vapour - sat.v_liquid))


Slopes = tuple[Array, Array]


def allowance(pair: tuple[str, str], by: dict[str, Slopes], rounding: dict[str, Array]) -> Slopes:
    """How far rounding of both values may move ln T and ln v; infinite where the pair fixes nothing."""
    (a_T, a_v), (b_T, b_v) = by[pair[0]], by[pair[1]]
    da, db = rounding[pair[0]], rounding[pair[1]]
    with np.errstate(all="ignore"):
        det = np.abs(a_T * b_v - a_v * b_T)
        ln_T, ln_v = (np.abs(b_v) * da + np.abs(a_v) * db) / det, (np.abs(b_T) * da + np.abs(a_T) * db) / det
    return np.where(ln_T == ln_T, ln_T, np.inf), np.where(ln_v == ln_v, ln_v, np.inf)


def true_solutions(m: Model, T: Array, p: Array, given: dict[str, Array]) -> Array:
    """Whether (T, p) of lanes have the values ``given``: in one phase, or for some quality on the saturation line."""
    points = flash(m, {"T": T, "p": p})
    got = state_properties(m, points)
    t = thermal(m, got.T, got.v)
    good = points.ok.copy()
    worth = {
        "h": m.R * T, "u": m.R * T, "s": m.R + 0.0 * T, "v": got.v, "p": np.maximum(p, -got.v * t.p_v), "T": T,
    }  # fmt: skip
    with np.errstate(all="ignore"):
        for key, value in given.items():
            if key in worth:
                good &= np.abs(getattr(got, key) - value) < 1e-6 * worth[key] + 1e-13 * np.abs(value)
            else:
                sign = 1.0 if key == "superheat" else -1.0
                good &= np.abs(sign * (T - saturation_at_p(m, p).T) - value) < 1e-6 * T
        wet = np.flatnonzero(~good & (m.residual.coexistence.T_top >= T))
        wet = wet[np.abs(saturation_at_T(m, T[wet]).p / p[wet] - 1.0) < 1e-7]
        if wet.size:
            ends = [state_properties(m, flash(m, {"T": T[wet], "x": x})) for x in (0.0, 1.0)]
            x: list[Array] = []
            for key, value in given.items():
                if key == "x":
                    x.append(value[wet])
                elif key in "hsuv":
                    low, high = (getattr(end, key) for end in ends)
                    x.append((value[wet] - low) / (high - low))
            if x:
                good[wet] = np.all([(q > -1e-6) & (q < 1.0 + 1e-6) for q in x], axis=0)
                if len(x) == 2:
                    good[wet] &= np.abs(x[0] - x[1]) < 1e-5
    return np.asarray(good)


def place(T: float, p: float) -> str:
    return f"T = {float(T)!r}, p = {float(p)!r}"


def where_is(states: States | Points, k: int) -> str:
    quality = f", x = {float(states.x[k])!r}" if states.x[k] == states.x[k] else ""
    return f"{place(states.T[k], states.p[k])}, v = {float(states.v[k])!r}{quality}"


def beyond(m: Model, want: States, by: dict[str, Slopes], ln_T: Array, ln_v: Array) -> Array:
    """Where states within ``ln_T`` and ``ln_v`` lie beyond the ends of the equation."""
    limits = m.residual.limits
    dT, dp = want.T * ln_T, np.abs(by["p"][0]) * ln_T + np.abs(by["p"][1]) * ln_v
    low, high = m.T_limits
    top = np.fmin(limits.melting_pressure(want.T), limits.p_max)
    return np.asarray((want.T - dT <= low) | (want.T + dT >= high) | (want.p + dp >= top))


def check_pair(
    row: Row, m: Model, want: States, given: dict[str, Array], by: dict[str, Slopes], rounding: dict[str, Array]
) -> None:
    """(b) The state comes back, or two states are told that both have the values given."""
    points = flash(m, given)
    ok, twice = points.ok, points.reason == reasons.TWO_SOLUTIONS
    text, got = "-".join(given), state_properties(m, points)
    one, other = given
    ln_T, ln_v = allowance((one, other), by, rounding)
    check_finite(row, got, text)
    with np.errstate(all="ignore"):
        miss_T, miss_v = np.abs(np.log(points.T / want.T)), np.abs(np.log(points.v / want.v))
        good = ok & (miss_T <= STRICT + ln_T) & (miss_v <= STRICT + ln_v)
        # both values to their rounding, by another state that they do not tell from this one
        met = ok & (miss_T < ALIKE)
        for key, value in given.items():
            of_line = np.where(points.x == points.x, EXPANDED * np.abs(value), 0.0)
            met &= np.abs(getattr(got, key, value) - value) <= rounding[key] + of_line
        unclear = met & ~good
        # refused where rounding alone may have carried it over a fence
        unclear |= ~ok & ~twice & beyond(m, want, by, ln_T, ln_v) & ("T" not in given)
        row.add("unclear", int(unclear.sum()))
        clear = good & (ln_T < 0.1 * STRICT) & (ln_v < 0.1 * STRICT)
    if clear.any():
        row.see("pairs", max(miss_T[clear].max(), miss_v[clear].max()))
    for k in np.flatnonzero(~good & ~twice & ~unclear):
        only = {key: a[k : k + 1] for key, a in given.items()}
        if ok[k]:
            also = true_solutions(m, points.T[k : k + 1], points.p[k : k + 1], only)[0]
            why = f"another state is told{' (a true one)' if also else ''}: {where_is(points, int(k))}"
        else:
            why = reasons.REASONS[int(points.reason[k])].code
        row.fail(f"{text} of {where_is(want, int(k))}: {why}")
    at = np.flatnonzero(twice)
    if at.size == 0:
        return
    some = {key: a[at] for key, a in given.items()}
    row.add("twice", at.size)
    home = np.zeros(at.size, dtype=bool)
    for T, p in ((points.T[at], points.p[at]), (points.T_other[at], points.p_other[at])):
        true = true_solutions(m, T, p, some)
        for k in np.flatnonzero(~true):
            row.fail(f"{text} of {where_is(want, int(at[k]))}: {place(T[k], p[k])} is told and has other values")
        slack = np.maximum(1.0, -want.v[at] * thermal(m, want.T[at], want.v[at]).p_v / want.p[at])
        home |= (np.abs(T / want.T[at] - 1.0) < 1e-6) & (np.abs(p / want.p[at] - 1.0) < 1e-6 * slack)
    row.add("more", int((~home).sum()))


def check_round_trips(row: Row, m: Model, want: States, pairs: Iterable[tuple[str, str]]) -> None:
    by, rounding = slopes(m, want), roundings(m, want)
    for pair in pairs:
        given = {key: getattr(want, key).copy() for key in pair}
        check_pair(row, m, want, given, by, rounding)


def check_beside(row: Row, m: Model, one: States) -> None:
    """Superheats and subcoolings of the states that have a saturation temperature at their pressure."""
    low, high = pressure_range(m)
    T_s = np.full(one.T.size, np.nan)
    inside = (one.p >= low) & (one.p <= high)
    T_s[inside] = saturation_at_p(m, one.p[inside]).T
    for side, sign in (("superheat", 1.0), ("subcooling", -1.0)):
        offset = sign * (one.T - T_s)
        with np.errstate(invalid="ignore"):
            at = np.flatnonzero(offset > 0.0)
        if at.size == 0:
            continue
        want = state_properties(m, flash(m, {"T": one.T[at], "p": one.p[at]}))
        by, rounding = slopes(m, want), roundings(m, want)
        dp_dT = saturation_at_p(m, want.p).dp_dT
        by[side] = (want.T - by["p"][0] / dp_dT, -by["p"][1] / dp_dT)
        rounding[side] = DIGITS * want.T
        for key in "Tpvhsu":
            given = {side: offset[at], key: getattr(want, key).copy()}
            check_pair(row, m, want, given, by, rounding)


def check(name: str, n: int, energies: int) -> Row:
    """All of it for one substance."""
    row, m = Row(name), model(name)
    T, p = one_phase_states(m, n)
    points = flash(m, {"T": T, "p": p})
    if name in PSEUDO_PURE:
        keep = points.reason != reasons.BETWEEN_DEW_AND_BUBBLE
        T, p = T[keep], p[keep]
        points = flash(m, {"T": T, "p": p})
    for k in np.flatnonzero(~points.ok):
        row.fail(f"{place(T[k], p[k])}: {reasons.REASONS[int(points.reason[k])].code}")
    T, p = T[points.ok], p[points.ok]
    one = state_properties(m, flash(m, {"T": T, "p": p}))
    row.add("one", one.T.size)
    check_finite(row, one, "T-p")
    check_library(row, m, one)
    check_round_trips(row, m, one, ONE_PHASE)
    few = state_properties(m, flash(m, {"T": T[:: max(1, T.size // energies)], "p": p[:: max(1, T.size // energies)]}))
    check_round_trips(row, m, few, [("h", "u")])
    if name in PSEUDO_PURE:
        return row
    check_saturation(row, m, max(n // 5, 10))
    check_beside(row, m, one)
    two = two_phase_states(m, n // 2)
    row.add("two", two.T.size)
    check_finite(row, two, "T-x")
    check_round_trips(row, m, two, TWO_PHASES)
    every = slice(None, None, max(1, two.T.size // energies))
    few = state_properties(m, flash(m, {"T": two.T[every], "x": two.x[every]}))
    check_round_trips(row, m, few, [("h", "u")])
    return row


WORST = ("rho", "p", "h", "s", "cp", "w", "p_s", "rho'", "rho''", "h'", "h''", "pairs")
COUNTS = ("none", "unclear", "twice", "more")


def lines(rows: Iterator[Row]) -> Iterator[str]:
    head = f"{'':20}{'one':>5}{'two':>5}" + "".join(f"{key:>8}" for key in WORST)
    yield head + "".join(f"{key:>8}" for key in (*COUNTS, "fail")) + f"{'s':>6}"
    began = time.perf_counter()
    for row in rows:
        worst = "".join(f"{row.worst[key]:8.0e}" if key in row.worst else f"{'':8}" for key in WORST)
        counts = "".join(f"{row.counts.get(key, 0):8d}" for key in COUNTS)
        took, began = time.perf_counter() - began, time.perf_counter()
        yield (
            f"{row.name:20}{row.counts['one']:5d}{row.counts.get('two', 0):5d}{worst}{counts}"
            f"{len(row.failures):8d}{took:6.0f}"
        )
        yield from row.failures


def main() -> int:
    options = argparse.ArgumentParser(description=(__doc__ or "").split("\n", 1)[0])
    options.add_argument("substance", nargs="*", help="names of substances; all of them if left out")
    options.add_argument("--points", type=int, default=500, help="states of one phase a substance (500)")
    options.add_argument("--energies", type=int, default=25, help="of these, how many for the dear pair h-u (25)")
    wanted = options.parse_args()
    failed = 0

    def rows() -> Iterator[Row]:
        nonlocal failed
        for name in wanted.substance or NAMES:
            row = check(name, wanted.points, wanted.energies)
            failed += len(row.failures)
            yield row

    for line in lines(rows()):
        print(line, flush=True)
    print(f"{failed} failures")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
