"""Cubic equations and ideal-gas integrals as textbooks write them, independent of the package.

Equations: B. E. Poling, J. M. Prausnitz, J. P. O'Connell, The Properties of Gases and Liquids, 5th ed.
(McGraw-Hill, 2001), sections 4-6 and 6-4 (numbers of sections from memory). Constants: CODATA 2018 for R; critical
constants and acentric factors are those of the reference equations as CoolProp carries them.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from CoolProp.CoolProp import PropsSI
from scipy.integrate import quad

R = 8.31446261815324


def cp0(fluid: str, T: float) -> float:
    """Ideal-gas heat capacity over R, from the ideal part of CoolProp's reference equation."""
    return PropsSI("CP0MOLAR", "T", T, "P", 1e5, fluid) / PropsSI("GAS_CONSTANT", fluid)


def ideal_enthalpy(fluid: str, T1: float, T2: float) -> float:
    """Change of the ideal-gas enthalpy, J/mol."""
    return R * quad(lambda T: cp0(fluid, T), T1, T2, epsrel=1e-10)[0]


def ideal_entropy(fluid: str, T1: float, T2: float) -> float:
    """Integral of c_p0/T dT over R."""
    return quad(lambda T: cp0(fluid, T) / T, T1, T2, epsrel=1e-10)[0]


@dataclass(frozen=True)
class PengRobinson:
    """D.-Y. Peng, D. B. Robinson, Ind. Eng. Chem. Fundam. 15 (1976) 59."""

    T_c: float
    p_c: float
    omega: float

    @property
    def b(self) -> float:
        return 0.0777960739 * R * self.T_c / self.p_c

    def a(self, T: float) -> tuple[float, float]:
        """a and da/dT."""
        m = 0.37464 + 1.54226 * self.omega - 0.26992 * self.omega**2
        a_c = 0.4572355289 * (R * self.T_c) ** 2 / self.p_c
        root = 1.0 + m * (1.0 - math.sqrt(T / self.T_c))
        return a_c * root**2, -a_c * m * root / math.sqrt(T * self.T_c)

    def pressure(self, T: float, v: float) -> float:
        b = self.b
        return R * T / (v - b) - self.a(T)[0] / (v * v + 2.0 * b * v - b * b)

    def gas_volume(self, T: float, p: float) -> float:
        """The largest root of the cubic in Z."""
        A, B = self.a(T)[0] * p / (R * T) ** 2, self.b * p / (R * T)
        roots = np.roots([1.0, -(1.0 - B), A - 3 * B * B - 2 * B, -(A * B - B * B - B**3)])
        return max(z.real for z in roots if abs(z.imag) < 1e-8) * R * T / p

    def residual_enthalpy(self, T: float, p: float) -> float:
        """h - h of the ideal gas at T, J/mol."""
        v, (a, a_T), b = self.gas_volume(T, p), self.a(T), self.b
        r2 = math.sqrt(2.0)
        log = math.log((v + (1.0 + r2) * b) / (v + (1.0 - r2) * b))
        return p * v - R * T + (T * a_T - a) / (2.0 * r2 * b) * log

    def residual_gibbs(self, T: float, p: float) -> float:
        """R T ln of the fugacity coefficient, J/mol."""
        v, a, b = self.gas_volume(T, p), self.a(T)[0], self.b
        r2, Z = math.sqrt(2.0), p * v / (R * T)
        log = math.log((v + (1.0 + r2) * b) / (v + (1.0 - r2) * b))
        return R * T * (Z - 1.0 - math.log(Z * (1.0 - b / v))) - a / (2.0 * r2 * b) * log


def peng_robinson(fluid: str) -> PengRobinson:
    """The equation with the constants of a fluid in CoolProp."""
    return PengRobinson(PropsSI("TCRIT", fluid), PropsSI("PCRIT", fluid), PropsSI("ACENTRIC", fluid))


def molar_mass(fluid: str) -> float:
    """kg/mol."""
    return float(PropsSI("MOLARMASS", fluid))
