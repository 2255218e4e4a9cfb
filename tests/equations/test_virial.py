"""The virial equation against measured second virial coefficients and worked examples."""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np
import pytest

from pathcalc.equations.build import build_model
from pathcalc.equations.virial import Coefficient, VirialGas, orbey_vera_c, tsonopoulos_b
from pathcalc.substances import read_card

REFERENCE = Path(__file__).parents[2] / "shared" / "reference"
NAMES = {"Nitrogen": "nitrogen", "CarbonDioxide": "carbon-dioxide", "Methane": "methane"}


def measured() -> dict[str, list[tuple[float, float]]]:
    lines = (REFERENCE / "second_virial_measured.csv").read_text(encoding="utf-8").splitlines()
    out: dict[str, list[tuple[float, float]]] = {}
    for row in csv.DictReader(line for line in lines if not line.startswith("#")):
        out.setdefault(row["gas"], []).append((float(row["T_K"]), float(row["B"])))
    return out


@pytest.mark.parametrize("gas", sorted(NAMES))
def test_second_virial_coefficient_against_measurement(gas: str) -> None:
    """Dymond & Smith (1980) and Dymond et al. (2002), as collected; the correlation is good to
    some cm3/mol, or 4 %, above 0.7 Tc."""
    card = read_card(NAMES[gas])
    B = tsonopoulos_b(card.T_c.value, card.p_c.value, card.acentric.value)
    rows = [(T, b) for T, b in measured()[gas] if 0.7 * card.T_c.value < T]
    T, b = np.array(rows).T
    got = B.in_y(T)[0] * 1e6
    assert len(rows) >= 8
    assert np.all(np.abs(got - b) < 2.5 + 0.04 * np.abs(b))


def test_forms_in_y_and_in_T_agree() -> None:
    C = orbey_vera_c(370.0, 42.5e5, 0.152)
    T = np.array([250.0, 370.0, 800.0])
    value, first, second = C.in_y(T)
    v, v_T, v_TT = C.in_T(T)
    np.testing.assert_allclose(value, v, rtol=1e-12)
    np.testing.assert_allclose(first, -T * v_T, rtol=1e-12)
    np.testing.assert_allclose(second, T * T * v_TT + 2 * T * v_T, rtol=1e-11)


def test_gas_branch_ends_at_the_spinodal() -> None:
    B = Coefficient(300.0, ((-1e-4, 0.0),))
    gas = VirialGas(B, None, rho_c=1e5)
    T = np.full(3, 300.0)
    top = gas.R * 300.0 / (4 * 1e-4)  # RT ρ(1 + Bρ) is greatest at ρ = −1/(2B)
    v = gas.volume_roots(T, np.array([0.5, 0.999, 1.001]) * top)[1]
    # the lesser root of ρ + Bρ² = p/(RT): closed form
    want = 2e-4 / (1 - np.sqrt(1 - np.array([0.5, 0.999])))
    np.testing.assert_allclose(v[:2], want, rtol=1e-9)
    assert np.isnan(v[2])


def test_propane_state_of_a_worked_example() -> None:
    """Propane at 400 K, 20 bar (the state of Smith, Van Ness & Abbott, 6th ed. (2001), example 7.4).

    Their correlation, B0 = 0.083 − 0.422/Tr^1.6 and B1 = 0.139 − 0.172/Tr^4.2, is written out here for comparison; the
    two correlations of B differ by a few per cent.
    """
    m = build_model(read_card("propane"), "virial", virial={"B": tsonopoulos_b(369.8, 42.48e5, 0.152), "C": None})
    v = m.residual.volume_roots(np.array([400.0]), np.array([20e5]))[1]
    Tr = 400.0 / 369.8
    B = m.R * 369.8 / 42.48e5 * (0.083 - 0.422 / Tr**1.6 + 0.152 * (0.139 - 0.172 / Tr**4.2))
    rho = 1.0 / v[0]
    assert m.R * 400.0 * rho * (1.0 + B * rho) == pytest.approx(20e5, rel=5e-3)
