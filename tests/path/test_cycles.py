"""Closed cycles of real fluids: nothing of state is left over, and the balances of the whole hold."""

import numpy as np
import pytest
from solving import failed_checks, solve

R_REFRIGERANT = "substance: r-134a, equation: peng-robinson"
CHILLER = (
    "name: compressor, path: adiabatic, to: {p: 10 bar}, efficiency: 0.75",
    "name: condenser, path: isobaric, to: {subcooling: 3 K}",
    "name: valve, path: throttling, to: {p: {same_as: start}}",
    "name: evaporator, path: isobaric, to: {superheat: 5 K}",
)
POWER = (
    "name: pump, path: adiabatic, to: {p: 60 bar}, efficiency: 0.8",
    "name: boiler, path: isobaric, to: {T: 700 K}",
    "name: turbine, path: adiabatic, to: {p: {same_as: start}}, efficiency: 0.85",
    "name: condenser, path: isobaric, to: {x: 0}",
)
CASES = {
    "chiller": (R_REFRIGERANT, "superheat: 5 K, p: 2 bar", CHILLER, "flow"),
    "steam power": ("substance: water, equation: soave", "x: 0, p: 0.5 bar", POWER, "flow"),
    "supercritical gas engine": (
        "substance: carbon-dioxide, equation: van-der-waals",
        "T: 320 K, p: 40 bar",
        (
            "name: a, path: adiabatic, to: {v: {ratio: 0.4}}",
            "name: b, path: isochoric, to: {T: 700 K}",
            "name: c, path: adiabatic, to: {v: {same_as: start}}",
            "name: d, path: isochoric, to: {T: {same_as: start}}",
        ),
        "closed",
    ),
    "two isotherms and two isentropes": (
        "substance: ammonia, equation: redlich-kwong",
        "T: 450 K, p: 20 bar",
        (
            "name: a, path: isothermal, to: {v: {ratio: 3}}",
            "name: b, path: adiabatic, to: {T: 400 K}",
            "name: c, path: isothermal, to: {s: {same_as: start}}",
            "name: d, path: adiabatic, to: {T: {same_as: start}}",
        ),
        "closed",
    ),
}


@pytest.fixture(scope="module", params=CASES)
def cycle(request):
    fluid, start, legs, boundary = CASES[request.param]
    return solve(
        fluid,
        start,
        *legs,
        boundary=boundary,
        more="cycle: true\namount: 1 kg\n".replace("1 kg", "1 kg/s" if boundary == "flow" else "1 kg"),
    )


def test_state_functions_come_back(cycle):
    start = cycle.states["start"]
    for key in ("u", "h", "s", "a", "g"):
        size = sum(abs(leg.delta[key]) for leg in cycle.legs.values())
        assert cycle.totals.delta[key] == pytest.approx(0.0, abs=1e-9 * size), key
    assert cycle.totals.delta.v == pytest.approx(0.0, abs=1e-9 * start.v)
    assert failed_checks(cycle) == []


def test_heat_and_work_cancel(cycle):
    size = sum(abs(leg.heat) for leg in cycle.legs.values())
    assert cycle.totals.heat + cycle.totals.work == pytest.approx(0.0, abs=1e-9 * size)


def test_what_is_lost_is_the_entropy_generated(cycle):
    """Exergy destroyed is T0 times the entropy generated, and neither is negative."""
    assert cycle.totals.entropy_generated >= -1e-7
    assert cycle.totals.exergy_destroyed == pytest.approx(298.15 * cycle.totals.entropy_generated, rel=1e-12)


def test_carnots_efficiency():
    """1 - T2/T1 between two isotherms, whatever the fluid (Carnot; common textbook result)."""
    fluid, start, legs, boundary = CASES["two isotherms and two isentropes"]
    for other in ("soave", "peng-robinson", "van-der-waals", "virial", "ideal-gas"):
        solution = solve(fluid.replace("redlich-kwong", other), start, *legs, boundary=boundary, more="cycle: true\n")
        assert solution.cycle.thermal_efficiency == pytest.approx(1.0 - 400.0 / 450.0, rel=1e-8)
        assert solution.cycle.cop_cooling != solution.cycle.cop_cooling


def test_chiller_performance():
    """Heat of the evaporator over the work, and one more for heating."""
    fluid, start, legs, boundary = CASES["chiller"]
    solution = solve(fluid, start, *legs, boundary=boundary, more="cycle: true\n")
    rows = solution.legs
    assert solution.cycle.cop_cooling == pytest.approx(rows["evaporator"].heat / rows["compressor"].work)
    assert solution.cycle.cop_heating == pytest.approx(solution.cycle.cop_cooling + 1.0, rel=1e-9)
    assert 2.0 < solution.cycle.cop_cooling < 6.0
    assert [p["phase"] for p in solution.pieces("condenser")] == ["vapour", "two-phase", "liquid"]


def test_a_cycle_over_lanes():
    fluid, start, legs, boundary = CASES["chiller"]
    p = np.linspace(8e5, 14e5, 7)
    solution = solve(fluid, start, *legs, boundary=boundary, more="cycle: true\n", lanes={"compressor.p": p})
    assert solution.ok.all()
    assert (np.diff(solution.cycle.cop_cooling) < 0.0).all()


def test_repeated_legs():
    """Three stages with coolers, by `repeat`: names numbered, the same numbers as written out."""
    stages = (
        "repeat: 3, legs: [{name: stage, path: adiabatic, to: {p: {ratio: 2}}, efficiency: 0.8}, "
        "{name: cooler, path: isobaric, to: {T: 300 K}}]"
    )
    fluid, start = "substance: nitrogen, equation: peng-robinson", "T: 300 K, p: 1 bar"
    repeated = solve(fluid, start, stages)
    written = solve(
        fluid,
        start,
        *(
            leg
            for n in (1, 2, 3)
            for leg in (
                f"name: s{n}, path: adiabatic, to: {{p: {{ratio: 2}}}}, efficiency: 0.8",
                f"name: c{n}, path: isobaric, to: {{T: 300 K}}",
            )
        ),
    )
    assert list(repeated.legs) == ["stage 1", "cooler 1", "stage 2", "cooler 2", "stage 3", "cooler 3"]
    for first, second in zip(repeated.legs.values(), written.legs.values(), strict=True):
        assert first.work == second.work
        assert first.heat == second.heat
