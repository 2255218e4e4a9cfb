"""What a report shows of a heat capacity: its coefficients are all of them, and give its value."""

from __future__ import annotations

import math

import numpy as np
import pytest

from pathcalc.equations import ideal_gas, ideal_gas_text
from pathcalc.substances import Correlation, names, read_card

ALL = [(name, item.name) for name in names() for item in read_card(name).ideal_gas]


def value_from_the_table(item: Correlation, T: float) -> float:
    """c_p0/R from the rows that a report prints, and nothing else."""
    rows = {row.symbol: row.value for row in ideal_gas_text.coefficients(item) if row.T_min <= T <= row.T_max}
    total = 0.0
    for symbol, value in rows.items():
        k = symbol.partition("_")[2]
        if symbol.startswith("c"):
            total += value * T ** rows.get(f"t_{k}", 0.0)
        elif symbol.startswith("v"):
            y = rows[rf"\theta_{k}"] / T
            total += value * y**2 * math.exp(y) / (math.exp(y) + rows.get(f"g_{k}", -1.0)) ** 2
    return total


@pytest.mark.parametrize(("name", "choice"), ALL, ids=lambda value: value)
def test_the_printed_coefficients_are_all_of_them(name: str, choice: str) -> None:
    correlation = read_card(name).correlation(choice)
    T = 0.9 * correlation.T_min + 0.1 * correlation.T_max
    expected = float(ideal_gas.from_correlation(correlation, correlation.gas_constant).cp0_R(np.float64(T)))
    assert value_from_the_table(correlation, T) == pytest.approx(expected, rel=1e-12)
    formula = ideal_gas_text.formula(correlation)
    assert ("y_j" in formula) == bool(correlation.levels)
    assert formula.count("{") == formula.count("}")
