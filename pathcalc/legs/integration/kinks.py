"""Where a piece of a leg passes a kink, so that a panel of the quadrature must end there.

Correlations of the ideal-gas heat capacity in ranges change their formula at a joint, and polynomials are held constant
beyond their range. A panel across such a temperature may miss it where it hides between the panel's end and the first
node. The non-analytic terms of reference equations hold |ρ/ρ_c − 1| to broken powers (Span and Wagner 1996, eq. 6.1),
which are not smooth at the critical density, and all equations have their sharpest bend near it.
"""

from __future__ import annotations

import numpy as np

from pathcalc.equations.contract import Array, Model
from pathcalc.legs.integration.bracket import bracketed_root
from pathcalc.legs.integration.families import Ends, Family, Isochore, Isotherm, Lanes, Polytrope

_SAMPLES = 25
_DIP = 0.75
"""Part of the lowest end temperature down to which, and of whose inverse up to which, a curve may swing."""


def kinks_on(model: Model, family: Family, ends: Ends, local: Lanes) -> Array | None:
    """Abscissas in (0, 1) of the kinks on a one-phase piece, (K, k), NaN where there is none; None: none at all."""
    found = _heat_capacity_kinks(model, family, ends, local)
    if family.coordinate == "v" and model.residual.coexistence is not None:
        with np.errstate(divide="ignore", invalid="ignore"):
            x = np.log(model.v_c / ends.v_a) / np.log(ends.v_b / ends.v_a)
        critical = np.flatnonzero((x > 0.0) & (x < 1.0))
        if critical.size:
            found.append((critical, x[critical]))
    if not found:
        return None
    table = np.full((len(found), ends.T_a.size), np.nan)
    for row, (lane, x) in zip(table, found, strict=True):
        row[lane] = x
    return table


def _heat_capacity_kinks(model: Model, family: Family, ends: Ends, local: Lanes) -> list[tuple[Lanes, Array]]:
    """Pairs of lanes and abscissas at which the ideal-gas heat capacity has a kink."""
    if not model.ideal.kinks or isinstance(family, Isotherm):
        return []
    low, high = np.minimum(ends.T_a, ends.T_b), np.maximum(ends.T_a, ends.T_b)
    if not (isinstance(family, Isochore) or (isinstance(family, Polytrope) and family.level_in_dome)):
        low, high = _DIP * low, high / _DIP
    found: list[tuple[Lanes, Array]] = []
    for kink in model.ideal.kinks:
        near = np.flatnonzero((low < kink) & (kink < high))
        if near.size:
            found.extend(_crossings(model, family, ends.take(near), local[near], near, kink))
    return found


def _crossings(
    model: Model, family: Family, ends: Ends, local: Lanes, lanes: Lanes, kink: float
) -> list[tuple[Lanes, Array]]:
    """Pairs of lanes and abscissas, every lane at most once a pair."""

    def above(x: Array, k: Lanes) -> Array:
        T = family.nodes(model, ends.take(k), x, local[k]).T
        return np.asarray(T - kink)

    every = np.arange(lanes.size, dtype=np.intp)
    x = np.linspace(0.0, 1.0, _SAMPLES)[:, None] + np.zeros(lanes.size)
    side = above(x, every)
    with np.errstate(invalid="ignore"):
        change = (np.signbit(side[:-1]) != np.signbit(side[1:])) & np.isfinite(side[:-1] + side[1:])
    pairs = []
    for cell in np.flatnonzero(change.any(axis=1)):
        here = np.flatnonzero(change[cell]).astype(np.intp)

        def miss(at: Array, here: Lanes = here) -> Array:
            return np.asarray(above(at[None, :], here)[0])

        root = bracketed_root(miss, x[cell, here], x[cell + 1, here], rtol=1e-13)
        pairs.append((lanes[here], root))
    return pairs
