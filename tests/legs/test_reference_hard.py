"""Legs on reference equations that are hard on the numbers: next to critical points, in rough equations, over kinks.

Each is held to another library at its ends, and its own error to what is true.
"""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from library import Library
from solving import failed_checks, solve

from pathcalc.equations.build import build_model
from pathcalc.equations.properties import thermal
from pathcalc.legs.integration.differentials import isochoric_heat_capacity
from pathcalc.substances import read_card


def solved(substance: str, start: str, leg: str, boundary: str = "closed") -> Any:
    solution = solve(f"substance: {substance}, equation: reference", start, f"name: a, {leg}", boundary=boundary)
    assert failed_checks(solution) == []
    maxwell = solution.legs["a"].maxwell
    assert maxwell.closure < 1e-10 or maxwell.closure < maxwell.error < 1e-7
    return solution


def changes_as(lib: Library, solution: Any, near: float = 1e-9) -> None:
    """The changes of s and h by the library's equation at the ends that were found."""
    (leg,) = solution.path.legs
    a, b = (lib.at_our(place.points) for place in (leg.inlet, leg.end))
    assert solution.legs["a"].delta.s == pytest.approx(b.s - a.s, abs=near * lib.R)
    assert solution.legs["a"].delta.h == pytest.approx(b.h - a.h, abs=near * lib.R * b.T)


@pytest.mark.parametrize(
    ("start", "leg"),
    [
        ("T: 289.15 K, p: 54 bar", "path: isochoric, to: {T: 302.5 K}"),
        ("T: 289.15 K, p: 54 bar", "path: isochoric, to: {T: 313.15 K}"),
        ("T: 313.15 K, p: 165 bar", "path: isothermal, to: {p: 70 bar}"),
        ("T: 313.15 K, p: 100 bar", "path: isobaric, to: {T: 300 K}"),
        ("T: 313.15 K, p: 165 bar", "path: polytropic, exponent: 0.856, to: {p: 143 bar}"),
        ("T: 305 K, p: 80 bar", "path: adiabatic, to: {p: 60 bar}"),
    ],
)
def test_carbon_dioxide_about_its_critical_point(start: str, leg: str) -> None:
    """A cylinder in the sun, a gas cooler: the heat capacity has its peak where these pass."""
    changes_as(Library("carbon-dioxide"), solved("carbon-dioxide", start, leg))


def test_water_from_very_high_to_supercritical_pressure() -> None:
    leg = "path: throttling, to: {p: 500 bar}"
    changes_as(Library("water"), solved("water", "T: 660 K, p: 3000 bar", leg, "flow"))


@pytest.mark.parametrize("substance", ["carbon-dioxide", "water", "methanol", "sulfur-hexafluoride", "R-22", "ammonia"])
def test_error_of_the_heat_capacity_next_to_the_critical_point(substance: str) -> None:
    """c_v by its integral over the density against the closed form: the error bounds the miss and is small itself.

    Rounding of the closed form counts: 1e-11 of R (terms that cancel).
    """
    m = build_model(read_card(substance), "reference")
    T = m.T_c * (1.0 + np.array([1e-4, 1e-3, 0.01, 0.03, 0.1]))[:, None] + np.zeros(9)
    v = m.v_c / np.linspace(0.4, 2.4, 9) + np.zeros((5, 1))
    value, error = isochoric_heat_capacity(m, T, v)
    miss = np.abs(value - thermal(m, T, v).cv)
    assert (miss <= error + 1e-11 * m.R).all()
    assert (error < 1e-6 * m.R).all()


@pytest.mark.parametrize("T", [135.0, 130.0, 120.0])
def test_vapour_to_cold_liquid_at_low_pressure(T: float) -> None:
    """R-22: its terms are a thousand times their sum, so that the pressure of the cold liquid is rough."""
    solution = solved("R-22", "p: 9429.192 Pa, superheat: 0.01 K", f"path: isobaric, to: {{T: {T} K}}")
    assert [piece["phase"] for piece in solution.pieces("a")] == ["vapour", "two-phase", "liquid"]
    assert solution.states["a"].x != solution.states["a"].x


def test_rounding_of_a_rough_equation_is_no_failed_check() -> None:
    """R-22 once more, next to its critical point, where entropies scatter by 1e-13 R."""
    solved("R-22", "T: 369.6872 K, rho: 674.2913 kg/m3", "path: isothermal, to: {v: {ratio: 1.887289}}")


def test_kink_of_the_ideal_gas_heat_capacity() -> None:
    """R-152a: the polynomial ends at 500 K; the curve passes that twice, once hardly."""
    leg = "path: polytropic, to: {p: {ratio: 9.318337}, T: {ratio: 1.090517}}"
    solution = solved("R-152a", "T: 394.1825 K, p: 4036332.0 Pa", leg, "flow")
    (solved_leg,) = solution.path.legs
    miss = abs(float((solved_leg.integrals["ds"] - (solved_leg.end.s - solved_leg.inlet.s))[0]))
    assert miss < 1e-11 * solution.path.model.R * 10.0


@pytest.mark.parametrize("ratio", [0.98, 1.03])
def test_methanol_through_the_dome_beside_its_critical_point(ratio: float) -> None:
    """Its saturated volumes there miss equal Gibbs energy by more than rounding: the error must say so."""
    m = build_model(read_card("methanol"), "reference")
    start = f"T: {0.97 * m.T_c!r} K, rho: {ratio * m.M / m.v_c!r} kg/m3"
    solution = solved("methanol", start, f"path: isochoric, to: {{T: {1.02 * m.T_c!r} K}}")
    maxwell = solution.legs["a"].maxwell
    assert maxwell.closure <= maxwell.error < 1e-7


def test_dry_after_a_bad_turbine() -> None:
    """R-134a: a reversible step from saturated vapour gets wet, one of low polytropic efficiency does not."""
    leg = "path: adiabatic, to: {p: {ratio: 0.5522}}, polytropic_efficiency: 0.4711"
    solution = solved("R-134a", "T: 234.9516 K, x: 1", leg, "flow")
    assert [piece["phase"] for piece in solution.pieces("a")] == ["vapour"]
    lib = Library("r-134a")
    changes_as(lib, solution)
    reversible = lib.of(p=solution.states["a"].p, s=lib.of(T=234.9516, x=1.0).s)
    assert reversible.x < 1.0


@pytest.mark.parametrize(
    ("start", "target"),
    [
        ("T: 400 K, p: 12 bar", "T: 340 K"),
        ("T: 330 K, x: 0.4", "v: {ratio: 2}"),
        ("T: 320 K, p: 30 bar", "work: -1 kJ/kg"),
    ],
)
def test_polytropic_efficiency_to_other_targets(start: str, target: str) -> None:
    """The end found by its temperature, volume or work is that of the pressure there, and is met."""
    leg = "path: adiabatic, to: {{{}}}, polytropic_efficiency: 0.7"
    by_target = solved("R-134a", start, leg.format(target), "flow")
    end = by_target.states["a"]
    by_pressure = solved("R-134a", start, leg.format(f"p: {end.p!r} Pa"), "flow").states["a"]
    assert [by_pressure[key] for key in "Tvh"] == pytest.approx([end[key] for key in "Tvh"], rel=1e-9)
    wanted = {"T": (end["T"], 340.0), "v": (end.v, 2.0 * by_target.states["start"].v)}
    got, goal = wanted.get(target[0], (by_target.legs["a"].work, -1000.0))
    assert got == pytest.approx(goal, rel=1e-9)


def test_thin_vapour_over_cold_toluene_keeps_its_exergy_balance() -> None:
    """At 1 Pa the work on the surroundings is 1e4 times the exergy: rounding of it is no failed check."""
    solved("toluene", "T: 200 K, x: 0.9", "path: saturation, to: {T: 190 K}")
