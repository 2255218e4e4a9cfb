"""Arrays that say where the lanes are: states, saturation states, phases."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equilibrium.reasons import NOT_CONVERGED

Codes = NDArray[np.int16]
Mask = NDArray[np.bool_]

PHASES = (
    "none",
    "liquid",
    "vapour",
    "gas",
    "supercritical",
    "two-phase",
    "saturated-liquid",
    "saturated-vapour",
)
NONE, LIQUID, VAPOUR, GAS, SUPERCRITICAL, TWO_PHASE, SATURATED_LIQUID, SATURATED_VAPOUR = range(8)


@dataclass(frozen=True)
class Saturation:
    """Coexisting liquid and vapour, arrays of shape (n,): T (K), p (Pa), volumes (m3/mol), dp/dT (Pa/K).

    NaN where ``reason`` (a number of :mod:`pathcalc.equilibrium.reasons`) is not 0.
    """

    T: Array
    p: Array
    v_liquid: Array
    v_vapour: Array
    dp_dT: Array
    reason: Codes


@dataclass(frozen=True)
class Points:
    """Equilibrium states, arrays of shape (n,): T (K), p (Pa), v (m3/mol), x (NaN outside the dome).

    ``v_liquid`` and ``v_vapour`` are those of the coexisting phases, NaN outside the dome. ``phase``
    indexes :data:`PHASES`. ``reason`` is 0 where the state was found; elsewhere all else is NaN, save that
    where there are two solutions ``T``, ``p`` and ``T_other``, ``p_other`` tell both.
    """

    T: Array
    p: Array
    v: Array
    x: Array
    v_liquid: Array
    v_vapour: Array
    phase: NDArray[np.int8]
    reason: Codes
    T_other: Array
    p_other: Array

    def phase_names(self) -> list[str]:
        """The phase of every lane in words."""
        return [PHASES[int(k)] for k in self.phase]

    @property
    def ok(self) -> Mask:
        """Where a state was found."""
        return np.asarray(self.reason == 0, dtype=np.bool_)


class Draft:
    """Points in the making: every lane starts as not converged."""

    def __init__(self, n: int) -> None:
        self.T, self.p, self.v, self.x, self.v_liquid, self.v_vapour, self.T_other, self.p_other = (
            np.full(n, np.nan) for _ in range(8)
        )
        self.reason: Codes = np.full(n, NOT_CONVERGED, dtype=np.int16)

    def put(self, where: NDArray[np.intp], T: Array, p: Array, v: Array, reason: Codes | int = 0) -> None:
        """A single-phase state in the lanes ``where``."""
        self.T[where], self.p[where], self.v[where], self.reason[where] = T, p, v, reason

    def put_mixed(self, where: NDArray[np.intp], sat: Saturation, x: Array) -> None:
        """A saturated or two-phase state of quality ``x``."""
        self.T[where], self.p[where], self.x[where] = sat.T, sat.p, x
        self.v_liquid[where], self.v_vapour[where] = sat.v_liquid, sat.v_vapour
        self.v[where] = mix(x, sat.v_liquid, sat.v_vapour)
        self.reason[where] = sat.reason

    def take(self, where: NDArray[np.intp], other: Points) -> None:
        """Copies of the lanes of ``other``."""
        for name in ("T", "p", "v", "x", "v_liquid", "v_vapour", "T_other", "p_other", "reason"):
            getattr(self, name)[where] = getattr(other, name)

    def finish(self, model: Model) -> Points:
        """The finished points: failed lanes blanked, phases named."""
        bad = (self.reason == 0) & ~(np.isfinite(self.T) & np.isfinite(self.p) & np.isfinite(self.v) & (self.v > 0.0))
        if bad.any():
            self.reason[bad] = NOT_CONVERGED
        failed = self.reason != 0
        if failed.any():
            tell = np.isfinite(self.T_other)
            for a in (self.v, self.x, self.v_liquid, self.v_vapour):
                a[failed] = np.nan
            for a in (self.T, self.p):
                a[failed & ~tell] = np.nan
        return Points(
            self.T,
            self.p,
            self.v,
            self.x,
            self.v_liquid,
            self.v_vapour,
            name_phases(model, self.T, self.p, self.v, self.x, self.reason),
            self.reason,
            self.T_other,
            self.p_other,
        )


def mix(x: Array, liquid: Array, vapour: Array) -> Array:
    """liquid + x (vapour − liquid), exact at both ends."""
    return (1.0 - x) * liquid + x * vapour


def name_phases(model: Model, T: Array, p: Array, v: Array, x: Array, reason: Codes) -> NDArray[np.int8]:
    """Phase codes; without a dome every state is a gas."""
    if not model.has_dome:
        phase = np.full(T.shape, GAS, dtype=np.int8)
    else:
        dense = v < model.v_c
        hot = model.T_c <= T
        tight = p >= model.p_c
        cold_phase = np.where(dense | tight, LIQUID, VAPOUR)
        phase = np.where(hot, np.where(tight, SUPERCRITICAL, GAS), cold_phase).astype(np.int8)
        inside = x == x
        if inside.any():
            phase[inside] = TWO_PHASE
            phase[x <= 0.0] = SATURATED_LIQUID
            phase[x >= 1.0] = SATURATED_VAPOUR
    phase[reason != 0] = NONE
    return phase


def joined(parts: list[Points]) -> Points:
    """Lanes of several blocks one after another."""
    if len(parts) == 1:
        return parts[0]
    names = Points.__dataclass_fields__
    return Points(**{name: np.concatenate([getattr(part, name) for part in parts]) for name in names})
