"""What every equation must fulfil: derivatives, two routes to p, Maxwell relations, the ideal-gas limit."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pathcalc.equations.build import build_model, equation_names
from pathcalc.equations.contract import Model
from pathcalc.equations.properties import full, helmholtz, thermal
from pathcalc.equations.virial import Coefficient
from pathcalc.substances import read_card

RNG = np.random.default_rng(7)


def states(m: Model, n: int = 60) -> tuple[np.ndarray, np.ndarray]:
    T = m.T_c * RNG.uniform(0.6, 2.0, n) if m.equation != "ideal-gas" else RNG.uniform(200.0, 800.0, n)
    floor = m.residual.v_min(T)
    return T, np.where(floor > 0.0, floor, 1e-5) * RNG.uniform(1.25, 40.0, n)


def slope(fun, x, h):
    """Central difference of fourth order."""
    return (8 * (fun(x + h) - fun(x - h)) - (fun(x + 2 * h) - fun(x - 2 * h))) / (12 * h)


def test_scaled_derivatives_are_those_of_d00(any_model: Model) -> None:
    m = any_model
    T, v = states(m)
    y, rho = 1.0 / T, 1.0 / v
    d = m.residual.reduced(T, rho)

    def r(name, y, rho):
        return getattr(m.residual.reduced(1.0 / y, rho), name)

    hy, hr = 1e-3 * y, 1e-3 * rho
    scale = 1.0 + np.abs(d.d00) + np.abs(d.d01) + np.abs(d.d02)
    for got, want in (
        (d.d10, y * slope(lambda q: r("d00", q, rho), y, hy)),
        (d.d01, rho * slope(lambda q: r("d00", y, q), rho, hr)),
        (d.d20, y * slope(lambda q: r("d10", q, rho), y, hy) - d.d10),
        (d.d02, rho * slope(lambda q: r("d01", y, q), rho, hr) - d.d01),
        (d.d11, y * slope(lambda q: r("d01", q, rho), y, hy)),
        (d.d11, rho * slope(lambda q: r("d10", y, q), rho, hr)),
    ):
        assert np.max(np.abs(got - want) / scale) < 1e-8


def test_explicit_pressure_agrees_with_the_fundamental_equation(any_model: Model) -> None:
    m = any_model
    T, v = states(m)
    t, e = thermal(m, T, v), m.residual.pressure(T, v)
    size = m.R * T / v * (1.0 + np.abs(m.residual.reduced(T, 1.0 / v).d02))
    assert np.max(np.abs(t.p - e.p) / size) < 1e-13
    assert np.max(np.abs(t.p_T - e.p_T) / size * T) < 1e-13
    assert np.max(np.abs(t.p_v - e.p_v) / size * v) < 1e-13
    h = 1e-3 * T
    p_TT = slope(lambda q: m.residual.pressure(q, v).p_T, T, h)
    assert np.max(np.abs(p_TT - e.p_TT) * T * T / size) < 2e-7
    np.testing.assert_allclose(m.residual.pressure_curvature(T, v), e.p_TT, rtol=1e-14)


def test_maxwell_relations(any_model: Model) -> None:
    m = any_model
    T, v = states(m)
    t = thermal(m, T, v)
    hT, hv = 1e-3 * T, 1e-3 * v
    scale = m.R / v * (1.0 + np.abs(m.residual.reduced(T, 1.0 / v).d02))
    s_v = slope(lambda q: thermal(m, T, q).s, v, hv)
    assert np.max(np.abs(s_v - t.p_T) / scale) < 1e-7
    u_v = slope(lambda q: thermal(m, T, q).u, v, hv)
    assert np.max(np.abs(u_v - (T * t.p_T - t.p)) / scale / T) < 1e-7
    s_T = slope(lambda q: thermal(m, q, v).s, T, hT)
    np.testing.assert_allclose(s_T * T, t.cv, rtol=1e-7)
    a_v = slope(lambda q: helmholtz(m, T, q).a, v, hv)
    assert np.max(np.abs(a_v + t.p) / scale / T) < 1e-7


def test_derived_coefficients_by_finite_differences(any_model: Model) -> None:
    m = any_model
    p = np.full(8, 4e5)
    T = np.linspace(330.0, 700.0, 8)

    def at(T, p):
        return np.nanmax(m.residual.volume_roots(T, p), axis=0)

    v = at(T, p)
    f = full(m, T, v, p)
    v_T = slope(lambda q: at(q, p), T, 1e-3 * T)
    v_p = slope(lambda q: at(T, q), p, 1e-3 * p)
    h_T = slope(lambda q: full(m, q, at(q, p), p).h, T, 1e-3 * T)
    h_p = slope(lambda q: full(m, T, at(T, q), q).h, p, 1e-3 * p)
    np.testing.assert_allclose(f.expansivity, v_T / v, rtol=1e-7)
    np.testing.assert_allclose(f.compressibility, -v_p / v, rtol=1e-7)
    np.testing.assert_allclose(f.cp, h_T, rtol=1e-7)
    np.testing.assert_allclose(f.joule_thomson, -h_p / h_T, rtol=1e-6, atol=1e-12)
    g = full(m, T, v, p)
    ideal = m.R * T * np.log(p / 1e5) + m.R * (m.ideal.h0_R(T) - T * m.ideal.s0_R(T))
    np.testing.assert_allclose(g.ln_phi, (g.g - ideal) / (m.R * T), atol=1e-11)
    dens = -slope(lambda q: full(m, T, q).p, v, 1e-4 * v) * v * v
    np.testing.assert_allclose(f.sound_speed**2, f.cp / f.cv * dens / m.M, rtol=1e-7)


def test_low_density_is_the_ideal_gas(any_model: Model) -> None:
    m = any_model
    T = np.array([300.0, 400.0, 600.0])
    for v in (1e9, 1e30, 1e140):
        f = full(m, T, np.full(3, v))
        np.testing.assert_allclose(f.Z, 1.0, atol=1e-8)
        np.testing.assert_allclose(f.cp - f.cv, m.R, rtol=1e-8)
        np.testing.assert_allclose(f.expansivity * T, 1.0, atol=1e-8)
        np.testing.assert_allclose(f.h, m.R * m.ideal.h0_R(T), rtol=1e-8, atol=1e-6)
        assert np.all(np.isfinite(f.joule_thomson))
    limit = [full(m, T, np.full(3, v)).joule_thomson for v in (1e3, 1e30)]
    np.testing.assert_allclose(limit[0], limit[1], rtol=1e-5)
    if m.equation == "ideal-gas":
        assert np.all(limit[1] == 0.0)


def test_joule_thomson_from_a_virial_equation() -> None:
    """P. Ahuja, Chemical Engineering Thermodynamics (2009), example 7.27: 0.938341 K/bar.

    Z = 1 + Bp/(RT) there; at zero pressure μ = (T B' − B)/cp0 for both forms. B(T) is built to have the printed
    value and slope at 300 K.
    """
    B, slope_B = -50e-6, 1e-6
    series = Coefficient(300.0, ((B + 300.0 * slope_B, 0.0), (-300.0 * slope_B, 1.0)))
    m = build_model(read_card("argon"), "virial", virial={"B": series, "C": None}, heat_capacity=35.78)
    mu = full(m, np.array([300.0]), np.array([1e6])).joule_thomson[0]
    assert mu == pytest.approx((300.0 * slope_B - B) / 35.78, rel=1e-8)
    # the printed value includes the pressure effect on cp (5 atm, d2B/dT2), under 5 %
    assert mu * 1e5 == pytest.approx(0.938341, rel=0.05)


@given(
    equation=st.sampled_from(equation_names()),
    T=st.floats(90.0, 640.0),
    log_v=st.floats(-8.0, 3.0),
)
@settings(max_examples=60, deadline=None)
def test_cv_and_energy_identities(equation: str, T: float, log_v: float) -> None:
    m = build_model(read_card("propane"), equation)
    v = float(m.residual.v_min(np.array([T]))[0]) * 1.05 + np.exp(log_v)
    f = full(m, np.array([T]), np.array([v]))
    scale = abs(f.h[0]) + abs(f.u[0]) + abs(T * f.s[0]) + m.R * T * (1 + abs(f.Z[0]))
    assert abs(f.h[0] - f.u[0] - f.p[0] * v) < 1e-12 * scale
    assert abs(f.g[0] - f.a[0] - f.p[0] * v) < 1e-12 * scale
    assert abs(f.a[0] - f.u[0] + T * f.s[0]) < 1e-12 * scale
