"""The virial equation truncated after the third coefficient: Z = 1 + B(T) ρ + C(T) ρ².

B by C. Tsonopoulos, AIChE J. 20 (1974) 263 (simple-fluid and acentric terms, non-polar); C by H. Orbey and
J. H. Vera, AIChE J. 29 (1983) 107; or both as given sums of powers of T. The reduced residual Helmholtz
energy is α^r = B ρ + C ρ²/2. It describes the gas alone: no liquid, no coexistence; below the critical
temperature the user must keep to pressures below saturation himself.

Use stops at ρ_c/2 with B alone, at 3 ρ_c/4 with C (rule of thumb; from memory: J. M. Prausnitz, R. N.
Lichtenthaler, E. G. de Azevedo, Molecular Thermodynamics of Fluid-Phase Equilibria, 3rd ed. (1999), ch. 5),
and at the first density where (∂p/∂ρ)_T = 0.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from pathcalc.equations.contract import R_CODATA, Array, PressureLimits, PressureTerms, Reduced, SaturationLine
from pathcalc.words import Saying

_NEWTON_STEPS = 60


@dataclass(frozen=True)
class Coefficient:
    """A virial coefficient as Σ c_k τ^(−t_k) with τ = T/T_ref: m3/mol for B, m6/mol2 for C."""

    T_ref: float
    terms: tuple[tuple[float, float], ...]
    """Pairs (c_k, t_k)."""
    source: str | Saying = ""

    def in_y(self, T: Array) -> tuple[Array, Array, Array]:
        """X, y X_y, y² X_yy with y = 1/T."""
        log_y = np.log(self.T_ref / T)
        value = first = second = 0.0 * log_y
        for c, t in self.terms:
            term = c * np.exp(t * log_y)
            value = value + term
            first = first + t * term
            second = second + t * (t - 1.0) * term
        return value, first, second

    def in_T(self, T: Array) -> tuple[Array, Array, Array]:
        """X, dX/dT, d²X/dT²."""
        ratio = T / self.T_ref
        value = first = second = 0.0 * ratio
        for c, t in self.terms:
            term = c * ratio ** (-t)
            value = value + term
            first = first - t * term / T
            second = second + t * (t + 1.0) * term / (T * T)
        return value, first, second


def tsonopoulos_b(T_c: float, p_c: float, omega: float, R: float = R_CODATA) -> Coefficient:
    """B p_c/(R T_c) = f0 + ω f1 (Tsonopoulos, AIChE J. 20 (1974) 263, eqs. 3 and 4; non-polar)."""
    f0 = {0.0: 0.1445, 1.0: -0.330, 2.0: -0.1385, 3.0: -0.0121, 8.0: -0.000607}
    f1 = {0.0: 0.0637, 2.0: 0.331, 3.0: -0.423, 8.0: -0.008}
    return _corresponding(f0, f1, R * T_c / p_c, T_c, omega, "C. Tsonopoulos, AIChE J. 20 (1974) 263")


def orbey_vera_c(T_c: float, p_c: float, omega: float, R: float = R_CODATA) -> Coefficient:
    """C p_c²/(R T_c)² = C0 + ω C1 (Orbey & Vera, AIChE J. 29 (1983) 107)."""
    f0 = {0.0: 0.01407, 2.8: 0.02432, 10.5: -0.00313}
    f1 = {0.0: -0.02676, 2.8: 0.01770, 3.0: 0.040, 6.0: -0.003, 10.5: -0.00228}
    source = "H. Orbey, J. H. Vera, AIChE J. 29 (1983) 107"
    return _corresponding(f0, f1, (R * T_c / p_c) ** 2, T_c, omega, source)


def _corresponding(
    f0: Mapping[float, float], f1: Mapping[float, float], scale: float, T_c: float, omega: float, source: str
) -> Coefficient:
    powers = sorted({*f0, *f1})
    terms = tuple((scale * (f0.get(t, 0.0) + omega * f1.get(t, 0.0)), float(t)) for t in powers)
    return Coefficient(T_c, terms, source)


class VirialGas:
    """The residual part from B and, if given, C; ``rho_c`` in mol/m3 sets how far it is used."""

    coexistence: SaturationLine | None = None
    limits: PressureLimits | None = None

    def __init__(self, B: Coefficient, C: Coefficient | None, rho_c: float, R: float = R_CODATA) -> None:
        self.B, self.C, self.R = B, C, R
        self.rho_max = (0.5 if C is None else 0.75) * rho_c

    def reduced(self, T: Array, rho: Array) -> Reduced:
        """Scaled derivatives of B ρ + C ρ²/2 at ``T`` (K) and ``rho`` (mol/m3)."""
        b, b1, b2 = (x * rho for x in self.B.in_y(T))
        if self.C is None:
            return Reduced(b, b, 0.0 * b, b1, b1, b2)
        square = rho * rho
        c, c1, c2 = (x * square for x in self.C.in_y(T))
        return Reduced(b + 0.5 * c, b + c, c, b1 + 0.5 * c1, b1 + c1, b2 + 0.5 * c2)

    def pressure(self, T: Array, v: Array) -> PressureTerms:
        """p = R T/v (1 + B/v + C/v²) and its derivatives, from B(T), C(T) and their T-derivatives."""
        b, b_T, b_TT = self.B.in_T(T)
        c, c_T, c_TT = self.C.in_T(T) if self.C is not None else (0.0, 0.0, 0.0)
        r = self.R / v
        z = 1.0 + (b + c / v) / v
        z_T = (b_T + c_T / v) / v
        p_v = -r * T / v * (1.0 + (2.0 * b + 3.0 * c / v) / v)
        return PressureTerms(r * T * z, r * (z + T * z_T), p_v, r * (2.0 * z_T + T * (b_TT + c_TT / v) / v))

    def pressure_curvature(self, T: Array, v: Array) -> Array:
        """(d2p/dT2)_v, Pa/K2."""
        return self.pressure(T, v).p_TT

    def volume_roots(self, T: Array, p: Array) -> Array:
        """The gas volume at ``T`` (K), ``p`` (Pa) in row 1; NaN beyond spinodal or density limit."""
        T, p = np.broadcast_arrays(T, p)
        b = self.B.in_y(T)[0]
        c = self.C.in_y(T)[0] if self.C is not None else 0.0 * b
        target = p / (self.R * T)
        with np.errstate(all="ignore"):
            limit = self._limit(b, c)
            reached = limit * (1.0 + limit * (b + limit * c)) >= target
            low, high = np.zeros_like(b), limit
            rho = np.minimum(target, 0.5 * limit)
            settled = np.zeros(rho.shape, dtype=np.bool_)
            for _ in range(_NEWTON_STEPS):
                f = rho * (1.0 + rho * (b + rho * c)) - target
                low, high = np.where(f < 0.0, rho, low), np.where(f < 0.0, high, rho)
                new = rho - f / (1.0 + rho * (2.0 * b + 3.0 * rho * c))
                new = np.where((new > low) & (new < high), new, 0.5 * (low + high))
                new = np.where(settled | (f == 0.0), rho, new)
                settled |= ~(np.abs(new - rho) > 1e-9 * rho)  # the step taken leaves its square
                rho = new
                if settled.all():
                    break
            v = np.where(reached & (target > 0.0), 1.0 / rho, np.nan)
        return np.stack([np.full_like(v, np.nan), v])

    def _limit(self, b: Array, c: Array) -> Array:
        """The least density where 1 + 2 B ρ + 3 C ρ² = 0, or the density limit if that is less."""
        disc = b * b - 3.0 * c
        first = -1.0 / (b - np.sqrt(disc))  # the lesser root where b < 0, the positive one where c < 0
        spinodal = np.where((disc >= 0.0) & (first > 0.0), first, np.inf)
        return np.minimum(spinodal, self.rho_max)

    def v_min(self, T: Array) -> Array:
        """The volume at the density limit, m3/mol."""
        return np.full(np.shape(T), 1.0 / self.rho_max)

    def saturation_start(self, T: Array) -> Array:
        """NaN: the virial equation has no liquid."""
        return np.full(np.shape(T), np.nan)

    def volume_of(self, T: Array, p: Array, branch: Array | None = None) -> tuple[Array, Array] | None:
        """None: volumes follow from ``volume_roots``."""
        return None
