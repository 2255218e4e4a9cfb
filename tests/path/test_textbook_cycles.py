"""Printed cycles of air as an ideal gas with variable heat capacity.

Inputs and answers: shared/reference/textbook_examples.yaml (CB: Cengel & Boles, 5th ed., 2006). The book reads
tables of air (heat capacities of older data, figures interpolated): 0.1 % of T, p and work is allowed, and
one unit of the last printed digit of the efficiencies.
"""

import pytest
from solving import example, failed_checks, solve

AIR = "substance: air, equation: ideal-gas"


@pytest.fixture(scope="module")
def otto():
    return solve(
        AIR,
        "T: 290 K, p: 100 kPa",
        "name: 2, path: adiabatic, to: {v: {ratio: 0.125}}",
        "name: 3, path: isochoric, to: {heat: 800 kJ/kg}",
        "name: 4, path: adiabatic, to: {v: {same_as: start}}",
        "name: 1, path: isochoric, to: {T: {same_as: start}}",
        boundary="closed",
        more="cycle: true\n",
    )


def test_otto_states(otto):
    answer = example("CB-9.2")["answer"]
    for name in ("2", "3", "4"):
        assert otto.states[name]["T"] == pytest.approx(answer[f"T{name}_K"], rel=1e-3)
    assert otto.states["3"].p / 1e6 == pytest.approx(answer["p3_MPa"], rel=1e-3)


def test_otto_work_and_efficiency(otto):
    answer = example("CB-9.2")["answer"]
    work = -sum(leg.work for leg in otto.legs.values())
    assert work / 1e3 == pytest.approx(answer["net_work_kJ_per_kg"], rel=1e-3)
    assert otto.cycle.thermal_efficiency == pytest.approx(answer["efficiency"], abs=1e-3)
    swept = otto.states["start"].v - otto.states["2"].v
    assert work / swept / 1e3 == pytest.approx(answer["MEP_kPa"], rel=1e-3)
    assert failed_checks(otto) == []


def brayton(compressor="", turbine=""):
    return solve(
        AIR,
        "T: 300 K, p: 100 kPa",
        f"name: 2, path: adiabatic, to: {{p: {{ratio: 8}}}}{compressor}",
        "name: 3, path: isobaric, to: {T: 1300 K}",
        f"name: 4, path: adiabatic, to: {{p: {{same_as: start}}}}{turbine}",
        "name: 1, path: isobaric, to: {T: {same_as: start}}",
        more="cycle: true\n",
    )


def test_ideal_brayton():
    answer = example("CB-9.5-9.6")["answer"]["ideal"]
    solution = brayton()
    assert solution.states["2"]["T"] == pytest.approx(answer["T2_K"], abs=0.5)
    assert solution.states["4"]["T"] == pytest.approx(answer["T4_K"], abs=0.5)
    assert solution.cycle.thermal_efficiency == pytest.approx(answer["efficiency"], abs=1e-3)
    assert -solution.legs["2"].work / solution.legs["4"].work == pytest.approx(answer["back_work_ratio"], abs=1e-3)
    assert failed_checks(solution) == []


def test_brayton_with_efficiencies():
    answer = example("CB-9.5-9.6")["answer"]["real"]
    solution = brayton(", efficiency: 0.80", ", efficiency: 0.85")
    assert solution.states["4"]["T"] == pytest.approx(answer["T4_K"], abs=0.5)
    assert solution.cycle.thermal_efficiency == pytest.approx(answer["efficiency"], abs=1e-3)
    assert -solution.legs["2"].work / solution.legs["4"].work == pytest.approx(answer["back_work_ratio"], abs=1e-3)
    assert failed_checks(solution) == []
    assert solution.legs["2"].entropy_generated > 0.0
    assert solution.legs["4"].entropy_generated > 0.0


def test_cold_side_of_a_reversed_brayton_cycle():
    """The same ideal cycle run backwards: its coefficients of performance are 1/eta and 1/eta - 1."""
    forward = brayton().cycle.thermal_efficiency
    solution = solve(
        AIR,
        "T: 300 K, p: 100 kPa",
        "name: 4, path: isobaric, to: {T: 770.3238822358556 K}",
        "name: 3, path: adiabatic, to: {p: {ratio: 8}}",
        "name: 2, path: isobaric, to: {T: 539.7982112774388 K}",
        "name: 1, path: adiabatic, to: {p: {same_as: start}}",
        more="cycle: true\n",
    )
    assert solution.cycle.cop_heating == pytest.approx(1.0 / forward, rel=1e-9)
    assert solution.cycle.cop_cooling == pytest.approx(1.0 / forward - 1.0, rel=1e-9)
    assert solution.cycle.thermal_efficiency != solution.cycle.thermal_efficiency
