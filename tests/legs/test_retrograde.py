"""A dry fluid (heptane): its saturated vapour leans, so that compression wets it and expansion dries it."""

import pytest
from solving import failed_checks, solve

FLUID = "substance: heptane, equation: peng-robinson"


def phases(solution, leg="a"):
    return [piece["phase"] for piece in solution.pieces(leg)]


def test_compression_of_saturated_vapour_wets_it():
    solution = solve(FLUID, "T: 400 K, x: 1", "name: a, path: adiabatic, to: {p: {ratio: 3}}")
    assert phases(solution) == ["two-phase"]
    assert 0.5 < solution.states["a"].x < 1.0
    assert failed_checks(solution) == []


def test_expansion_of_wet_vapour_dries_it():
    solution = solve(FLUID, "T: 440 K, x: 0.97", "name: a, path: adiabatic, to: {p: {ratio: 0.2}}")
    assert phases(solution) == ["two-phase", "vapour"]
    assert solution.states["a"].phase == "vapour"
    assert failed_checks(solution) == []


def test_an_isentrope_in_and_out_again():
    """Superheated vapour compressed through a wet stretch to a supercritical state."""
    expanded = solve(FLUID, "T: 500 K, x: 1", "name: a, path: adiabatic, to: {p: {ratio: 0.2}}")
    low = expanded.states["a"]
    solution = solve(
        FLUID,
        f"p: {low.p!r} Pa, s: {low.s + 1.0!r} J/(kg K)",
        "name: a, path: adiabatic, to: {p: 60 bar}",
    )
    assert phases(solution)[0] == "vapour"
    assert solution.states["a"].phase == "supercritical"
    leg = solution.legs["a"]
    assert leg.delta.s == pytest.approx(0.0, abs=1e-6)
    assert leg.work == pytest.approx(solution.states["a"].h - solution.states["start"].h, rel=1e-9)
