"""Kinds of amount: mass, mole, normal volumes, the volume of a vessel."""

import pytest
from solving import R, failed_checks, solve

FLUID = "substance: nitrogen, equation: peng-robinson"
START = "T: 300 K, p: 50 bar"
LEG = "name: a, path: isothermal, to: {p: 10 bar}"
M = 0.02801348
"""kg/mol; the card's value is compared to it."""

FLOWS = {
    "2 kg/s": 2.0,
    "7200 kg/h": 2.0,
    "50 mol/s": 50.0 * M,
    "3.6 kmol/h": 1.0 * M,
    # ideal gas at 0 degC and 1.01325 bar (ISO 13443), 15 degC, and 60 degF and 14.696 psi
    "100 Nm3/h": 101325.0 * 100.0 / 3600.0 / (R * 273.15) * M,
    "100 Sm3/h": 101325.0 * 100.0 / 3600.0 / (R * 288.15) * M,
    "1000 scf/min": 14.696 * 6894.757293168 * 1000.0 * 0.3048**3 / 60.0 / (R * (60.0 + 459.67) / 1.8) * M,
}
MASSES = {
    "3 kg": 3.0,
    "10 mol": 10.0 * M,
    "2 kmol": 2000.0 * M,
    "5 Nm3": 101325.0 * 5.0 / (R * 273.15) * M,
}


@pytest.mark.parametrize("amount", FLOWS)
def test_flows(amount):
    solution = solve(FLUID, START, LEG, more=f"amount: {amount}\n")
    assert pytest.approx(M, rel=1e-6) == solution.path.model.M
    leg = solution.legs["a"]
    assert leg.amount == pytest.approx(FLOWS[amount], rel=1e-6)
    assert solution.totals.work == pytest.approx(leg.work * leg.amount, rel=1e-13)
    assert solution.to_dict()["amount"]["unit"] == "kg/s"


@pytest.mark.parametrize("amount", MASSES)
def test_masses(amount):
    solution = solve(FLUID, START, LEG, boundary="closed", more=f"amount: {amount}\n")
    leg = solution.legs["a"]
    assert leg.amount == pytest.approx(MASSES[amount], rel=1e-6)
    assert solution.totals.heat == pytest.approx(leg.heat * leg.amount, rel=1e-13)
    assert solution.to_dict()["amount"]["unit"] == "kg"


def test_vessel():
    """A vessel of 0.5 m3 holds its volume times the density of the start; heating it, the volume stays."""
    solution = solve(
        FLUID, START, "name: a, path: isochoric, to: {T: 400 K}", boundary="closed", more="amount: 0.5 m3\n"
    )
    start, end, leg = solution.states["start"], solution.states["a"], solution.legs["a"]
    assert leg.amount == pytest.approx(0.5 * start.rho, rel=1e-13)
    assert end.v * leg.amount == pytest.approx(0.5, rel=1e-12)
    assert solution.totals.heat == pytest.approx(0.5 * (end.u * end.rho - start.u * start.rho), rel=1e-10)
    assert failed_checks(solution) == []


def test_a_total_heat_fills_the_vessel_case():
    """200 kJ into a vessel of 100 L: u rises by 200 kJ/m."""
    solution = solve(
        FLUID,
        START,
        "name: a, path: isochoric, to: {heat: 200 kJ}",
        boundary="closed",
        more="amount: 100 L\n",
    )
    leg = solution.legs["a"]
    assert solution.totals.heat == pytest.approx(200e3, rel=1e-11)
    assert leg.delta.u == pytest.approx(200e3 / (0.1 * solution.states["start"].rho), rel=1e-11)


def test_motor_power_sets_the_discharge_pressure():
    """A total work in kW and a flow in normal cubic metres."""
    solution = solve(
        FLUID,
        "T: 300 K, p: 2 bar",
        "name: a, path: adiabatic, to: {work: 40 kW}, efficiency: 0.75",
        more="amount: 1000 Nm3/h\n",
    )
    assert solution.totals.work == pytest.approx(40e3, rel=1e-10)
    assert solution.states["a"].p > 2e5
    assert failed_checks(solution) == []
