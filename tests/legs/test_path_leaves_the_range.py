"""A leg whose two ends are states but whose way between them is not: refused, never integrated wrongly."""

import pytest
from solving import solve

from pathcalc.errors import NoSolutionError


def right_or_refused(*args, **words):
    """A solution whose two routes agree to 1e-9, or an honest refusal."""
    try:
        solution = solve(*args, **words)
    except NoSolutionError as error:
        trouble = error.trouble
    else:
        trouble = None
    if trouble is not None:
        assert trouble.at == "a"
        return
    maxwell = solution.legs["a"].maxwell
    assert maxwell.closure <= maxwell.error + 1e-9


def test_polytrope_that_dips_below_the_triple_point():
    """From wet CO2 at 227 K to dry at 250 K and half the pressure: p v^n passes below 216.6 K in between."""
    right_or_refused(
        "substance: carbon-dioxide, equation: peng-robinson",
        "T: 227.17 K, x: 0.3",
        "name: a, path: polytropic, to: {p: {ratio: 0.4793}, T: {ratio: 1.1}}",
    )


def test_isentrope_of_a_virial_gas_past_its_own_saturation():
    right_or_refused(
        "substance: heptane, equation: virial",
        "T: 371.22379399353633 K, p: 314986.4922637684 Pa",
        "name: a, path: adiabatic, to: {p: {ratio: 2.458972493184994}}",
    )


@pytest.mark.parametrize("ratio", [0.2, 0.25, 0.3])
def test_polytropic_turbine_from_supercritical_into_the_dome(ratio):
    """Close by the critical point: T/T_c 1.18, p/p_c 3.2 down to a quality of 0.6."""
    right_or_refused(
        "substance: ammonia, equation: soave",
        "T: 477.72 K, p: 365.07 bar",
        f"name: a, path: adiabatic, to: {{p: {{ratio: {ratio}}}}}, polytropic_efficiency: 0.7",
    )


def test_polytropic_turbine_that_ends_just_inside_the_dome():
    right_or_refused(
        "substance: helium, equation: soave",
        "T: 3.9021575 K, p: 80482.558 Pa",
        "name: a, path: adiabatic, to: {p: {ratio: 0.92235164}}, polytropic_efficiency: 0.7",
    )


@pytest.mark.parametrize("ratio", [0.3, 0.5])
def test_polytropic_turbine_of_dilute_vapour_into_the_dome(ratio):
    right_or_refused(
        "substance: ammonia, equation: soave",
        "T: 350 K, p: 30 bar",
        f"name: a, path: adiabatic, to: {{p: {{ratio: {ratio}}}}}, polytropic_efficiency: 0.7",
    )


@pytest.mark.parametrize(
    ("fluid", "start", "leg"),
    [
        (
            "substance: water, equation: peng-robinson",
            "T: 640.8190467412487 K, x: 0.5",
            "path: adiabatic, to: {p: {ratio: 3.7823151224270877}}",
        ),
        (
            "substance: heptane, equation: van-der-waals",
            "T: 537.4606274404051 K, x: 1",
            "path: adiabatic, to: {p: {ratio: 0.35333705693216105}}, polytropic_efficiency: 0.7",
        ),
    ],
)
def test_self_checks_allow_for_the_rounding_of_saturation_cuts(fluid, start, leg):
    """Near the critical point a cut carries more rounding than the check allows: no fault, but exit code 1."""
    assert all(row["passed"] for row in solve(fluid, start, f"name: a, {leg}").checks)
