"""Valid cases that have no solution: each is refused with its place, its reason and a remedy."""

import pytest
from solving import solve

from pathcalc.errors import NoSolutionError

PROPANE = "substance: propane, equation: peng-robinson"
NITROGEN = "substance: nitrogen, equation: peng-robinson"
CO2 = "substance: carbon-dioxide, equation: soave"

# name: (fluid, start, legs, boundary, more, place, codes that fit)
CASES = {
    "throttling upwards": (
        PROPANE, "T: 340 K, p: 5 bar", ["name: a, path: throttling, to: {p: 8 bar}"], "flow", "", "a", {"wrong-side"}
    ),
    "throttling to a temperature it cannot reach": (
        PROPANE, "T: 340 K, p: 5 bar", ["name: a, path: throttling, to: {T: 300 K}"], "flow", "", "a",
        {"target-not-reached", "wrong-side"},
    ),
    "throttling to a temperature that only a higher pressure has": (
        PROPANE, "T: 340 K, p: 5 bar", ["name: a, path: throttling, to: {T: 344 K}"], "flow", "", "a",
        {"target-not-reached", "wrong-side"},
    ),
    "free expansion to a smaller volume": (
        NITROGEN, "T: 300 K, p: 5 bar", ["name: a, path: free-expansion, to: {v: {ratio: 0.5}}"], "closed", "", "a",
        {"wrong-side"},
    ),
    "free expansion to a higher pressure": (
        NITROGEN, "T: 300 K, p: 5 bar", ["name: a, path: free-expansion, to: {p: 9 bar}"], "closed", "", "a",
        {"wrong-side"},
    ),
    "start below the triple point": (
        CO2, "T: 200 K, p: 1 bar", ["name: a, path: isobaric, to: {T: 300 K}"], "flow", "", "start",
        {"below-triple-point"},
    ),
    "cooling below the triple point": (
        CO2, "T: 300 K, p: 1 bar", ["name: a, path: isobaric, to: {T: 210 K}"], "flow", "", "a",
        {"below-triple-point"},
    ),
    "expansion below the triple point": (
        CO2, "T: 300 K, p: 20 bar", ["name: a, path: adiabatic, to: {p: 1 bar}"], "flow", "", "a",
        {"below-triple-point", "target-not-reached"},
    ),
    "more heat taken out than there is": (
        NITROGEN, "T: 300 K, p: 5 bar", ["name: a, path: isobaric, to: {heat: -5000 kJ/kg}"], "flow", "", "a",
        {"below-triple-point", "target-not-reached"},
    ),
    "more work given than there is": (
        NITROGEN, "T: 300 K, p: 5 bar", ["name: a, path: adiabatic, to: {work: -900 kJ/kg}"], "flow", "", "a",
        {"below-triple-point", "target-not-reached"},
    ),
    "more work given by a turbine than there is": (
        NITROGEN, "T: 300 K, p: 5 bar", ["name: a, path: adiabatic, to: {work: -900 kJ/kg}, efficiency: 0.8"],
        "flow", "", "a", {"below-triple-point", "target-not-reached"},
    ),
    "more work given by a polytropic turbine than there is": (
        NITROGEN, "T: 300 K, p: 5 bar",
        ["name: a, path: adiabatic, to: {work: -900 kJ/kg}, polytropic_efficiency: 0.8"], "flow", "", "a",
        {"below-triple-point", "target-not-reached", "wrong-side"},
    ),
    "heating above the range": (
        PROPANE, "T: 340 K, p: 5 bar", ["name: a, path: isobaric, to: {T: 5000 K}"], "flow", "", "a", {"above-range"}
    ),
    "a drop larger than the pressure": (
        NITROGEN, "T: 300 K, p: 2 bar", ["name: a, path: workless, to: {T: 320 K}, pressure_drop: 3 bar"], "flow",
        "", "a", {"wrong-side"},
    ),
    "a pressure that rises without work": (
        NITROGEN, "T: 300 K, p: 2 bar", ["name: a, path: workless, to: {T: 320 K, p: 3 bar}"], "flow", "", "a",
        {"wrong-side"},
    ),
    "a relative drop larger than the pressure": (
        NITROGEN, "T: 300 K, p: 2 bar", ["name: a, path: adiabatic, to: {p: {drop: 3 bar}}"], "flow", "", "a",
        {"not-a-state", "wrong-side"},
    ),
    "against a pressure above that of an expanding fluid": (
        NITROGEN, "T: 300 K, p: 2 bar", ["name: a, path: adiabatic, to: {v: {ratio: 3}}, against: 6 bar"], "closed",
        "", "a", {"wrong-side", "target-not-reached", "below-triple-point"},
    ),
    "cycle not closed": (
        NITROGEN, "T: 300 K, p: 2 bar", ["name: a, path: isobaric, to: {T: 400 K}"], "flow", "cycle: true\n",
        "cycle", {"cycle-not-closed"},
    ),
    "saturated start by T and p": (
        PROPANE, "T: 300 K, p: 9.9731 bar", ["name: a, path: isobaric, to: {T: 330 K}"], "flow", "", "start",
        {"at-saturation"},
    ),
    "quality above the critical pressure": (
        PROPANE, "T: 340 K, p: 60 bar", ["name: a, path: isobaric, to: {x: 0.5}"], "flow", "", "a",
        {"above-critical"},
    ),
    "quality above the critical temperature": (
        PROPANE, "T: 400 K, p: 5 bar", ["name: a, path: isothermal, to: {x: 0.5}"], "flow", "", "a",
        {"above-critical"},
    ),
    "subcooling above the critical pressure": (
        PROPANE, "T: 340 K, p: 60 bar", ["name: a, path: isobaric, to: {subcooling: 5 K}"], "flow", "", "a",
        {"above-critical"},
    ),
    "denser than the equation knows": (
        NITROGEN, "T: 300 K, p: 5 bar", ["name: a, path: isothermal, to: {rho: 5000 kg/m3}"], "flow", "", "a",
        {"no-root", "target-not-reached"},
    ),
    "a polytrope that never gets there": (
        "substance: nitrogen, equation: ideal-gas", "T: 300 K, p: 5 bar",
        ["name: a, path: polytropic, exponent: 1, to: {T: 400 K}"], "closed", "", "a", {"wrong-side"},
    ),
    "a polytrope of constant pressure to another pressure": (
        NITROGEN, "T: 300 K, p: 5 bar", ["name: a, path: polytropic, exponent: 0, to: {p: 7 bar}"], "closed", "",
        "a", {"wrong-side"},
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", CASES)
def test_refused_with_place_reason_and_remedy(name):
    fluid, start, legs, boundary, more, place, codes = CASES[name]
    if name == "saturated start by T and p":
        line = solve(fluid, "T: 300 K, x: 0", "name: a, path: isothermal, to: {x: 1}")
        start = f"T: 300 K, p: {line.states['start'].p!r} Pa"
    with pytest.raises(NoSolutionError) as caught:
        solve(fluid, start, *legs, boundary=boundary, more=more)
    trouble = caught.value.trouble
    assert trouble.at == place
    assert trouble.code in codes
    assert len(trouble.text) > 20
    assert len(trouble.remedy) > 10
    assert caught.value.exit_code == 4
    assert "\n" not in str(caught.value)


@pytest.mark.parametrize(
    ("fluid", "start"),
    [
        ("substance: water, equation: peng-robinson", "p: 300 Pa, v: 0.02 m3/kg"),
        ("substance: water, equation: peng-robinson", "p: 300 Pa, v: 0.0012 m3/kg"),
        (CO2, "p: 4.8 bar, v: 0.00135 m3/kg"),
        ("substance: carbon-dioxide, equation: peng-robinson", "p: 4.8 bar, v: 0.00135 m3/kg"),
    ],
)
def test_pressure_and_volume_below_the_triple_point(fluid, start):
    """The pressure lies below that of the triple point (611.7 Pa; 5.18 bar): between ice and vapour, no liquid."""
    leg = f"name: a, path: isochoric, to: {{T: {350 if 'water' in fluid else 250} K}}"
    with pytest.raises(NoSolutionError) as caught:
        solve(fluid, start, leg, boundary="closed")
    assert caught.value.trouble.at == "start"


def test_polytrope_below_the_triple_point():
    """From CO2 at 220 K, x 0.01, along p v^1.2 to 4.66 bar."""
    with pytest.raises(NoSolutionError):
        solve(
            "substance: carbon-dioxide, equation: peng-robinson",
            "T: 220.08 K, x: 0.01",
            "name: a, path: polytropic, exponent: 1.2, to: {v: {ratio: 1.23}}",
            boundary="closed",
        )


def test_limit_on_a_quality_that_is_not_defined():
    """Outside the dome there is no quality: the limit counts as missed, and a warning says why."""
    limit = "limits:\n  - {quantity: a.x, max: 0.9}\n"
    solution = solve(PROPANE, "T: 340 K, p: 5 bar", "name: a, path: isobaric, to: {T: 350 K}", more=limit)
    (row,) = solution.limits
    assert row["value"] is None
    assert row["margin"] is None
    assert row["passed"] is False
    assert not solution.passed
    assert "limit-without-value" in [warning["code"] for warning in solution.warnings]


def test_a_cycle_that_misses_by_little_is_not_closed():
    """A part in a million of T is too much, a part in ten thousand million is not."""
    legs = ["name: a, path: isobaric, to: {T: 400 K}"]
    with pytest.raises(NoSolutionError, match="cycle-not-closed"):
        solve(
            NITROGEN, "T: 300 K, p: 2 bar", *legs, "name: b, path: isobaric, to: {T: 300.0003 K}",
            more="cycle: true\n",
        )  # fmt: skip
    closed = solve(
        NITROGEN, "T: 300 K, p: 2 bar", *legs, "name: b, path: isobaric, to: {T: 300.00000003 K}",
        more="cycle: true\n",
    )  # fmt: skip
    assert closed.cycle is not None
