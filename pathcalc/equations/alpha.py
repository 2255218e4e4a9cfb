"""Temperature functions α(T) of the cubic equations: a(T) = a_c α(T).

Each gives two independent forms: ``theta`` in y = 1/T for the fundamental equation (θ/θ_c = α Tc/T with its
scaled y-derivatives) and ``alpha`` in T for p(T, v).
"""

from __future__ import annotations

import math
from typing import Protocol

import numpy as np

from pathcalc.equations.contract import Array

Triple = tuple[Array, Array, Array]


class AlphaFunction(Protocol):
    """α of one substance."""

    T_max: float
    """Above this temperature (K) the formula turns back on itself and is not used."""

    def theta(self, T: Array) -> Triple:
        """α Tc/T and its y-derivatives times y and y², y = 1/T."""
        ...

    def alpha(self, T: Array) -> Triple:
        """α, dα/dT (1/K), d²α/dT² (1/K²)."""
        ...

    def alpha_TT(self, T: Array) -> Array:
        """d²α/dT² alone, 1/K²."""
        ...

    def temperature(self, ratio: float) -> float:
        """The T (K) at which α Tc/T equals ``ratio``."""
        ...


class ConstantAlpha:
    """α = 1 (van der Waals 1873)."""

    T_max = math.inf

    def __init__(self, T_c: float) -> None:
        self.T_c = T_c

    def theta(self, T: Array) -> Triple:
        """Tc/T; linear in y."""
        ratio = self.T_c / T
        return ratio, ratio, 0.0 * ratio

    def alpha(self, T: Array) -> Triple:
        """1, 0, 0."""
        zero = 0.0 * T
        return zero + 1.0, zero, zero

    def alpha_TT(self, T: Array) -> Array:
        """0."""
        return 0.0 * T

    def temperature(self, ratio: float) -> float:
        """Tc/ratio."""
        return self.T_c / ratio


class RootAlpha:
    """α = Tr^(−1/2) (Redlich & Kwong 1949, eq. 1: a ∝ T^(−1/2))."""

    T_max = math.inf

    def __init__(self, T_c: float) -> None:
        self.T_c = T_c

    def theta(self, T: Array) -> Triple:
        """(Tc/T)^(3/2) and its scaled y-derivatives 3/2 and 3/4 times that."""
        y = self.T_c / T
        ratio = y * np.sqrt(y)
        return ratio, 1.5 * ratio, 0.75 * ratio

    def alpha(self, T: Array) -> Triple:
        """Tr^(−1/2) and its T-derivatives."""
        value = np.sqrt(self.T_c / T)
        first = -0.5 * value / T
        return value, first, -1.5 * first / T

    def alpha_TT(self, T: Array) -> Array:
        """3/4 Tr^(−1/2)/T²."""
        return 0.75 * np.sqrt(self.T_c / T) / (T * T)

    def temperature(self, ratio: float) -> float:
        """Tc ratio^(−2/3)."""
        return float(self.T_c * ratio ** (-2.0 / 3.0))


class SoaveAlpha:
    """α = (1 + m(1 − √Tr))² (Soave 1972, eq. 9), usable while 1 + m(1 − √Tr) > 0."""

    def __init__(self, T_c: float, m: float) -> None:
        self.T_c, self.m = T_c, m
        self.T_max = T_c * (1.0 + 1.0 / m) ** 2 if m > 0.0 else math.inf

    def theta(self, T: Array) -> Triple:
        """r² with r = (1 + m)/√Tr − m; r is linear in √y, which gives the derivatives."""
        n = (1.0 + self.m) * np.sqrt(self.T_c / T)
        r = n - self.m
        return r * r, r * n, (0.5 * self.m) * n

    def alpha(self, T: Array) -> Triple:
        """g² with g = 1 + m(1 − √Tr), and its T-derivatives."""
        root = np.sqrt(T / self.T_c)
        g = 1.0 + self.m * (1.0 - root)
        first = -self.m * g * root / T
        return g * g, first, (0.5 * self.m * (1.0 + self.m)) * root / (T * T)

    def alpha_TT(self, T: Array) -> Array:
        """m(1 + m) √Tr/(2 T²)."""
        return (0.5 * self.m * (1.0 + self.m)) * np.sqrt(T / self.T_c) / (T * T)

    def temperature(self, ratio: float) -> float:
        """Tc ((1 + m)/(√ratio + m))²."""
        return float(self.T_c * ((1.0 + self.m) / (math.sqrt(ratio) + self.m)) ** 2)


def soave_m(omega: float) -> float:
    """m = 0.480 + 1.574 ω − 0.176 ω² (Soave, Chem. Eng. Sci. 27 (1972) 1197, eq. 15).

    >>> round(soave_m(0.398), 6)
    1.078573
    """
    return 0.480 + 1.574 * omega - 0.176 * omega * omega


def peng_robinson_m(omega: float) -> float:
    """m = 0.37464 + 1.54226 ω − 0.26992 ω² (Peng & Robinson, IEC Fundam. 15 (1976) 59, eq. 18).

    >>> round(peng_robinson_m(0.398), 6)
    0.945703
    """
    return 0.37464 + 1.54226 * omega - 0.26992 * omega * omega
