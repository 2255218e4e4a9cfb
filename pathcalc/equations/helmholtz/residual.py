"""The residual part of a multiparameter equation of state, α^r(δ, τ), as the contract wants it."""

from __future__ import annotations

from collections.abc import Sequence
from functools import cached_property
from itertools import pairwise

import numpy as np

from pathcalc.equations.contract import Array, PressureLimits, PressureTerms, Reduced
from pathcalc.equations.helmholtz import coexistence, roots
from pathcalc.equations.helmholtz.bank import Bank
from pathcalc.equations.helmholtz.coexistence import SaturationLine
from pathcalc.equations.helmholtz.fences import Fences
from pathcalc.equations.helmholtz.forms import forms_of
from pathcalc.equations.helmholtz.hot_starts import HotStarts
from pathcalc.equations.helmholtz.non_analytic import NonAnalyticTerms
from pathcalc.equations.helmholtz.term import Place, Real, Separable
from pathcalc.substances.reference import Reference

BLOCK_ELEMENTS = 8192
"""Terms times lanes evaluated at a time: the block stays in the processor's cache."""

CRITICAL_BLOCK = 1024
"""Lanes near the critical point evaluated at a time by the non-analytic terms."""

LOG_LEAST = -1.0e6
"""ln δ is not let below this, so that terms at zero density are zero, or finite where d = 0."""

Orders = Sequence[tuple[int, int]]

REDUCED: Orders = ((0, 0), (0, 1), (0, 2), (1, 0), (1, 1), (2, 0))
PRESSURE: Orders = ((0, 1), (0, 2), (1, 1), (2, 1))
CURVATURE: Orders = ((2, 1),)


class HelmholtzResidual:
    """α^r = Σ of the terms ``forms`` at δ = ρ/``rho_r`` (mol/m3) and τ = ``T_r``/T (K); ``R`` in J/(mol K)."""

    def __init__(
        self,
        T_r: float,
        rho_r: float,
        R: float,
        forms: Sequence[Separable | NonAnalyticTerms],
        reference: Reference | None = None,
    ) -> None:
        self.T_r, self.rho_r, self.R = T_r, rho_r, R
        self.reference = reference
        self.forms = tuple(forms)
        self._bank = Bank([form for form in forms if isinstance(form, Separable)])
        self._critical = [form for form in forms if isinstance(form, NonAnalyticTerms)]
        self.block = max(64, BLOCK_ELEMENTS // self._bank.n.size)
        self.dtype = self._bank.n.dtype

    @classmethod
    def of(cls, reference: Reference, dtype: Real = np.float64) -> HelmholtzResidual:
        """The equation of a card, evaluated in the precision ``dtype``."""
        reducing = reference.reducing
        return cls(reducing.T, reducing.rho, reference.gas_constant, forms_of(reference, dtype), reference)

    def derivatives(self, T: Array, rho: Array, wanted: Orders) -> Array:
        """D_ij = τ^i δ^j ∂^(i+j) α^r/∂τ^i∂δ^j for each (i, j) of ``wanted``, stacked on a new first axis.

        The result has the equation's own ``dtype``.

        ``T`` in K, ``rho`` in mol/m3, any shapes that broadcast; i up to 2, j up to 3. NaN where T is not
        positive or rho is negative. At rho = 0 exactly zero.
        """
        T, rho = np.broadcast_arrays(np.asarray(T, dtype=self.dtype), np.asarray(rho, dtype=self.dtype))
        shape, n = T.shape, T.size
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            tau, delta = self.T_r / T.ravel(), rho.ravel() / self.rho_r
            if n == 1:
                out = self._block(tau.repeat(2), delta.repeat(2), wanted)[:, :1]
            elif n <= self.block:
                out = self._block(tau, delta, wanted)
            else:
                out = np.empty((len(wanted), n), dtype=self.dtype)
                edges = [*range(0, n - 1, self.block), n]  # n - 1: no block of one lane
                for start, stop in pairwise(edges):
                    out[:, start:stop] = self._block(tau[start:stop], delta[start:stop], wanted)
            if self._critical:
                self._add_critical(tau, delta, wanted, out)
        return out.reshape(len(wanted), *shape)

    def _block(self, tau: Array, delta: Array, wanted: Orders) -> Array:
        return self._bank.sums(_place(tau, delta), wanted)

    def _add_critical(self, tau: Array, delta: Array, wanted: Orders, out: Array) -> None:
        """Adds the non-analytic terms to the lanes of ``out`` where they count."""
        for form in self._critical:
            where = np.flatnonzero(form.near(Place(delta, tau, delta, tau)))
            for start in range(0, where.size, CRITICAL_BLOCK):
                here = where[start : start + CRITICAL_BLOCK]
                padded = here.repeat(2) if here.size == 1 else here
                out[:, here] += form.sums(_place(tau[padded], delta[padded]), wanted)[:, : here.size]

    def reduced(self, T: Array, rho: Array) -> Reduced:
        """Scaled derivatives up to the second order at ``T`` (K) and ``rho`` (mol/m3)."""
        return Reduced(*self.derivatives(T, rho, REDUCED))

    def pressure(self, T: Array, v: Array) -> PressureTerms:
        """p = R T ρ (1 + D01) and its derivatives at ``T`` (K), ``v`` (m3/mol).

        (∂p/∂T)_v = R ρ (1 + D01 − D11), (∂p/∂v)_T = −R T ρ² (1 + 2 D01 + D02), (∂²p/∂T²)_v = R ρ D21/T.
        """
        rho = 1.0 / np.asarray(v, dtype=np.float64)
        d01, d02, d11, d21 = self.derivatives(T, rho, PRESSURE)
        Rrho = self.R * rho
        z = 1.0 + d01
        return PressureTerms(T * Rrho * z, Rrho * (z - d11), -T * Rrho * rho * (z + d01 + d02), Rrho * d21 / T)

    def pressure_curvature(self, T: Array, v: Array) -> Array:
        """(∂²p/∂T²)_v = R ρ D21/T, Pa/K2."""
        rho = 1.0 / np.asarray(v, dtype=np.float64)
        curvature: Array = self.R * rho * self.derivatives(T, rho, CURVATURE)[0] / T
        return curvature

    def volume_roots(self, T: Array, p: Array) -> Array:
        """Stable and metastable volumes (m3/mol) at ``T`` (K), ``p`` (Pa), shape (2, n); see ``roots``."""
        return roots.volume_roots(self, T, p)

    def volume_of(self, T: Array, p: Array, branch: Array | None = None) -> tuple[Array, Array] | None:
        """The volume (m3/mol) of the stable phase, or of the one asked for, and ln(p/p_sat); see ``roots``."""
        return roots.volume_of(self, T, p, branch)

    def v_min(self, T: Array) -> Array:
        """The smallest volume at which the equation is evaluated, m3/mol; see ``roots``."""
        return roots.v_min(self, T)

    def saturation_start(self, T: Array) -> Array:
        """The saturation pressure (Pa) at ``T`` (K); see ``roots``."""
        return roots.saturation_start(self, T)

    @cached_property
    def coexistence(self) -> SaturationLine:
        """The saturation line: kept beside the card, or fitted when first asked for."""
        return coexistence.of(self)

    @cached_property
    def limits(self) -> PressureLimits | None:
        """The largest pressure and the melting line of the card."""
        return Fences(self._card)

    @cached_property
    def ln_rho_max(self) -> float:
        """ln of the largest density (mol/m3) at which the equation is evaluated."""
        card = self._card
        T = np.geomspace(self.coexistence.T_low, card.limits.T_max, 12)
        return roots.ceiling(self, card.limits.p_max, T)

    @cached_property
    def hot_starts(self) -> HotStarts:
        """Starts of density roots above the critical temperature."""
        limits = self._card.limits
        return HotStarts(self, limits.T_max, limits.p_max)

    @cached_property
    def omega(self) -> float:
        """The acentric factor of the card, or by its definition −1 − lg(p_sat/p_c) at T = 0.7 T_c (zero if solid)."""
        if self._card.acentric is not None:
            return self._card.acentric
        line = self.coexistence
        T = max(0.7 * line.T_x, line.T_low)
        return float(-1.0 - np.log10(line.p_at(np.array([T]))[0] / line.p_x)) if 0.7 * line.T_x == T else 0.0

    @property
    def _card(self) -> Reference:
        if self.reference is None:
            raise ValueError("an equation without its card has no limits")
        return self.reference


def _place(tau: Array, delta: Array) -> Place:
    return Place(delta, tau, np.maximum(np.log(delta), LOG_LEAST), np.log(tau))
