"""Exergy of states and what legs destroy, against formulas written here."""

from math import log

import pytest
from solving import R, solve

T0, P0 = 290.0, 0.98e5
AMBIENT = f"surroundings: {{T: {T0} K, p: {P0} Pa}}\n"
CP = 29.1
IDEAL = f"substance: nitrogen, equation: ideal-gas, heat_capacity: {CP} J/(mol K)"


def test_exergy_of_an_ideal_gas_stream():
    """cp (T - T0) - T0 (cp ln T/T0 - R ln p/p0) (common textbook result)."""
    solution = solve(IDEAL, "T: 500 K, p: 7 bar", "name: a, path: throttling, to: {p: 2 bar}", more=AMBIENT)
    M = solution.path.model.M
    for name, T, p in (("start", 500.0, 7e5), ("a", 500.0, 2e5)):
        exact = CP * (T - T0) - T0 * (CP * log(T / T0) - R * log(p / P0))
        assert solution.states[name].exergy * M == pytest.approx(exact, rel=1e-11)
    lost = solution.states["start"].exergy - solution.states["a"].exergy
    assert solution.legs["a"].exergy_destroyed == pytest.approx(lost, rel=1e-10)
    assert lost * M == pytest.approx(R * T0 * log(3.5), rel=1e-11)


def test_exergy_of_a_closed_ideal_gas():
    """cv (T - T0) + p0 (v - v0) - T0 (s - s0)."""
    leg = "name: a, path: free-expansion, to: {v: {ratio: 2}}"
    solution = solve(IDEAL, "T: 500 K, p: 7 bar", leg, boundary="closed", more=AMBIENT)
    M = solution.path.model.M
    entropy = CP * log(500.0 / T0) - R * log(7e5 / P0)
    volume = R * 500.0 / 7e5 - R * T0 / P0
    exact = (CP - R) * (500.0 - T0) + P0 * volume - T0 * entropy
    assert solution.states["start"].exergy * M == pytest.approx(exact, rel=1e-11)


@pytest.mark.parametrize("boundary", ["flow", "closed"])
def test_the_dead_state_has_none(boundary):
    solution = solve(
        "substance: propane, equation: soave",
        f"T: {T0} K, p: {P0} Pa",
        "name: a, path: isobaric, to: {T: 330 K}",
        boundary=boundary,
        more=AMBIENT,
    )
    assert solution.states["start"].exergy == pytest.approx(0.0, abs=1e-6)
    assert solution.states["a"].exergy > 0.0


def test_heat_through_a_wall():
    """Heat from a reservoir at 600 K: destroyed T0 (ds - q/600 K)."""
    solution = solve(
        "substance: water, equation: peng-robinson",
        "T: 350 K, p: 2 bar",
        "name: a, path: isobaric, to: {superheat: 5 K}, reservoir: 600 K",
        more=AMBIENT,
    )
    leg = solution.legs["a"]
    generated = leg.delta.s - leg.heat / 600.0
    assert leg.entropy_generated == pytest.approx(generated, rel=1e-9)
    assert leg.exergy_destroyed == pytest.approx(T0 * generated, rel=1e-9)
    assert generated > 0.0


def test_heat_against_its_gradient_is_a_failed_check():
    """A reservoir colder than the fluid cannot heat it: the second-law check fails, and says where."""
    solution = solve(
        "substance: water, equation: peng-robinson",
        "T: 350 K, p: 2 bar",
        "name: a, path: isobaric, to: {superheat: 5 K}, reservoir: 300 K",
    )
    assert solution.legs["a"].entropy_generated < 0.0
    failed = {(row["name"], row["at"]) for row in solution.checks if not row["passed"]}
    assert failed == {("second law", "a"), ("heat flows to the colder body", "a")}
    assert not solution.passed
