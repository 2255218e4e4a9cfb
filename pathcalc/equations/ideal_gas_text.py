r"""The heat-capacity correlation in words a reader can check: its formula and its coefficients.

LaTeX of the mathematics only, without delimiters; numbers are floats, for the report to format.
"""

from __future__ import annotations

from typing import NamedTuple

from pathcalc.substances.card import Correlation


class Coefficient(NamedTuple):
    """One coefficient: LaTeX symbol, value, SI unit ("1" if none), and the range it holds in."""

    symbol: str
    value: float
    unit: str
    T_min: float
    T_max: float


def formula(item: Correlation) -> str:
    """LaTeX of c_p0/R, with the sums that this correlation has."""
    parts: list[str] = []
    exponents = {term.exponent for part in item.ranges for term in part.powers}
    if exponents - {0.0}:
        parts.append(r"\sum_k c_k \left(\frac{T}{\mathrm{K}}\right)^{t_k}")
    elif exponents:
        parts.append("c_1")
    harmonic = all(term.shift == -1.0 for term in item.levels)
    if item.levels:
        below = r"\left(e^{y_j} - 1\right)^2" if harmonic else r"\left(e^{y_j} + g_j\right)^2"
        parts.append(rf"\sum_j v_j \frac{{y_j^2\, e^{{y_j}}}}{{{below}}}")
    text = r"\frac{c_p^\circ}{R} = " + " + ".join(parts)
    return text + (r",\qquad y_j = \frac{\theta_j}{T}" if item.levels else "")


def coefficients(item: Correlation) -> tuple[Coefficient, ...]:
    """All coefficients of :func:`formula`, range by range, then the levels."""
    rows: list[Coefficient] = []
    for part in item.ranges:
        plain = all(term.exponent == 0.0 for term in part.powers)
        for k, term in enumerate(part.powers, 1):
            rows.append(Coefficient(f"c_{{{k}}}", term.coefficient, "1", part.T_min, part.T_max))
            if not plain:
                rows.append(Coefficient(f"t_{{{k}}}", term.exponent, "1", part.T_min, part.T_max))
    harmonic = all(term.shift == -1.0 for term in item.levels)
    for j, level in enumerate(item.levels, 1):
        rows.append(Coefficient(f"v_{{{j}}}", level.weight, "1", item.T_min, item.T_max))
        rows.append(Coefficient(rf"\theta_{{{j}}}", level.theta, "K", item.T_min, item.T_max))
        if not harmonic:
            rows.append(Coefficient(f"g_{{{j}}}", level.shift, "1", item.T_min, item.T_max))
    return tuple(rows)
