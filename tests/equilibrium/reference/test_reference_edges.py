"""Round trips at the edges of reference equations: melting line at the triple point, lines that turn, the critical
point, a mixture treated as one component, liquids whose pressure hardly shows in their energy.
"""

from __future__ import annotations

import numpy as np
import pytest
from substances import model

from pathcalc.equilibrium import reasons
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.saturation import saturation_at_p, saturation_at_T
from pathcalc.equilibrium.states import state_properties


@pytest.mark.parametrize("name", ["nitrogen", "water", "propane", "hexane"])
@pytest.mark.parametrize("key", ["h", "s", "u"])
def test_the_two_states_of_a_superheat_are_superheated(name: str, key: str) -> None:
    """h, s and u of vapour superheated by so much pass through a turning point along the saturation line."""
    m = model(name)
    T = m.T_limits[0] + np.linspace(0.2, 0.97, 25) * (m.T_c - m.T_limits[0])
    want = state_properties(m, flash(m, {"superheat": 2.0, "T": T}))
    got = flash(m, {"superheat": 2.0, key: getattr(want, key)})
    twice = got.reason == reasons.TWO_SOLUTIONS
    assert np.isin(got.reason, [0, reasons.TWO_SOLUTIONS]).all()
    assert twice.any() == ((key == "s") == (name == "hexane"))
    for T_told, p_told in ((got.T, got.p), (got.T_other, got.p_other)):
        told = twice & np.isfinite(T_told)
        np.testing.assert_allclose(T_told[told] - saturation_at_p(m, p_told[told]).T, 2.0, atol=1e-8)
        again = state_properties(m, flash(m, {"T": T_told[told], "p": p_told[told]}))
        np.testing.assert_allclose(getattr(again, key), getattr(want, key)[told], rtol=1e-9)


@pytest.mark.parametrize(("key", "size"), [("h", 1e-8), ("u", 1e-8), ("s", 1e-8)])
def test_compressed_liquid_air_has_one_state(key: str, size: float) -> None:
    """What lies between the dew and bubble lines is no second state."""
    m = model("air")
    T, p = np.array([63.3, 70.0, 90.0, 104.0, 122.0]), np.array([2e4, 6e7, 9e7, 2e6, 7e7])
    want = state_properties(m, flash(m, {"T": T, "p": p}))
    got = flash(m, {"T": T, key: getattr(want, key)})
    assert got.ok.all()
    assert np.isnan(got.x).all()
    np.testing.assert_allclose(got.v, want.v, rtol=size)


@pytest.mark.parametrize("name", ["water", "methanol", "heavy-water", "nitrogen"])
def test_liquid_where_melting_begins(name: str) -> None:
    """At the triple point there are only some mPa between saturation and melting, less than a volume tells."""
    m = model(name)
    T = np.array([m.T_limits[0]])
    p = m.residual.limits.melting_pressure(T) * (1.0 - 1e-9)
    want = state_properties(m, flash(m, {"T": T, "p": p}))
    assert want.points.ok.all()
    for pair in ("Tv", "Ts", "Th", "pv", "ph", "ps", "vh", "vs", "vu"):
        got = flash(m, {key: getattr(want, key) for key in pair})
        if got.reason[0] == reasons.TWO_SOLUTIONS:  # water has the volume at 8 °C again
            assert min(abs(got.T[0] / T[0] - 1.0), abs(got.T_other[0] / T[0] - 1.0)) < 1e-8
            continue
        assert got.ok.all(), (pair, got.reason)
        assert got.T[0] == pytest.approx(T[0], rel=1e-9)
        assert got.v[0] == pytest.approx(want.v[0], rel=1e-9)


def test_below_melting_that_begins_below_saturation() -> None:
    """The melting line of carbon dioxide (Span and Wagner, 1996) begins 14 Pa below the equation's saturation."""
    m = model("carbon-dioxide")
    T = np.array([m.T_limits[0]])
    p = m.residual.limits.melting_pressure(T)
    assert 0.0 < saturation_at_T(m, T).p[0] - p[0] < 20.0
    want = state_properties(m, flash(m, {"T": T, "p": p * (1.0 - 1e-9)}))
    got = flash(m, {"T": T, "h": want.h})
    assert got.ok.all()
    assert got.v[0] == pytest.approx(want.v[0], rel=1e-9)


@pytest.mark.parametrize(
    ("name", "T", "x", "keys"),
    [
        # s next to the lowest temperature, h and s some hundredths of a kelvin below the critical point
        ("helium", 2.2073998394802086, 0.31784707169287185, "s"),
        ("dimethyl-ether", 135.99311161863955, 0.38908922642006694, "s"),
        ("isopentane", 113.07646767036329, 0.3422257375955259, "s"),
        ("methanol", 513.3634399394412, 0.31370888654928963, "hsu"),
    ],
)
def test_lines_of_quality_that_turn_twice(name: str, T: float, x: float, keys: str) -> None:
    """More than one state of this quality has the value: it is said, and all that is told is true."""
    m = model(name)
    want = state_properties(m, flash(m, {"T": T, "x": x}))
    for key in keys:
        got = flash(m, {"x": x, key: getattr(want, key)})
        assert got.reason[0] == reasons.TWO_SOLUTIONS
        assert abs(got.T[0] / got.T_other[0] - 1.0) > 1e-7
        for told in (got.T, got.T_other):
            again = state_properties(m, flash(m, {"T": told, "x": x}))
            np.testing.assert_allclose(getattr(again, key), getattr(want, key), rtol=1e-11)


def test_cold_water_of_given_subcooling_and_volume() -> None:
    """Two states on either side of the densest one, both closer to freezing than a coarse search would see."""
    m = model("water")
    want = state_properties(m, flash(m, {"subcooling": 1.0, "T": 276.0}))
    got = flash(m, {"subcooling": 1.0, "v": want.v})
    assert got.reason[0] == reasons.TWO_SOLUTIONS
    assert sorted([got.T[0], got.T_other[0]])[0] == pytest.approx(276.0, abs=1e-4)
    again = state_properties(m, flash(m, {"T": got.T_other, "p": got.p_other}))
    np.testing.assert_allclose(again.v, want.v, rtol=1e-11)


@pytest.mark.parametrize(
    ("name", "T", "p"), [("1-butene", 128.7628006906667, 240.2229767515623), ("butane", 140.0, 9e2)]
)
def test_cold_liquids_by_entropy_and_energy(name: str, T: float, p: float) -> None:
    """u along an isentrope has its least value at p = 0: Newton's method comes near at half the distance a step."""
    m = model(name)
    want = state_properties(m, flash(m, {"T": T, "p": p}))
    got = state_properties(m, flash(m, {"s": want.s, "u": want.u}))
    np.testing.assert_allclose(got.v, want.v, rtol=3e-8)
    np.testing.assert_allclose(got.T, want.T, rtol=1e-7)
    assert got.p[0] == pytest.approx(p, rel=0.2)


@pytest.mark.parametrize("name", ["nitrogen", "water", "carbon-dioxide", "methanol"])
def test_the_critical_point_itself(name: str) -> None:
    """(T, p) has a state there; (T, v) and (p, v) have one or say that it is too near, never that it is too dense."""
    m = model(name)
    step = np.array([0.0, 1e-13, -1e-13, 1e-10, -1e-10, 1e-8, -1e-8])
    T, p = (a.ravel() for a in np.meshgrid(m.T_c * (1.0 + step), m.p_c * (1.0 + step)))
    at = state_properties(m, flash(m, {"T": T, "p": p}))
    assert at.points.ok.all()
    for key in ("v", "h", "s", "u", "cv", "cp", "sound_speed", "compressibility"):
        assert np.isfinite(getattr(at, key)).all()
    assert (at.cp > 0.0).all()
    T, v = (a.ravel() for a in np.meshgrid(m.T_c * (1.0 + step), m.v_c * (1.0 + step)))
    for first, given in (("T", T), ("p", m.p_c * T / m.T_c)):
        got = flash(m, {first: given, "v": v})
        assert set(got.reason.tolist()) <= {0, reasons.NEAR_CRITICAL}
        assert np.isnan(got.v[~got.ok]).all()
