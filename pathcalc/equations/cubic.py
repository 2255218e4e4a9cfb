"""Cubic equations of state with two constants, as one family.

    p = R T/(v − b) − a(T)/((v + δ1 b)(v + δ2 b)),        a(T) = a_c α(T)

| equation       | δ1, δ2  | α(T)                | source                                                    |
|----------------|---------|---------------------|-----------------------------------------------------------|
| van der Waals  | 0, 0    | 1                   | J. D. van der Waals, Thesis, Leiden (1873)                |
| Redlich–Kwong  | 1, 0    | Tr^(−1/2)           | O. Redlich, J. N. S. Kwong, Chem. Rev. 44 (1949) 233      |
| Soave          | 1, 0    | (1 + m(1 − √Tr))²   | G. Soave, Chem. Eng. Sci. 27 (1972) 1197                  |
| Peng–Robinson  | 1 ± √2  | (1 + m(1 − √Tr))²   | D.-Y. Peng, D. B. Robinson, IEC Fundam. 15 (1976) 59      |

With θ = a/(R T b) and η = b/v the reduced residual Helmholtz energy is

    α^r = −ln(1 − η) − θ L(η),   L = ln((1 + δ1 η)/(1 + δ2 η))/(δ1 − δ2)   (van der Waals: L = η).

A volume shift c (A. Péneloux, E. Rauzy, R. Fréze, Fluid Phase Equilib. 8 (1982) 7) means v = v_EOS − c: all
is evaluated at v + c, and α^r(T, v) = α^r_EOS(T, v + c) − ln((v + c)/v).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from pathcalc.equations.alpha import AlphaFunction
from pathcalc.equations.contract import R_CODATA, Array, PressureLimits, PressureTerms, Reduced, SaturationLine
from pathcalc.equations.cubic_roots import density_roots
from pathcalc.equations.cubic_saturation import saturation_start

_SQRT2 = float(np.sqrt(2.0))
_CBRT2 = 2.0 ** (1.0 / 3.0)
_ETA_PR = 1.0 / (1.0 + (4.0 - 2.0 * _SQRT2) ** (1.0 / 3.0) + (4.0 + 2.0 * _SQRT2) ** (1.0 / 3.0))


@dataclass(frozen=True)
class Form:
    """Shape of a cubic: δ1, δ2 and the exact Ωa, Ωb, η_c = b/v_c that put its critical point at (Tc, pc)."""

    delta1: float
    delta2: float
    omega_a: float
    omega_b: float
    eta_c: float

    @property
    def z_c(self) -> float:
        """Critical compressibility factor of the equation."""
        return self.omega_b / self.eta_c


VAN_DER_WAALS_FORM = Form(0.0, 0.0, 27.0 / 64.0, 1.0 / 8.0, 1.0 / 3.0)
REDLICH_KWONG_FORM = Form(1.0, 0.0, 1.0 / (9.0 * (_CBRT2 - 1.0)), (_CBRT2 - 1.0) / 3.0, _CBRT2 - 1.0)
PENG_ROBINSON_FORM = Form(
    1.0 + _SQRT2,
    1.0 - _SQRT2,
    (8.0 + 40.0 * _ETA_PR) / (49.0 - 37.0 * _ETA_PR),
    _ETA_PR / (3.0 + _ETA_PR),
    _ETA_PR,
)


class TwoConstantCubic:
    """One cubic for one substance, fixed by T_c (K), p_c (Pa), its α(T) and a volume shift c (m3/mol)."""

    coexistence: SaturationLine | None = None
    limits: PressureLimits | None = None

    def __init__(
        self,
        form: Form,
        alpha: AlphaFunction,
        T_c: float,
        p_c: float,
        R: float = R_CODATA,
        shift: float = 0.0,
    ) -> None:
        self.form, self.alpha, self.T_c, self.p_c, self.R, self.shift = form, alpha, T_c, p_c, R, shift
        self.a_c = form.omega_a * (R * T_c) ** 2 / p_c
        self.b = form.omega_b * R * T_c / p_c
        self.u = form.delta1 + form.delta2
        self.w = form.delta1 * form.delta2
        self.theta_c = form.omega_a / form.omega_b
        self.v_c = self.b / form.eta_c - shift

    def reduced(self, T: Array, rho: Array) -> Reduced:
        """Scaled derivatives of α^r at ``T`` (K) and ``rho`` (mol/m3); see the module's formulas."""
        theta, theta_1, theta_2 = (self.theta_c * t for t in self.alpha.theta(T))
        if self.shift:
            k = 1.0 / (1.0 + self.shift * rho)
            eta = self.b * rho * k
        else:
            eta = self.b * rho
        over = eta / (1.0 + eta * (self.u + self.w * eta))  # η L'(η)
        length = self._length(eta)
        repulsion = eta / (1.0 - eta)
        d00 = -np.log1p(-eta) - theta * length
        d01 = repulsion - theta * over
        d02 = repulsion * repulsion + theta * (over * over) * (self.u + 2.0 * self.w * eta)
        d11 = -theta_1 * over
        if self.shift:
            j = self.shift * rho * k
            d00 = d00 - np.log1p(self.shift * rho)
            d02 = (d02 * k - 2.0 * d01 * j) * k + j * j
            d01 = d01 * k - j
            d11 = d11 * k
        return Reduced(d00, d01, d02, -theta_1 * length, d11, -theta_2 * length)

    def _length(self, eta: Array) -> Array:
        d1, d2 = self.form.delta1, self.form.delta2
        if d1 == d2:
            return eta
        if d2 == 0.0:
            return np.log1p(eta)
        return np.log1p((d1 - d2) * eta / (1.0 + d2 * eta)) / (d1 - d2)

    def pressure(self, T: Array, v: Array) -> PressureTerms:
        """p(T, v) of the module's first formula at ``T`` (K), ``v`` (m3/mol), with its derivatives."""
        alpha, alpha_T, alpha_TT = self.alpha.alpha(T)
        x = v + self.shift if self.shift else v
        free = self.R / (x - self.b)
        q = x * x + (self.u * self.b) * x + self.w * self.b * self.b
        attraction = self.a_c / q
        p = free * T - attraction * alpha
        p_v = attraction * alpha * (2.0 * x + self.u * self.b) / q - free * T / (x - self.b)
        return PressureTerms(p, free - attraction * alpha_T, p_v, -attraction * alpha_TT)

    def pressure_curvature(self, T: Array, v: Array) -> Array:
        """(d2p/dT2)_v = −a''(T)/((v + δ1 b)(v + δ2 b)), Pa/K2."""
        x = v + self.shift if self.shift else v
        q = x * x + (self.u * self.b) * x + self.w * self.b * self.b
        return -self.a_c * self.alpha.alpha_TT(T) / q

    def volume_roots(self, T: Array, p: Array) -> Array:
        """Mechanically stable volumes at ``T`` (K), ``p`` (Pa); shape (2, n), NaN where there is none."""
        theta = self.theta_c * self.alpha.theta(T)[0]
        low, high, three = density_roots(theta, p * self.b / (self.R * T), self.u, self.w)
        with np.errstate(all="ignore"):
            out = np.empty((2, *np.shape(low)))
            np.divide(self.b, high, out=out[0])
            np.divide(self.b, low, out=out[1])
            if self.shift:
                out -= self.shift
            if not three.all():
                vapour = ~(out[1] <= self.v_c)
                out[0][~three & vapour] = np.nan
                out[1][~three & ~vapour] = np.nan
        return out

    def v_min(self, T: Array) -> Array:
        """The co-volume b − c, m3/mol."""
        return np.full(np.shape(T), self.b - self.shift)

    def saturation_start(self, T: Array) -> Array:
        """A start for the saturation pressure, Pa; the volume shift does not move it."""
        theta = self.theta_c * self.alpha.theta(T)[0]
        return self.R * T / self.b * saturation_start(theta, self.theta_c, self.form.eta_c, self.u, self.w)

    def volume_of(self, T: Array, p: Array, branch: Array | None = None) -> tuple[Array, Array] | None:
        """None: volumes follow from ``volume_roots``."""
        return None
