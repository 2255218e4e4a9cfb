"""Where density roots above the critical temperature begin: ln Z on a coarse grid of T_c/T and ln p.

The grid is solved for once, from the Peng–Robinson equation (see :mod:`pathcalc.equations.cubic`), and interpolated by
cubics in both directions. Its errors (some 10^-4, more near the critical point) never reach a result.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equations.cubic_roots import density_roots

if TYPE_CHECKING:
    from pathcalc.equations.helmholtz.residual import HelmholtzResidual

_ROWS, _COLUMNS = 32, 56
_OMEGA_A, _OMEGA_B = 0.45723552892138, 0.07779607390388
_THIN = 3e-3
"""Pressure in parts of the critical one below which ln Z is proportional to it."""


def by_cubic(residual: HelmholtzResidual, T: Array, p: Array) -> Array:
    """ln ρ (mol/m3) by the Peng–Robinson equation at ``T`` (K), ``p`` (Pa)."""
    line, omega = residual.coexistence, residual.omega
    Tr = T / line.T_x
    m = 0.37464 + (1.54226 - 0.26992 * omega) * omega
    alpha = np.maximum(1.0 + m * (1.0 - np.sqrt(Tr)), 0.0) ** 2
    b = _OMEGA_B * residual.R * line.T_x / line.p_x
    low, _, _ = density_roots((_OMEGA_A / _OMEGA_B) * alpha / Tr, p * b / (residual.R * T), 2.0, -1.0)
    return np.asarray(np.log(low / b))


class HotStarts:
    """The grid of one equation up to ``T_max`` (K) and ``p_max`` (Pa)."""

    def __init__(self, residual: HelmholtzResidual, T_max: float, p_max: float) -> None:
        from pathcalc.equations.helmholtz.roots import between, newton

        line = residual.coexistence
        self._T_x, self._R = line.T_x, residual.R
        self._y = np.linspace(line.T_x / T_max, 1.0, _ROWS)
        self._w = np.linspace(np.log(_THIN * line.p_x), np.log(p_max), _COLUMNS)
        y, w = (a.ravel() for a in np.meshgrid(self._y, self._w, indexing="ij"))
        T, p = line.T_x / np.minimum(y, 1.0 - 1e-6), np.exp(w)
        with np.errstate(all="ignore"):
            ln_rho = newton(residual, T, p, between(residual, T, p, by_cubic(residual, T, p)))
            rough = by_cubic(residual, T, p)
        ln_rho = np.where(np.isfinite(ln_rho), ln_rho, np.minimum(rough, residual.ln_rho_max))
        self._ln_z = w - np.log(residual.R * T) - ln_rho
        self._steps = (_ROWS - 1.0) / (self._y[-1] - self._y[0]), (_COLUMNS - 1.0) / (self._w[-1] - self._w[0])

    def ln_rho(self, T: Array, p: Array) -> Array:
        """ln ρ (mol/m3) to begin with at ``T`` (K), ``p`` (Pa), shape (n,)."""
        w = np.log(p)
        thin = np.minimum(w - self._w[0], 0.0)
        a = np.minimum(np.maximum((self._T_x / T - self._y[0]) * self._steps[0], 0.0), _ROWS - 1.0)
        b = np.minimum(np.maximum((w - self._w[0]) * self._steps[1], 0.0), _COLUMNS - 1.0)
        i = np.minimum(np.maximum(a.astype(np.intp) - 1, 0), _ROWS - 4)
        j = np.minimum(np.maximum(b.astype(np.intp) - 1, 0), _COLUMNS - 4)
        across, along = _lagrange(a - i), _lagrange(b - j)
        at = i * _COLUMNS + j
        ln_z = np.zeros(T.shape)
        for k in range(4):
            row = along[0] * self._ln_z.take(at)
            for m in (1, 2, 3):
                row += along[m] * self._ln_z.take(at + m)
            row *= across[k]
            ln_z += row
            at += _COLUMNS
        return np.asarray(w - np.log(self._R * T) - ln_z * np.exp(thin))


def _lagrange(u: Array) -> tuple[Array, Array, Array, Array]:
    """Weights of the nodes 0, 1, 2, 3 at ``u``."""
    a, b, c = u - 1.0, u - 2.0, u - 3.0
    bc, ua = b * c, u * a
    return a * bc * (-1.0 / 6.0), u * bc * 0.5, ua * c * -0.5, ua * b * (1.0 / 6.0)
