r"""Heat capacity of the ideal gas, and its integrals: enthalpy and entropy.

One expression covers every form a card may hold, as sums of powers of T and of energy levels,

    c_p0/R = sum_k c_k T^t_k + sum_j v_j y^2 e^y/(e^y + g_j)^2,      y = theta_j/T,

and integrates in closed form, term by term:

    c T^t                     ->  h: c T^(t+1)/(t+1), or c ln T for t = -1;   s: c T^t/t, or c ln T for t = 0
    v y^2 e^y/(e^y + g)^2     ->  h: v theta/(e^y + g);   s: v [y/(e^y + g) + ln(1 + g e^-y)/g]

g = -1 is the harmonic vibration (M. Planck; A. Einstein, Ann. Phys. 327 (1907) 180), the form of the ideal
part of most reference equations. (x/sinh x)^2 is the same with theta doubled, and (x/cosh x)^2 is g = +1
with theta doubled (F. A. Aly and L. L. Lee, Fluid Phase Equilib. 6 (1981) 169). The nine-constant form is
a piecewise sum of powers -2 … 4 (B. J. McBride, M. J. Zehe and S. Gordon, NASA/TP-2002-211556, 2002).

Zero of enthalpy and entropy: 298.15 K and 1 bar. The additive constants of the sources are not used.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import R_CODATA, T_STANDARD
from pathcalc.substances.card import Card, Correlation, LevelTerm, PowerTerm, TemperatureRange

Array = NDArray[np.float64]

BLOCK = 4096
"""Temperatures evaluated at a time: terms times block stays in the processor's cache."""

Y_MAX = 750.0
"""e^-y is zero in floating point beyond this."""


class IdealTerms(NamedTuple):
    """c_p0/R, (h0 - h0(298.15 K))/R in K, and (s0 - s0(298.15 K))/R at 1 bar."""

    cp0_R: Array
    h0_R: Array
    s0_R: Array


class _Powers:
    """A sum of powers of T on one temperature range, with its two integrals."""

    def __init__(self, terms: Sequence[PowerTerm], scale: float) -> None:
        merged: dict[float, float] = {}
        for term in terms:
            merged[term.exponent] = merged.get(term.exponent, 0.0) + scale * term.coefficient
        self.constant = merged.pop(0.0, 0.0)
        self.inverse = merged.get(-1.0, 0.0)
        t = np.array(list(merged), dtype=np.float64)
        c = np.array(list(merged.values()), dtype=np.float64)
        self.exponents = t[:, None]
        over = np.divide(c, t + 1.0, out=np.zeros_like(c), where=t != -1.0)
        self.weights = np.stack([c, over, c / t], axis=1)[:, :, None]

    def add(self, T: Array, log_T: Array) -> Array:
        """c_p0/R, its integral over T and its integral over ln T, shape (3, n) for ``T`` of shape (n,)."""
        out = np.empty((3, T.size))
        out[0] = self.constant
        np.multiply(self.constant, T, out=out[1])
        np.multiply(self.constant, log_T, out=out[2])
        if self.weights.size:
            powers = np.exp(self.exponents * log_T)
            sums = _sum(self.weights * powers[:, None, :])
            sums[1] *= T
            out += sums
            if self.inverse:
                out[1] += self.inverse * log_T
        return out


def _sum(terms: Array) -> Array:
    """Sum over the first axis of (k, 3, n), term after term, so that no lane depends on its neighbours.

    A matrix product would be faster, but lets the number of lanes choose the order of summation.
    """
    return np.asarray(np.add.reduce(terms, axis=0))


@dataclass(frozen=True, eq=False)
class IdealGasHeatCapacity:
    """The ideal part of a model: see the module's docstring for the expression.

    ``T_min`` and ``T_max`` (K) are the range the source states. Outside it the forms made of powers alone
    (``held``) keep the heat capacity of the end of the range, as polynomials run away; the other forms are
    evaluated as they stand. Values are divided by ``R`` (J/(mol K)), the gas constant of the model that
    will multiply by it again, so that c_p0 in J/(mol K) is the source's own.
    """

    name: str
    form: str
    T_min: float
    T_max: float
    ranges: tuple[TemperatureRange, ...]
    levels: tuple[LevelTerm, ...] = ()
    gas_constant: float = R_CODATA
    R: float = R_CODATA
    source: str = ""
    held: bool = False
    _edges: Array = field(init=False, repr=False)
    _powers: tuple[_Powers, ...] = field(init=False, repr=False)
    _weights: Array = field(init=False, repr=False)
    _theta: Array = field(init=False, repr=False)
    _shift: Array | None = field(init=False, repr=False)
    _join: tuple[tuple[float, float], ...] = field(init=False, repr=False)
    _zero: tuple[float, float] = field(init=False, repr=False)

    def __post_init__(self) -> None:
        scale = self.gas_constant / self.R
        put = object.__setattr__
        put(self, "_edges", np.array([r.T_min for r in self.ranges[1:]], dtype=np.float64))
        put(self, "_powers", tuple(_Powers(r.powers, scale) for r in self.ranges))
        rows = [(scale * t.weight, scale * t.weight * t.theta, scale * t.weight) for t in self.levels]
        put(self, "_weights", np.array(rows, dtype=np.float64).reshape(-1, 3, 1))
        put(self, "_theta", np.array([[term.theta] for term in self.levels], dtype=np.float64).reshape(-1, 1))
        harmonic = all(term.shift == -1.0 for term in self.levels)
        put(self, "_shift", None if harmonic else np.array([[term.shift] for term in self.levels]))
        put(self, "_join", self._continuity())
        put(self, "_zero", (0.0, 0.0))
        at_zero = self.terms(np.array([T_STANDARD]))
        put(self, "_zero", (float(at_zero.h0_R[0]), float(at_zero.s0_R[0])))

    @property
    def kinks(self) -> tuple[float, ...]:
        """Temperatures at which the heat capacity or its slope jumps, K: joints of ranges, ends of a held range."""
        joints = tuple(float(edge) for edge in self._edges)
        return (self.T_min, *joints, self.T_max) if self.held else joints

    def _continuity(self) -> tuple[tuple[float, float], ...]:
        """What to add to enthalpy and entropy of each range so that neither jumps at a joint."""
        joins = [(0.0, 0.0)]
        for below, above, edge in zip(self._powers, self._powers[1:], self._edges, strict=False):
            T = np.array([edge])
            step = below.add(T, np.log(T)) - above.add(T, np.log(T))
            h, s = joins[-1]
            joins.append((h + float(step[1, 0]), s + float(step[2, 0])))
        return tuple(joins)

    def cp0_R(self, T: Array) -> Array:
        """c_p0/R at ``T`` (K, any shape)."""
        return self.terms(T).cp0_R

    def h0_R(self, T: Array) -> Array:
        """(h0(T) - h0(298.15 K))/R, K, at ``T`` (K, any shape)."""
        return self.terms(T).h0_R

    def s0_R(self, T: Array) -> Array:
        """(s0(T, 1 bar) - s0(298.15 K, 1 bar))/R at ``T`` (K, any shape)."""
        return self.terms(T).s0_R

    def terms(self, T: Array) -> IdealTerms:
        """All three at once: the exponentials are shared. NaN where ``T`` is not positive."""
        T = np.asarray(T, dtype=np.float64)
        flat = T.ravel()
        if flat.size <= BLOCK:
            out = self._evaluate(flat)
        else:
            out = np.empty((3, flat.size))
            for start in range(0, flat.size, BLOCK):
                out[:, start : start + BLOCK] = self._evaluate(flat[start : start + BLOCK])
        cp, h, s = out.reshape(3, *T.shape)
        return IdealTerms(cp, h, s)

    def _evaluate(self, T: Array) -> Array:
        if not bool((T > 0.0).all()):
            T = np.where(T > 0.0, T, np.nan)
        wanted = T
        if self.held:
            T = np.clip(T, self.T_min, self.T_max)
        log_T = np.log(T)
        out = self._powers_at(T, log_T)
        if self._theta.size:
            out += self._levels_at(T)
        if self.held:
            out[1] += out[0] * (wanted - T)
            out[2] += out[0] * np.log(wanted / T)
        out[1] -= self._zero[0]
        out[2] -= self._zero[1]
        return out

    def _powers_at(self, T: Array, log_T: Array) -> Array:
        if len(self._powers) == 1:
            return self._powers[0].add(T, log_T)
        out = np.full((3, T.size), np.nan)
        which = np.searchsorted(self._edges, T, side="left")
        for k, (powers, (h_join, s_join)) in enumerate(zip(self._powers, self._join, strict=True)):
            here = which == k
            if here.any():
                part = powers.add(T[here], log_T[here])
                part[1] += h_join
                part[2] += s_join
                out[:, here] = part
        return out

    def _levels_at(self, T: Array) -> Array:
        """The energy levels; expm1 keeps 1 - e^-y exact at high temperatures."""
        y = np.minimum(self._theta / T, Y_MAX)
        lost = np.expm1(-y)
        q = 1.0 + lost
        if self._shift is None:
            d = -lost
            log_d = -np.log(d)
        else:
            d = (1.0 + self._shift) + self._shift * lost
            log_d = np.log(d) / self._shift
        terms = np.empty((self._theta.size, 3, T.size))
        y /= d
        np.multiply(y, q, out=terms[:, 2])
        np.multiply(y, terms[:, 2], out=terms[:, 0])
        terms[:, 2] += log_d
        np.divide(q, d, out=terms[:, 1])
        terms *= self._weights
        return _sum(terms)


def from_card(card: Card, choice: str | None = None, R: float = R_CODATA) -> IdealGasHeatCapacity:
    """The correlation ``choice`` of a card, or its first one, for a model with the molar gas constant ``R``.

    Raises :class:`pathcalc.errors.InvalidCaseError` if the card has no such correlation.
    """
    return from_correlation(card.correlation(choice), R)


def from_correlation(item: Correlation, R: float = R_CODATA) -> IdealGasHeatCapacity:
    """A correlation for a model with the molar gas constant ``R``, J/(mol K)."""
    return IdealGasHeatCapacity(
        name=item.name,
        form=item.form,
        T_min=item.T_min,
        T_max=item.T_max,
        ranges=item.ranges,
        levels=item.levels,
        gas_constant=item.gas_constant,
        R=R,
        source=item.source,
        held=item.form in ("nasa9", "polynomial"),
    )


def constant(
    cp0_R: float, *, T_min: float = 0.0, T_max: float = float("inf"), source: str = "", name: str = "constant"
) -> IdealGasHeatCapacity:
    """A heat capacity that does not depend on temperature, ``cp0_R`` = c_p0/R."""
    whole = TemperatureRange(T_min, T_max, (PowerTerm(cp0_R, 0.0),))
    return IdealGasHeatCapacity(name=name, form="constant", T_min=T_min, T_max=T_max, ranges=(whole,), source=source)
