"""Results per kilogram, from the molar arrays of a solved path."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium.points import PHASES
from pathcalc.equilibrium.states import States, state_properties
from pathcalc.legs.run import Place
from pathcalc.path.solver import SolvedLeg, SolvedPath

Value: TypeAlias = Any
"""An array over the lanes, or a plain number where the case was solved without lanes."""

STATE_KEYS = (
    "T", "p", "v", "rho", "u", "h", "s", "a", "g", "cv", "cp", "sound_speed", "Z", "x", "phase",
    "expansivity", "compressibility", "joule_thomson", "fugacity_coefficient", "exergy",
)  # fmt: skip
DELTA_KEYS = ("T", "p", "v", "u", "h", "s", "a", "g")
EXCHANGE_KEYS = ("heat", "work", "entropy_generated", "exergy_destroyed")
EXTENSIVE_ENERGIES = ("u", "h", "s", "a", "g")
PER_MASS = frozenset({"u", "h", "s", "a", "g", "cv", "cp"})


class Record(Mapping[str, Value]):
    """Named values that can be read as items or as attributes."""

    def __init__(self, values: Mapping[str, Value]) -> None:
        self._values = dict(values)

    def __getitem__(self, key: str) -> Value:
        return self._values[key]

    def __iter__(self) -> Iterator[str]:
        return iter(self._values)

    def __len__(self) -> int:
        return len(self._values)

    def __getattr__(self, key: str) -> Value:
        if key.startswith("_"):
            raise AttributeError(key)
        try:
            return self._values[key]
        except KeyError:
            raise AttributeError(key) from None

    def __repr__(self) -> str:
        return f"Record({self._values!r})"


def dead_state(path: SolvedPath) -> Place:
    """The fluid at the temperature and pressure of the surroundings; NaN where it has no such state."""
    from pathcalc.equilibrium.flash import flash
    from pathcalc.legs.run import place_of

    setting = path.setting
    return place_of(path.model, flash(path.model, {"T": setting.T0, "p": setting.p0}))


def exergy_of(path: SolvedPath, place: Place, dead: Place) -> Array:
    """Thermomechanical exergy against the surroundings, J/mol: of a stream, or of a closed mass."""
    T0, p0 = path.setting.T0, path.setting.p0
    if path.setting.flow:
        return (place.h - dead.h) - T0 * (place.s - dead.s)
    return (place.u - dead.u) + p0 * (place.v - dead.v) - T0 * (place.s - dead.s)


def state_values(path: SolvedPath, name: str, place: Place, dead: Place) -> dict[str, Array]:
    """All properties of a state, SI per kilogram, in the order of STATE_KEYS."""
    M = path.model.M
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        states: States = state_properties(path.model, place.points)
        values: dict[str, Array] = {}
        for key in STATE_KEYS:
            if key == "exergy":
                value = exergy_of(path, place, dead) / M
            elif key == "rho":
                value = M / place.v
            elif key == "phase":
                value = np.array([PHASES[int(k)] for k in place.points.phase], dtype=object)
            elif key == "v":
                value = place.v / M
            else:
                value = getattr(states, key)
                if key in PER_MASS:
                    value = value / M
            ok = path.setting.status.ok
            values[key] = (
                np.array([name if good else None for name, good in zip(value, ok, strict=True)], dtype=object)
                if key == "phase"
                else np.where(ok, value, np.nan)
            )
    return values


def leg_values(path: SolvedPath, solved: SolvedLeg) -> dict[str, Any]:
    """All results of a leg over the lanes, specific ones per kilogram (see contract: results)."""
    M, setting = path.model.M, path.setting
    a, b, i = solved.inlet, solved.end, solved.integrals
    ds, du, dh = i["ds"], i["du"], i["dh"]
    s_b = a.s + ds
    change_Ts = b.T * s_b - a.T * a.s
    delta = {
        "T": b.T - a.T,
        "p": b.p - a.p,
        "v": (b.v - a.v) / M,
        "u": du / M,
        "h": dh / M,
        "s": ds / M,
        "a": (du - change_Ts) / M,
        "g": (dh - change_Ts) / M,
    }
    generated = solved.entropy_generated
    exchange = {
        "heat": solved.exchange.heat / M,
        "work": solved.exchange.work / M,
        "entropy_generated": generated / M,
        "exergy_destroyed": setting.T0 * generated / M,
    }
    error, closure = closure_of(path, solved)
    mass = None if solved.moles is None else solved.moles * M
    values: dict[str, Any] = {
        "name": solved.leg.name,
        "path": solved.leg.path,
        "from": solved.inlet_name,
        "to": solved.leg.name,
        "delta": delta,
        **exchange,
        "amount": mass,
        "total": {key: None if mass is None else value * mass for key, value in exchange.items()},
        "maxwell": {"ds": ds / M, "du": du / M, "dh": dh / M, "error": error, "closure": closure},
        "carried": _carried(path, solved),
        "other": _other(path, solved),
    }
    return _blank(values, setting.status.ok)


def _carried(path: SolvedPath, solved: SolvedLeg) -> dict[str, Array]:
    """What a stream that joins or leaves brings, per kilogram that goes on, counted from the inlet."""
    M, outcome, a = path.model.M, solved.outcome, solved.inlet
    found = {key: outcome.carried(a, key) / M for key in ("v", "u", "h", "s")}
    other, share = outcome.other, outcome.other_share
    Ts = np.zeros_like(a.T) if other is None or share is None else share * (other.T * other.s - a.T * a.s) / M
    return {**found, "a": found["u"] - Ts, "g": found["h"] - Ts}


def _other(path: SolvedPath, solved: SolvedLeg) -> dict[str, Any] | None:
    """The stream that joins or leaves: amount (kg or kg/s, negative where it leaves) and state, per kilogram."""
    other, share = solved.outcome.other, solved.outcome.other_share
    if other is None or share is None:
        return None
    M = path.model.M
    mass = None if solved.moles is None else share * solved.moles * M
    state = {"T": other.T, "p": other.p, "v": other.v / M, "u": other.u / M, "h": other.h / M, "s": other.s / M}
    return {"amount": mass, **state, "x": other.points.x}


def _blank(values: dict[str, Any], ok: NDArray[np.bool_]) -> dict[str, Any]:
    blanked: dict[str, Any] = {}
    for key, value in values.items():
        if isinstance(value, dict):
            blanked[key] = _blank(value, ok)
        elif isinstance(value, np.ndarray):
            blanked[key] = np.where(ok, value, np.nan)
        else:
            blanked[key] = value
    return blanked


def scales(path: SolvedPath, solved: SolvedLeg) -> Array:
    """What differences of s, u and h are measured by, (3, n): the sum of the magnitudes along the path,

    at least a thousandth of R (of R T).
    """
    floor = 1e-3 * path.model.R
    T = solved.inlet.T
    return np.maximum(solved.integrals.magnitude[:3], np.stack([floor + 0.0 * T, floor * T, floor * T]))


def closure_of(path: SolvedPath, solved: SolvedLeg) -> tuple[Array, Array]:
    """Error estimate and closure of a leg, relative: the largest over s, u and h, (n,) each."""
    a, b, i = solved.inlet, solved.end, solved.integrals
    scale = scales(path, solved)
    second = np.stack([b.s - a.s, b.u - a.u, b.h - a.h])
    return (i.error[:3] / scale).max(axis=0), (np.abs(i.value[:3] - second) / scale).max(axis=0)


def rounding_of(path: SolvedPath, solved: SolvedLeg) -> Array:
    """What rounding alone may leave between the two routes, relative, (n,).

    The closed form is a difference of two values counted from the datum: 64 units in the last place of each,
    and of the ends as far as they were iterated (1e-12 of s, h and u at the flash); more where the terms of the
    equation cancel or the volumes of coexisting phases are loose.
    """
    a, b = solved.inlet, solved.end
    sizes = np.stack([np.abs(a.s) + np.abs(b.s), np.abs(a.u) + np.abs(b.u), np.abs(a.h) + np.abs(b.h)])
    kinetic = path.model.R * np.stack([np.ones_like(a.T), a.T + b.T, a.T + b.T])
    sizes = sizes + sum(_coexistence_rounding(path, place) + _cancellation(path, place) for place in (a, b))
    rounding: Array = 64.0 * np.finfo(float).eps * ((sizes + kinetic) / scales(path, solved)).max(axis=0)
    return rounding


_STEPS = np.arange(-8.0, 8.0)[:, None]
"""Temperatures, in steps of 8 units in the last place, over which the rounding of an equation is looked at."""


def _cancellation(path: SolvedPath, place: Place) -> Array:
    """How rough s, u and h are at a state, (3, n), in units of the 64 eps that the caller multiplies by.

    The terms of some equations are a thousand times their sum (R-22, Kamei et al. 1995). Over a few units in the
    last place of T every property is a straight line; four times the largest distance from it is taken.
    """
    points = place.points
    mixed = ~np.isnan(points.x)
    found = np.zeros((3, points.T.size))
    for v in (np.where(mixed, points.v_liquid, points.v), np.where(mixed, points.v_vapour, points.v)):
        near = thermal(path.model, points.T * (1.0 + 8.0 * np.finfo(float).eps * _STEPS), v + 0.0 * _STEPS)
        values = np.stack([near.s, near.u, near.h])
        slope = (values * (_STEPS + 0.5)).sum(axis=1) / float(((_STEPS + 0.5) ** 2).sum())
        line = values.mean(axis=1)[:, None] + slope[:, None] * (_STEPS + 0.5)
        found = np.fmax(found, np.abs(values - line).max(axis=1))
        if not mixed.any():
            break
    return found / (16.0 * np.finfo(float).eps)


def _coexistence_rounding(path: SolvedPath, place: Place) -> Array:
    """What a two-phase state owes to how sharply equal Gibbs energy fixes the volumes, in s, u, h, (3, n).

    g is met to about 5e-14 R T, which fixes the pressure to that over the change of volume, and the pressure fixes
    the volume by its compressibility; in units of the 64 eps that the caller multiplies by.
    """
    points = place.points
    mixed = np.flatnonzero(~np.isnan(points.x))
    found = np.zeros((3, points.T.size))
    if mixed.size:
        T, change = points.T[mixed], points.v_vapour[mixed] - points.v_liquid[mixed]
        stiffness = np.minimum(
            *(np.abs(path.model.residual.pressure(T, v[mixed]).p_v) for v in (points.v_liquid, points.v_vapour))
        )
        loose = 4.0 * path.model.R * T / change / stiffness
        slope = path.model.residual.pressure(T, points.v_vapour[mixed]).p_T
        entropy = np.where(np.isfinite(loose), slope * loose, 0.0)
        found[:, mixed] = np.stack([entropy, T * entropy, T * entropy])
    return found


def piece_values(path: SolvedPath, solved: SolvedLeg, lane: int) -> list[dict[str, Any]]:
    """Phase, ds and dh of every piece of a leg in one lane, in the order of the path, per kilogram."""
    M = path.model.M
    rows: list[dict[str, Any]] = []
    for piece in solved.integrals.pieces:
        at = np.flatnonzero(piece.lanes == lane)
        if at.size == 0:
            continue
        k = int(at[0])
        rows.append(
            {
                "phase": piece_phase(path, piece, k),
                "ds": float(piece.integrals.value[0, k] / M),
                "dh": float(piece.integrals.value[2, k] / M),
            }
        )
    return rows


def piece_phase(path: SolvedPath, piece: Any, k: int) -> str:
    """In words where a piece lies: two-phase, or the phase at the middle of its ends."""
    if piece.in_dome:
        return "two-phase"
    model = path.model
    if not model.has_dome:
        return "gas"
    ends = piece.ends
    T = 0.5 * (float(ends.T_a[k]) + float(ends.T_b[k]))
    v = float(np.sqrt(ends.v_a[k] * ends.v_b[k]))
    if model.T_c <= T:
        p = float(model.residual.pressure(np.array([T]), np.array([v])).p[0])
        return "supercritical" if p >= model.p_c else "gas"
    return "liquid" if v < model.v_c else "vapour"
