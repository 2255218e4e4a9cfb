"""The datum moves the zero of u, h and s and nothing else."""

import pytest
from solving import failed_checks, solve

LEGS = (
    "name: a, path: adiabatic, to: {p: 12 bar}, efficiency: 0.8",
    "name: b, path: isobaric, to: {subcooling: 4 K}",
    "name: c, path: throttling, to: {p: {same_as: start}}",
)
DATUMS = ("triple-liquid", "boiling-liquid", "liquid-0C")


def run(datum, equation="peng-robinson"):
    fluid = f"substance: r-134a, equation: {equation}, datum: {datum}"
    return solve(fluid, "T: 290 K, p: 3 bar", *LEGS)


@pytest.fixture(scope="module")
def plain():
    return run("ideal-gas-298")


@pytest.mark.parametrize("datum", DATUMS)
def test_heat_work_and_differences_do_not_depend_on_it(datum, plain):
    moved = run(datum)
    for name, leg in plain.legs.items():
        other = moved.legs[name]
        for key in ("heat", "work", "entropy_generated"):
            assert other[key] == pytest.approx(leg[key], rel=1e-9, abs=1e-6)
        for key in ("T", "p", "v", "u", "h", "s"):
            size = abs(plain.states["start"][key]) + abs(moved.states["start"][key])
            assert other.delta[key] == pytest.approx(leg.delta[key], rel=1e-9, abs=1e-10 * size)
    for name, state in plain.states.items():
        for key in ("T", "p", "v", "cp", "cv", "sound_speed", "exergy"):
            assert moved.states[name][key] == pytest.approx(state[key], rel=1e-8, nan_ok=True)
        shift = moved.states[name].s - state.s
        assert shift == pytest.approx(moved.states["start"].s - plain.states["start"].s, rel=1e-9)
    assert failed_checks(moved) == []


ZEROS = {
    # contract of the datum: the state at which u or h, and s, have these values
    "triple-liquid": ("T: 169.85 K, x: 0", {"u": 0.0, "s": 0.0}),
    "boiling-liquid": ("p: 1.01325 bar, x: 0", {"h": 0.0, "s": 0.0}),
    "liquid-0C": ("T: 273.15 K, x: 0", {"h": 200e3, "s": 1e3}),
}


@pytest.mark.parametrize("datum", ZEROS)
def test_where_the_zero_is(datum):
    start, values = ZEROS[datum]
    fluid = f"substance: r-134a, equation: peng-robinson, datum: {datum}"
    solution = solve(fluid, start, "name: a, path: isobaric, to: {x: 0.5}")
    for key, value in values.items():
        assert solution.states["start"][key] == pytest.approx(value, rel=1e-9, abs=1e-3)


def test_zero_of_the_ideal_gas():
    """h = s = 0 for the ideal gas at 298.15 K and 1 bar."""
    solution = solve(
        "substance: r-134a, equation: ideal-gas", "T: 298.15 K, p: 1 bar", "name: a, path: isobaric, to: {T: 300 K}"
    )
    assert solution.states["start"].h == pytest.approx(0.0, abs=1e-9)
    assert solution.states["start"].s == pytest.approx(0.0, abs=1e-9)
