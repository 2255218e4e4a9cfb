"""Legs about the critical point: T/T_c from 0.99 to 1.01, supercritical isobars, critical isochores."""

import numpy as np
import pytest
from solving import failed_checks, solve

from pathcalc.substances import read_card

FLUIDS = [(s, e) for s in ("carbon-dioxide", "water", "r-134a") for e in ("soave", "peng-robinson")]
LOOSE = 1e-7
"""Relative: p_v tends to 0 at the critical point, so that volumes there carry few digits."""


def constants(substance):
    card = read_card(substance)
    return card.T_c.value, card.p_c.value


@pytest.mark.parametrize(("substance", "equation"), FLUIDS)
@pytest.mark.parametrize("T_r", [0.99, 0.999, 1.0001, 1.01])
def test_isotherms(substance, equation, T_r):
    """From gas to dense fluid: two-phase in between below T_c, and one piece of it above."""
    T_c, p_c = constants(substance)
    solution = solve(
        f"substance: {substance}, equation: {equation}",
        f"T: {T_c * T_r!r} K, p: {0.5 * p_c!r} Pa",
        "name: a, path: isothermal, to: {p: {ratio: 3}}",
    )
    phases = [piece["phase"] for piece in solution.pieces("a")]
    assert ("two-phase" in phases) is (T_r < 1.0)
    leg, (a, b) = solution.legs["a"], solution.states.values()
    assert leg.delta.s == pytest.approx(b.s - a.s, rel=LOOSE)
    assert leg.work == pytest.approx(b.g - a.g, rel=LOOSE)


@pytest.mark.parametrize(("substance", "equation"), FLUIDS)
@pytest.mark.parametrize("p_r", [1.005, 1.05, 1.5])
def test_isobars_above_the_critical_pressure(substance, equation, p_r):
    """From supercritical to liquid without a two-phase piece."""
    T_c, p_c = constants(substance)
    solution = solve(
        f"substance: {substance}, equation: {equation}",
        f"T: {1.2 * T_c!r} K, p: {p_r * p_c!r} Pa",
        "name: a, path: isobaric, to: {T: {ratio: 0.75}}",
    )
    assert "two-phase" not in [piece["phase"] for piece in solution.pieces("a")]
    leg, (a, b) = solution.legs["a"], solution.states.values()
    assert b.phase == "liquid"
    assert leg.heat == pytest.approx(b.h - a.h, rel=LOOSE)
    assert leg.delta.s == pytest.approx(b.s - a.s, rel=LOOSE)
    assert failed_checks(solution) == []


@pytest.mark.parametrize(("substance", "equation"), FLUIDS)
def test_isochores_about_the_critical_volume(substance, equation):
    """Out of the dome at 0.95 to 1.05 of the equation's v_c, warmed to 1.1 T_c.

    At v_c itself the way passes the critical point, where dp/dv is 0: right, or refused with a reason.
    """
    T_c, _ = constants(substance)
    probe = solve(
        f"substance: {substance}, equation: {equation}",
        f"T: {0.9 * T_c!r} K, x: 0.5",
        "name: a, path: isochoric, to: {T: {ratio: 1.01}}",
        boundary="closed",
    )
    v_c = probe.path.model.v_c / probe.path.model.M
    v = v_c * np.array([0.95, 0.99, 1.0, 1.01, 1.05])
    solution = solve(
        f"substance: {substance}, equation: {equation}",
        f"T: {0.9 * T_c!r} K, v: {v_c!r} m3/kg",
        f"name: a, path: isochoric, to: {{T: {1.1 * T_c!r} K}}",
        boundary="closed",
        lanes={"start.v": v},
    )
    ok = solution.ok
    assert ok[[0, 1, 3, 4]].all(), solution.reasons
    assert ok[2] or "integral-not-converged" in solution.reasons[2]
    leg, (a, b) = solution.legs["a"], solution.states.values()
    assert leg.delta.s[ok] == pytest.approx((b.s - a.s)[ok], rel=LOOSE)
    assert leg.heat[ok] == pytest.approx((b.u - a.u)[ok], rel=LOOSE)
    for lane in np.flatnonzero(ok):
        phases = [piece["phase"] for piece in solution.pieces("a", lane)]
        assert phases[0] == "two-phase"
        assert phases[-1] == "supercritical"


@pytest.mark.parametrize(("substance", "equation"), FLUIDS)
def test_many_legs_near_the_critical_point_are_right_or_refused(substance, equation):
    """400 adiabatic legs from T/T_c 0.99 to 1.01 and p/p_c 0.9 to 1.1 (seeded): no wrong numbers among them."""
    T_c, p_c = constants(substance)
    rng = np.random.default_rng(7)
    n = 400
    lanes = {
        "start.T": T_c * rng.uniform(0.99, 1.01, n),
        "start.p": p_c * rng.uniform(0.9, 1.1, n),
        "a.p": rng.uniform(0.7, 1.4, n),
    }
    solution = solve(
        f"substance: {substance}, equation: {equation}",
        f"T: {T_c} K, p: {p_c} Pa",
        "name: a, path: adiabatic, to: {p: {ratio: 1}}",
        lanes=lanes,
    )
    ok = solution.ok
    assert ok.mean() > 0.95
    leg, (a, b) = solution.legs["a"], solution.states.values()
    R_mass = 8.314 / solution.path.model.M
    assert np.abs(leg.delta.s)[ok].max() < LOOSE * R_mass
    assert np.abs(leg.delta.h - (b.h - a.h))[ok].max() < LOOSE * R_mass * T_c
    assert all(reason for reason, good in zip(solution.reasons, ok, strict=True) if not good)
