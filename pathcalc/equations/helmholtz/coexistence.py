"""The coexistence curve of a reference equation from its Chebyshev expansions.

The expansions are those of :mod:`pathcalc.equations.helmholtz.trace`, fitted beforehand and kept beside the
card as JSON, or fitted when first asked for. When read, each piece is cut into eight with shorter polynomials, which
are summed by Horner's rule: a temperature costs one look-up and a few multiplications, a pressure one more polynomial
and one Newton step.
"""

from __future__ import annotations

import json
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from pathcalc.equations.contract import Array, Coexisting
from pathcalc.equations.helmholtz.trace import FUNCTIONS, Terms, Traced, trace

if TYPE_CHECKING:
    from pathcalc.equations.helmholtz.residual import HelmholtzResidual

BLOCK = 1024
"""Lanes looked up at a time: their coefficients stay in the processor's cache."""

LN_P, LN_RHO_L, LN_RHO_V, SLOPE, D10_L, D10_V, D00_L, STIFF_L, STIFF_V, SLOPE_THETA = range(len(FUNCTIONS))
_STATES = (LN_P, LN_RHO_L, LN_RHO_V, SLOPE)
_FOLDER = "saturation"
_CUTS = 8
_SHORT = 9
"""Pieces made of one, and terms of their polynomials: rounding is all that is lost."""

_FITTED = 1e-11
_SAME = 1e-9
_NEAR_NODES = 400
_NEAREST = 1e-8
"""Closer to the critical temperature than this part of it nothing is told apart."""


class SaturationLine:
    """Saturation of one equation with gas constant ``R``; see :class:`contract.SaturationLine`."""

    def __init__(self, traced: Traced, R: float) -> None:
        t = traced
        self.R, self.T_x, self.p_x, self.rho_x = R, t.T_x, t.p_x, t.rho_x
        edges = np.asarray(t.edges, dtype=np.float64)
        middle, half = (np.asarray(a, dtype=np.float64) for a in (t.middle, t.half))
        self._ends = float(edges[0]), float(edges[-1])
        self._pieces = _Pieces(edges, middle, half, np.asarray(t.coefficients, dtype=np.float64))
        inner = np.asarray(t.inverse_edges, dtype=np.float64)
        inverse = np.asarray(t.inverse, dtype=np.float64)[:, None]
        self._inverse = _Pieces(inner, 0.5 * (inner[:-1] + inner[1:]), 0.5 * np.diff(inner), inverse)
        self._by_density: tuple[Array, Array] | None = None
        self.T_low = float(self.T_x * (1.0 - self._ends[1] ** 2))
        self.T_top = float(self.T_x * (1.0 - max(self._ends[0] ** 2, _NEAREST)))
        ends = self.at_T(np.array([self.T_low, self.T_top]))
        self.p_low, self.p_top = float(ends.p[0]), float(ends.p[1])

    def at_T(self, T: Array) -> Coexisting:
        """Coexisting phases at ``T`` (K), shape (n,), for T_low ≤ T ≤ T_top; elsewhere without meaning."""
        theta = np.sqrt(1.0 - T / self.T_x)
        ln_p, ln_l, ln_v, slope = self._values(theta, _STATES)
        p = self.p_x * np.exp(ln_p)
        return Coexisting(T, p, np.exp(-ln_l) / self.rho_x, np.exp(-ln_v) / self.rho_x, slope * p / T)

    def at_p(self, p: Array) -> Coexisting:
        """Coexisting phases at ``p`` (Pa), shape (n,), for p_low ≤ p ≤ p_top; elsewhere without meaning."""
        theta = self.theta_of(p)
        T = self.T_x * (1.0 - theta * theta)
        ln_l, ln_v, slope = self._values(theta, (LN_RHO_L, LN_RHO_V, SLOPE))
        return Coexisting(T, p, np.exp(-ln_l) / self.rho_x, np.exp(-ln_v) / self.rho_x, slope * p / T)

    def p_at(self, T: Array) -> Array:
        """The saturation pressure alone."""
        return np.asarray(self.p_x * np.exp(self._values(np.sqrt(1.0 - T / self.T_x), (LN_P,))[0]))

    def theta_of(self, p: Array) -> Array:
        """θ = √(1 − T/T_x) at ``p`` (Pa)."""
        ln_p = np.log(p / self.p_x)
        phi = np.sqrt(np.maximum(-ln_p, 0.0))
        theta = self._inverse(phi, (0,))[0]
        theta = np.clip(theta, max(self._ends[0], 1e-9), self._ends[1])
        got, slope = self._values(theta, (LN_P, SLOPE))
        return np.asarray(theta + (got - ln_p) * (1.0 - theta * theta) / (2.0 * theta * slope))

    def energies(self, T: Array) -> tuple[Array, Array, Array]:
        """D10 of liquid and vapour and D00 of the liquid at ``T`` (K): the caloric part of saturation."""
        d10_l, d10_v, d00_l = self._values(np.sqrt(1.0 - T / self.T_x), (D10_L, D10_V, D00_L))
        return d10_l, d10_v, d00_l

    def d2p_dT2(self, T: Array) -> Array:
        """d²p/dT² of the saturation pressure (Pa/K2) at ``T`` (K), by the expansions of S and dS/dθ."""
        theta = np.sqrt(1.0 - T / self.T_x)
        ln_p, slope, by_theta = self._values(theta, (LN_P, SLOPE, SLOPE_THETA))
        bend = by_theta * (-0.5 / (theta * self.T_x))
        p = self.p_x * np.exp(ln_p)
        return np.asarray(p / (T * T) * (slope * (slope - 1.0) + T * bend))

    def T_near(self, v: Array) -> Array:
        """About the temperature (K) at which one phase has the volume ``v``; ``T_low`` beyond the line."""
        if self._by_density is None:
            theta = np.linspace(self._ends[0], self._ends[1], _NEAR_NODES)
            ln_l, ln_v = self._values(theta, (LN_RHO_L, LN_RHO_V))
            self._by_density = (
                np.concatenate([np.minimum.accumulate(ln_v)[::-1], np.maximum.accumulate(ln_l)]),
                np.concatenate([theta[::-1], theta]),
            )
        ln_rho = -np.log(v * self.rho_x)
        theta = np.interp(ln_rho, *self._by_density, left=self._ends[1], right=self._ends[1])
        return np.asarray(self.T_x * (1.0 - theta * theta))

    def beside(self, T: Array) -> tuple[Array, Array, Array, Array, Array]:
        """ln(p/p_x), ln(ρ_l/ρ_x), ln(ρ_v/ρ_x) and 1 + 2 D01 + D02 of both: where roots begin from."""
        out = self._values(np.sqrt(1.0 - T / self.T_x), (LN_P, LN_RHO_L, LN_RHO_V, STIFF_L, STIFF_V))
        return out[0], out[1], out[2], out[3], out[4]

    def _values(self, theta: Array, functions: tuple[int, ...]) -> Array:
        return self._pieces(theta, functions)


class _Pieces:
    """Functions given by Chebyshev expansions ``c`` (pieces, functions, degree + 1) on middle ± half of each piece."""

    def __init__(self, edges: Array, middle: Array, half: Array, c: Array) -> None:
        share = np.arange(_CUTS + 1) / _CUTS
        cut = edges[:-1, None] + np.diff(edges)[:, None] * share
        fine = np.append(cut[:, :-1].ravel(), edges[-1])
        self._middle, self._half = 0.5 * (fine[:-1] + fine[1:]), 0.5 * np.diff(fine)
        self._inner = np.ascontiguousarray(fine[1:-1])
        node = np.cos(np.pi * (np.arange(_SHORT) + 0.5) / _SHORT)
        x = self._middle[:, None] + self._half[:, None] * node
        old = np.repeat(np.arange(middle.size), _CUTS)
        u = (x - middle[old, None]) / half[old, None]
        values = np.stack([_clenshaw(c[old, k], u) for k in range(c.shape[1])])
        order = np.arange(_SHORT)
        basis = np.cos(order[:, None] * np.arccos(node)) * np.where(order[:, None] == 0, 1.0, 2.0) / _SHORT
        self._table = np.zeros((c.shape[1], _SHORT, fine.size - 1))
        for k in range(_SHORT):
            weight = np.add.reduce(values * basis[k], axis=2)
            for power, factor in enumerate(_chebyshev(k)):
                self._table[:, power] += factor * weight
        self._chosen: dict[tuple[int, ...], Array] = {}

    def __call__(self, x: Array, functions: tuple[int, ...]) -> Array:
        """The ``functions`` at ``x`` (n,): (len(functions), n)."""
        table = self._chosen.get(functions)
        if table is None:
            table = self._chosen[functions] = np.ascontiguousarray(self._table[list(functions)])
        n = x.size
        out = np.empty((len(functions), n))
        for start in range(0, n, BLOCK):
            part = x[start : start + BLOCK]
            k = self._inner.searchsorted(part, side="right")
            u = (part - self._middle.take(k)) / self._half.take(k)
            a = table[:, -1].take(k, axis=1)
            for j in range(_SHORT - 2, -1, -1):
                a *= u
                a += table[:, j].take(k, axis=1)
            out[:, start : start + BLOCK] = a
        return out


def _chebyshev(k: int) -> list[float]:
    """Coefficients of T_k in powers."""
    before, now = [1.0], [0.0, 1.0]
    if k == 0:
        return before
    for _ in range(k - 1):
        after = [0.0, *(2.0 * c for c in now)]
        for i, c in enumerate(before):
            after[i] -= c
        before, now = now, after
    return now


def _clenshaw(c: Array, u: Array) -> Array:
    """Σ c_j T_j(u) for each piece: c (pieces, degree + 1), u (pieces, n). C. W. Clenshaw, MTAC 9 (1955) 118."""
    a = b = np.zeros_like(u)
    for j in range(c.shape[1] - 1, 0, -1):
        a, b = c[:, j, None] + 2.0 * u * a - b, a
    return np.asarray(c[:, 0, None] + u * a - b)


def of(residual: HelmholtzResidual) -> SaturationLine:
    """The saturation line of an equation: its file if there is one that belongs to it, else a fit."""
    card = residual.reference
    if card is None:
        raise ValueError("an equation without its card has no saturation line")

    def terms(T: Array, rho: Array) -> tuple[Array, Array, Array, Array]:
        a, b, c, d = residual.derivatives(T, rho, ((0, 0), (0, 1), (0, 2), (1, 0)))
        return a, b, c, d

    path = Path(card.file).parent / _FOLDER / (Path(card.file).stem + ".json")
    if path.is_file():
        line = read(path, residual.R)
        T_low = card.limits.T_min * (1.0 + 1e-9)
        if line.T_low <= T_low and abs(line.T_x / card.summit.T - 1.0) < 1e-6 and _belongs(line, terms):
            return line
    analytic = all(table.form != "non-analytic" for table in card.terms)
    top = card.summit
    T_low = card.limits.T_min * (1.0 - 1e-6)
    traced = trace(terms, top.T, top.rho, T_low, analytic=analytic, tolerance=_FITTED, R=residual.R)
    return SaturationLine(traced, residual.R)


def _belongs(line: SaturationLine, terms: Terms) -> bool:
    """Whether the phases of the line are in equilibrium by the equation: a file may be older than its card."""
    T = line.T_x - (line.T_x - line.T_low) * np.array([0.05, 0.3, 0.6])
    found = line.at_T(T)
    a, b, _, c = terms(T, 1.0 / found.v_liquid)
    d, e, _, f = terms(T, 1.0 / found.v_vapour)
    p_v, p_l = ((1.0 + z) * line.R * T / v for z, v in ((e, found.v_vapour), (b, found.v_liquid)))
    gibbs = np.log(found.v_vapour / found.v_liquid) + (a - d) + (b - e)
    d10_l, d10_v, d00_l = line.energies(T)
    stiff = line.R * T / found.v_liquid
    return bool(
        (np.abs(gibbs) < _SAME).all()
        and (np.abs(p_v / found.p - 1.0) < _SAME).all()
        and (np.abs(p_l - found.p) < _SAME * stiff).all()
        and (np.abs(d10_l / c - 1.0) + np.abs(d10_v / f - 1.0) + np.abs(d00_l / a - 1.0) < _SAME).all()
    )


def read(path: Path, R: float) -> SaturationLine:
    """The expansions kept in a file."""
    with path.open(encoding="utf-8") as file:
        return SaturationLine(from_dict(json.load(file)), R)


def from_dict(data: dict[str, object]) -> Traced:
    """The expansions from what :func:`to_dict` made."""
    edges = np.asarray(data["edges"], dtype=np.float64)
    middle, half = 0.5 * (edges[:-1] + edges[1:]), 0.5 * np.diff(edges)
    if data["signed"]:
        middle[0], half[0] = 0.0, edges[1]
    pieces = data["pieces"]
    assert isinstance(pieces, list)
    degree = max(len(row) for piece in pieces for row in piece.values())
    coefficients = np.zeros((len(pieces), len(FUNCTIONS), degree))
    for k, piece in enumerate(pieces):
        for j, name in enumerate(FUNCTIONS):
            coefficients[k, j, : len(piece[name])] = piece[name]
    return Traced(
        float(str(data["T"])),
        float(str(data["p"])),
        float(str(data["rho"])),
        edges,
        middle,
        half,
        coefficients,
        np.asarray(data["inverse_edges"], dtype=np.float64),
        np.asarray(data["inverse"], dtype=np.float64),
    )


def to_dict(traced: Traced) -> dict[str, object]:
    """What a file holds: digits beyond the rounding of the sum are left out."""
    t = traced
    pieces = []
    for coefficients in t.coefficients:
        piece = {}
        for name, row in zip(FUNCTIONS, coefficients, strict=True):
            # stiffness only starts an iteration
            least = 1e-6 if name.startswith("stiff") else 1e-14 if name == "slope_theta" else 2e-17
            piece[name] = _rounded(row, least * max(1.0, float(np.max(np.abs(row)))))
        pieces.append(piece)
    return {
        "T": t.T_x,
        "p": t.p_x,
        "rho": t.rho_x,
        "signed": bool(t.middle[0] == 0.0),
        "edges": [float(x) for x in t.edges],
        "pieces": pieces,
        "inverse_edges": [float(x) for x in t.inverse_edges],
        "inverse": [_rounded(row, 1e-13, keep=True) for row in t.inverse],
    }


def _rounded(row: Sequence[float], least: float, keep: bool = False) -> list[float]:
    digits = int(np.ceil(-np.log10(least)))
    out = [round(float(x), digits) + 0.0 for x in row]
    while not keep and len(out) > 2 and out[-1] == 0.0:
        out.pop()
    return out
