"""Every leg kind into, through, out of and inside the two-phase region, cut into the right pieces."""

import numpy as np
import pytest
from dome_cases import ALL, EQUATIONS, LEGS, SUBSTANCES, saturation, solved
from solving import R, failed_checks, solve

pytestmark = pytest.mark.parametrize("equation", EQUATIONS)


@pytest.mark.parametrize(("name", "substance"), ALL)
def test_pieces(name, substance, equation):
    """Phases in order; pieces add up; the self-checks pass."""
    solution = solved(name, substance, equation)
    leg, pieces = solution.legs["a"], solution.pieces("a")
    assert tuple(piece["phase"] for piece in pieces) == LEGS[name][3]
    a, b = solution.states["start"], solution.states["a"]
    R_mass = R / solution.path.model.M
    assert sum(piece["ds"] for piece in pieces) == pytest.approx(leg.delta.s, abs=1e-12 * R_mass)
    assert sum(piece["dh"] for piece in pieces) == pytest.approx(leg.delta.h, abs=1e-12 * R_mass * a.T)
    assert leg.delta.s == pytest.approx(b.s - a.s, abs=1e-10 * R_mass)
    assert leg.delta.h == pytest.approx(b.h - a.h, abs=1e-10 * R_mass * a.T)
    assert failed_checks(solution) == []


@pytest.mark.parametrize("substance", SUBSTANCES)
def test_latent_heat_is_clapeyrons(substance, equation):
    """h_v - h_l = T (dp/dT) (v_v - v_l), with dp/dT by differences of saturation pressures.

    Central differences of fourth order over 1e-3 of T: their error is below 1e-9.
    """
    solution = solved("isobaric from one edge to the other", substance, equation)
    T, _ = saturation(substance, equation)
    step = 1e-3 * T
    at = T + step * np.array([-2.0, -1.0, 1.0, 2.0])
    lines = solve(
        f"substance: {substance}, equation: {equation}",
        f"T: {T!r} K, x: 0",
        "name: a, path: isothermal, to: {x: 1}",
        lanes={"start.T": at},
    )
    p = lines.states["start"].p
    slope = (p[0] - 8.0 * p[1] + 8.0 * p[2] - p[3]) / (12.0 * step)
    liquid, vapour = solution.states["start"], solution.states["a"]
    assert (liquid.x, vapour.x) == (0.0, 1.0)
    clapeyron = T * slope * (vapour.v - liquid.v)
    (piece,) = solution.pieces("a")
    assert piece["dh"] == pytest.approx(clapeyron, rel=1e-8)
    assert vapour.h - liquid.h == pytest.approx(clapeyron, rel=1e-8)
    assert piece["ds"] == pytest.approx(clapeyron / T, rel=1e-8)
    assert solution.legs["a"].heat == pytest.approx(T * (vapour.s - liquid.s), rel=1e-9)


@pytest.mark.parametrize("substance", SUBSTANCES)
def test_inside_the_dome_p_and_T_stay_together(substance, equation):
    """An isobar inside is an isotherm; quality weighs v, h and s."""
    solution = solved("isobaric inside", substance, equation)
    edges = solved("isobaric from one edge to the other", substance, equation)
    low, high = edges.states["start"], edges.states["a"]
    for name, x in (("start", 0.2), ("a", 0.7)):
        state = solution.states[name]
        assert state.phase == "two-phase"
        assert state.x == pytest.approx(x, rel=1e-12)
        assert state["T"] == pytest.approx(low.T, rel=1e-11)
        for key in ("v", "h", "s", "u"):
            assert state[key] == pytest.approx((1.0 - x) * low[key] + x * high[key], rel=1e-9)
    assert solution.legs["a"].heat == pytest.approx(0.5 * (high.h - low.h), rel=1e-9)


@pytest.mark.parametrize("substance", SUBSTANCES)
def test_evaporation_by_two_ways(substance, equation):
    """From compressed liquid to dry vapour along the isotherm, and along isobars either side: one ds."""
    isotherm = solved("isothermal through", substance, equation)
    T, p = saturation(substance, equation)
    way = solve(
        f"substance: {substance}, equation: {equation}",
        f"T: {T!r} K, p: {1.5 * p!r} Pa",
        "name: a, path: isobaric, to: {T: {ratio: 1.2}}",
        f"name: b, path: isothermal, to: {{p: {0.3 * p!r} Pa}}",
        "name: c, path: isobaric, to: {T: {same_as: start}}",
    )
    total = sum(leg.delta.s for leg in way.legs.values())
    assert total == pytest.approx(isotherm.legs["a"].delta.s, rel=1e-9)
    assert failed_checks(way) == []
