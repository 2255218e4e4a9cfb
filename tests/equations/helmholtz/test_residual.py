"""What must hold for every built-in equation: limits, the critical point, one answer whatever the lanes."""

from __future__ import annotations

import numpy as np
import pytest
from fluids import NAMES, model, reference
from hypothesis import given, settings
from hypothesis import strategies as st

from pathcalc.equations.contract import Reduced
from pathcalc.equations.helmholtz.ancillary import melting_pressure, saturated
from pathcalc.equations.properties import full, thermal

ALL = ((0, 0), (0, 1), (0, 2), (0, 3), (1, 0), (1, 1), (1, 2), (2, 0), (2, 1))


def temperatures(name: str, n: int = 9) -> np.ndarray:
    card = reference(name)
    return np.linspace(card.valid.T_min, card.valid.T_max, n)


@pytest.mark.parametrize("name", NAMES)
def test_zero_density(name: str) -> None:
    """Nothing is left of the residual part (bells that stand without δ leave 1e-16 of methane's)."""
    residual, T = model(name).residual, temperatures(name)
    at_zero = residual.derivatives(T, np.zeros_like(T), ALL)
    assert np.max(np.abs(at_zero)) < (1e-12 if name in ("R-123", "R-152a") else 1e-15)
    assert np.array_equal(residual.derivatives(T, np.zeros_like(T), ((0, 1), (0, 2))), np.zeros((2, T.size)))
    thin = residual.derivatives(T, np.full_like(T, 1e-9), ((0, 1), (0, 2)))
    assert np.max(np.abs(thin)) < 1e-9


@pytest.mark.parametrize("name", NAMES)
def test_second_virial_coefficient(name: str) -> None:
    """B rises with temperature from below zero at T_c, and is positive where the range reaches that far."""
    m, T_c = model(name), reference(name).summit.T
    rho = 1e-6 * reference(name).summit.rho
    T = np.linspace(0.7 * T_c, min(1.5 * T_c, reference(name).limits.T_max), 20)
    B = m.residual.derivatives(T, np.full_like(T, rho), ((0, 1),))[0] / rho
    assert (np.diff(B) > 0.0).all()
    assert (B[1.3 * T_c > T] < 0.0).all()
    assert -3.0 < float(np.interp(T_c, T, B)) * reference(name).summit.rho < -1.0
    if reference(name).limits.T_max > 6.0 * T_c:
        warm = np.array([6.0 * T_c])
        assert m.residual.derivatives(warm, np.array([rho]), ((0, 1),))[0, 0] > 0.0


@pytest.mark.parametrize("name", NAMES)
def test_summit_is_the_critical_point_of_the_equation(name: str) -> None:
    card, m = reference(name), model(name)
    top = card.summit
    d01, d02, d03 = m.residual.derivatives(top.T, top.rho, ((0, 1), (0, 2), (0, 3)))
    assert abs(1.0 + 2.0 * d01 + d02) < 1e-6
    assert abs(2.0 * d01 + 4.0 * d02 + d03) < 2e-4
    assert top.p == pytest.approx(m.R * top.T * top.rho * float(1.0 + d01), rel=1e-9)
    allowed = {"air": 0.006, "heptane": 0.0025, "methanol": 0.002}.get(name, 2e-4)
    assert abs(top.T / card.critical.T - 1.0) < allowed
    assert m.T_c == top.T
    assert 1.0 / m.v_c == pytest.approx(top.rho)


@pytest.mark.parametrize("name", NAMES)
def test_one_pass_pressure_agrees_with_the_properties(name: str) -> None:
    m, card = model(name), reference(name)
    rng = np.random.default_rng(5)
    T = card.summit.T * rng.uniform(0.9, 1.4, 30)
    v = 1.0 / (card.summit.rho * rng.uniform(0.01, 2.2, 30))
    t, e = thermal(m, T, v), m.residual.pressure(T, v)
    size = m.R * T / v * (1.0 + np.abs(m.residual.reduced(T, 1.0 / v).d02))
    for key, unit in (("p", 1.0), ("p_T", T), ("p_v", v)):
        assert np.max(np.abs(getattr(t, key) - getattr(e, key)) * unit / size) < 1e-13
    assert np.array_equal(m.residual.pressure_curvature(T, v), e.p_TT)
    h = 2e-5 * T
    slope = (m.residual.pressure(T + h, v).p_T - m.residual.pressure(T - h, v).p_T) / (2.0 * h)
    curved = np.abs(e.p_TT) + 1e-2 * np.abs(e.p_T) / T
    if name not in ("water", "carbon-dioxide"):  # their third derivatives are too large near the critical point
        assert np.max(np.abs(slope - e.p_TT) / curved) < 1e-4


@pytest.mark.parametrize("name", ["water", "carbon-dioxide", "methanol", "R-125", "ammonia", "nitrogen"])
@settings(max_examples=15, deadline=None)
@given(seed=st.integers(0, 10_000), n=st.integers(1, 40))
def test_no_lane_depends_on_its_neighbours(name: str, seed: int, n: int) -> None:
    card, residual = reference(name), model(name).residual
    rng = np.random.default_rng(seed)
    T = card.summit.T * rng.uniform(0.6, 2.0, 3 * n)
    rho = card.summit.rho * rng.uniform(0.0, 3.0, 3 * n)
    many = residual.reduced(T, rho)
    few = residual.reduced(T[n : 2 * n], rho[n : 2 * n])
    one = residual.reduced(T[-1:], rho[-1:])
    for key in Reduced._fields:
        assert np.array_equal(getattr(many, key)[n : 2 * n], getattr(few, key))
        assert np.array_equal(getattr(many, key)[-1:], getattr(one, key))


@pytest.mark.parametrize("name", ["water", "carbon-dioxide"])
def test_at_the_critical_point_itself(name: str) -> None:
    """Finite everywhere; c_v rises without bound on the critical isochore, as the papers make it do."""
    m, top = model(name), reference(name).summit
    with np.errstate(divide="ignore"):  # (∂p/∂v)_T is zero there
        state = full(m, np.array([top.T]), np.array([1.0 / top.rho]))
    assert np.isfinite([state.p[0], state.u[0], state.s[0], state.cv[0]]).all()
    T = top.T * (1.0 + 10.0 ** np.arange(-12.0, -2.0))
    cv = full(m, T, np.full_like(T, 1.0 / top.rho)).cv
    assert (np.diff(cv) < 0.0).all()
    assert state.cv[0] > cv[0]


@pytest.mark.parametrize("name", NAMES)
def test_ancillary_equations_start_near_the_equation(name: str) -> None:
    """At 0.8 T_c the liquid and vapour densities give the ancillary pressure, roughly."""
    card, m = reference(name), model(name)
    T = np.array([0.8 * card.summit.T])
    key = "dew_pressure" if name == "air" else "vapour_pressure"
    p = saturated(card.ancillaries[key], T)[0]
    vapour = saturated(card.ancillaries["vapour_density"], T)
    liquid = saturated(card.ancillaries["liquid_density"], T)
    assert m.residual.pressure(T, 1.0 / vapour).p[0] == pytest.approx(p, rel=0.02)
    stiffness = -m.residual.pressure(T, 1.0 / liquid).p_v[0] / liquid[0]
    assert abs(m.residual.pressure(T, 1.0 / liquid).p[0] - p) < 0.03 * stiffness
    assert np.isnan(saturated(card.ancillaries[key], 1.1 * T / 0.8)).all()


def test_melting_line_of_water() -> None:
    """IAPWS R14-08(2011): 138.268 MPa for ice I at 260 K, 254.087 … for ice V, and nothing beyond."""
    parts = reference("water").melting
    T = np.array([260.0, 100.0, 2000.0])
    p = melting_pressure(parts, T)
    assert p[0] / 1e6 == pytest.approx(138.268, abs=1e-3)
    assert np.isnan(p[1:]).all()
