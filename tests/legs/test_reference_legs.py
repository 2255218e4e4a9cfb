"""Every leg kind over the dome on reference equations, against another library: ends, heat, work, entropy, closure."""

from __future__ import annotations

import numpy as np
import pytest
from library import State
from reference_legs import ALL, CASES, by_library, library, solved, where
from scipy.integrate import solve_ivp
from solving import failed_checks, solve

from pathcalc.path.values import rounding_of, scales

NEAR = 2e-8
"""Of T, p and v, and of R T and R: the library's own (p, s) states are iterated to 1e-8 (found: below 1e-8)."""

SAME = 1e-12
"""The two libraries' values of one equation at one temperature and volume, of R T and R."""

CLOSED = 1e-12
"""Closure of every leg here (found: below 3e-13)."""


@pytest.mark.parametrize(("name", "substance"), ALL)
def test_leg(name: str, substance: str) -> None:
    """All of a leg in one test, which solves it once."""
    ends_as_the_library_says(name, substance)
    exchanges_what_the_library_says(name, substance)
    passes_its_phases_and_checks(name, substance)
    states_an_error_that_holds(name, substance)


def ends_as_the_library_says(name: str, substance: str) -> None:
    """The end from the leg's definition and the library alone, changes counted from the start."""
    solution, (a, result), R = solved(name, substance), by_library(name, substance), library(substance).R
    b, start, end = result.end, solution.states["start"], solution.states["a"]
    assert [end[key] for key in "Tpv"] == pytest.approx([b.T, b.p, b.v], rel=NEAR)
    assert end.s - start.s == pytest.approx(b.s - a.s, abs=NEAR * R)
    for key in "uh":
        assert end[key] - start[key] == pytest.approx(getattr(b, key) - getattr(a, key), abs=NEAR * R * b.T)
    assert (end.x == end.x) == (b.x == b.x)
    if b.x == b.x:
        assert end.x == pytest.approx(b.x, abs=NEAR)


def exchanges_what_the_library_says(name: str, substance: str) -> None:
    """Heat, work, entropy generated, and the changes of a and g."""
    solution, (a, result), R = solved(name, substance), by_library(name, substance), library(substance).R
    leg, b = solution.legs["a"], result.end
    assert leg.heat == pytest.approx(result.heat, abs=NEAR * R * b.T)
    assert leg.work == pytest.approx(result.work, abs=NEAR * R * b.T)
    assert leg.entropy_generated == pytest.approx(result.entropy_generated, abs=NEAR * R)
    assert leg.entropy_generated >= -SAME * R
    assert leg.exergy_destroyed == pytest.approx(298.15 * result.entropy_generated, abs=NEAR * R * 298.15)
    # the changes of g and a need the entropy itself, whose zero is the program's
    s_a = solution.states["start"].s
    s_b = s_a + (b.s - a.s)
    for key, energy in (("a", "u"), ("g", "h")):
        change = getattr(b, energy) - getattr(a, energy) - (b.T * s_b - a.T * s_a)
        assert leg.delta[key] == pytest.approx(change, abs=NEAR * R * b.T * max(1.0, abs(s_b) / R)), key


def passes_its_phases_and_checks(name: str, substance: str) -> None:
    """Phases in order, no self-check failed, closure at rounding."""
    solution = solved(name, substance)
    assert tuple(piece["phase"] for piece in solution.pieces("a")) == CASES[name].phases
    assert failed_checks(solution) == []
    maxwell = solution.legs["a"].maxwell
    assert maxwell.closure < CLOSED


def states_an_error_that_holds(name: str, substance: str) -> None:
    """Route 1 against the library's equation at the very temperatures and volumes of the ends."""
    solution, lib = solved(name, substance), library(substance)
    (leg,) = solution.path.legs
    a, b = (lib.at_our(place.points) for place in (leg.inlet, leg.end))
    scale = scales(solution.path, leg)[:, 0] / lib.M
    maxwell = solution.legs["a"].maxwell
    bound = maxwell.error + float(rounding_of(solution.path, leg)[0])
    assert bound < 1e-8
    for row, (key, unit) in enumerate((("s", lib.R), ("u", lib.R * b.T), ("h", lib.R * b.T))):
        miss = abs(maxwell[f"d{key}"] - (getattr(b, key) - getattr(a, key)))
        assert miss <= bound * scale[row] + SAME * unit, key


@pytest.mark.parametrize("substance", ["carbon-dioxide", "ammonia", "water"])
@pytest.mark.parametrize("start", ["superheated", "subcooled"])
def test_polytropic_efficiency_into_the_dome(start: str, substance: str) -> None:
    """dh = 0.8 v dp by an integrator of ordinary differential equations over the library's (h, p) states, both sides

    of where it meets the saturation line.
    """
    w = where(substance)
    lib, a, p = w.lib, w.start(start), 0.35 * w.p
    solution = solve(
        f"substance: {substance}, equation: reference",
        f"T: {a.T!r} K, p: {a.p!r} Pa",
        f"name: a, path: adiabatic, to: {{p: {p!r} Pa}}, polytropic_efficiency: 0.8",
    )
    edge = 1.0 if start == "superheated" else 0.0

    def slope(y: float, h: np.ndarray) -> list[float]:
        return [0.8 * np.exp(y) * lib.of(h=h[0], p=np.exp(y)).v]

    def at_edge(y: float, h: np.ndarray) -> float:
        return float(h[0] - lib.of(p=np.exp(y), x=edge).h)

    at_edge.terminal = True  # type: ignore[attr-defined]
    how = {"method": "DOP853", "rtol": 1e-10, "atol": 1e-5}
    dry = solve_ivp(slope, (np.log(a.p), np.log(p)), [a.h], events=at_edge, **how)
    assert dry.status == 1
    wet = solve_ivp(slope, (dry.t[-1], np.log(p)), [lib.of(p=np.exp(dry.t[-1]), x=edge).h], **how)
    h = float(wet.y[0, -1])
    end: State = lib.of(h=h, p=p)
    assert solution.states["a"].x == pytest.approx(end.x, abs=NEAR)
    assert solution.legs["a"].work == pytest.approx(h - a.h, abs=NEAR * lib.R * a.T)
    assert solution.legs["a"].entropy_generated == pytest.approx(end.s - a.s, abs=NEAR * lib.R)
    assert [piece["phase"] for piece in solution.pieces("a")][1:] == ["two-phase"]
    assert failed_checks(solution) == []
