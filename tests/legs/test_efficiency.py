"""Isentropic and polytropic efficiency of adiabatic machines: limits and order."""

import numpy as np
import pytest
from solving import solve

PR = "substance: carbon-dioxide, equation: peng-robinson"
START = "T: 330 K, p: 8 bar"


def adiabatic(p, extra="", fluid=PR, start=START, lanes=None):
    return solve(fluid, start, f"name: a, path: adiabatic, to: {{p: {p}}}{extra}", lanes=lanes)


@pytest.mark.parametrize("p", ["50 bar", "2 bar"])
def test_efficiency_one_is_reversible(p):
    ideal = adiabatic(p).legs["a"]
    for extra in (", efficiency: 1", ", polytropic_efficiency: 1"):
        leg = adiabatic(p, extra).legs["a"]
        assert leg.work == pytest.approx(ideal.work, rel=1e-10)
        assert leg.entropy_generated == pytest.approx(0.0, abs=1e-7)


@pytest.mark.parametrize("p", ["50 bar", "2 bar"])
@pytest.mark.parametrize("kind", ["efficiency", "polytropic_efficiency"])
def test_a_better_machine_needs_less_work_and_makes_less_entropy(p, kind):
    """Work into the fluid falls with efficiency: less to compress, more given in expansion."""
    eta = np.linspace(0.3, 1.0, 29)
    solution = adiabatic(p, f", {kind}: 0.5", lanes={f"a.{kind}": eta})
    leg = solution.legs["a"]
    assert solution.ok.all()
    assert (np.diff(leg.work) < 0.0).all()
    assert (np.diff(leg.entropy_generated) < 0.0).all()
    assert (leg.entropy_generated > -1e-7).all()
    assert (np.diff(solution.states["a"].T) < 0.0).all()


@pytest.mark.parametrize("p", [16e5, 4e5])
def test_small_steps_of_isentropic_efficiency_tend_to_the_polytropic_one(p):
    """The difference from the polytropic machine falls as 1/n: Richardson's limit meets it.

    (Definition of the polytropic efficiency: common practice; the efficiency of every small step.)
    """
    exact = adiabatic(f"{p} Pa", ", polytropic_efficiency: 0.7").states["a"].T

    def stepped(n):
        ratio = (p / 8e5) ** (1.0 / n)
        text = f"repeat: {n}, legs: [{{name: s, path: adiabatic, to: {{p: {{ratio: {ratio!r}}}}}, efficiency: 0.7}}]"
        solution = solve(PR, START, text)
        return solution.states[list(solution.states)[-1]].T

    misses = [stepped(n) - exact for n in (4, 8, 16)]
    assert misses[0] / misses[1] == pytest.approx(2.0, rel=0.05)
    assert misses[1] / misses[2] == pytest.approx(2.0, rel=0.05)
    assert abs(2.0 * misses[2] - misses[1]) < 0.02 * abs(misses[2])


def test_isentropic_efficiency_of_a_polytropic_machine():
    """Compression: isentropic below polytropic efficiency (reheat); expansion: above it."""
    for p, below in (("80 bar", True), ("2 bar", False)):
        real = adiabatic(p, ", polytropic_efficiency: 0.8").legs["a"].work
        ideal = adiabatic(p).legs["a"].work
        isentropic = ideal / real if below else real / ideal
        assert (isentropic < 0.8) is below
        assert isentropic == pytest.approx(0.8, abs=0.08)


@pytest.mark.parametrize("target", ["T: 420 K", "work: 70 kJ/kg", "v: 0.025 m3/kg", "rho: 40 kg/m3"])
@pytest.mark.parametrize("kind", ["efficiency", "polytropic_efficiency"])
def test_other_targets_meet_the_same_machine(kind, target):
    """The end found for T, v, rho or work, given as a pressure, gives that target back."""
    there = solve(PR, START, f"name: a, path: adiabatic, to: {{{target}}}, {kind}: 0.8")
    p = there.states["a"].p
    again = adiabatic(f"{p!r} Pa", f", {kind}: 0.8")
    key = target.split(":")[0]
    wanted = there.legs["a"].work if key == "work" else there.states["a"][key]
    got = again.legs["a"].work if key == "work" else again.states["a"][key]
    assert got == pytest.approx(wanted, rel=1e-9)
    given = float(target.split()[1]) * (1e3 if key == "work" else 1.0)
    assert wanted == pytest.approx(given, rel=1e-9)
