"""Leg kinds with a van der Waals fluid of constant c_v, against closed forms written beside them.

p = R T/(v - b) - a/v^2; u = c_v T - a/v; s = c_v ln T + R ln(v - b) (common textbook results, for example
Koretsky, 2nd ed., chapter 5). Constants: the equation's own a = 27 R^2 T_c^2/(64 p_c), b = R T_c/(8 p_c).
"""

from math import log

import pytest
from scipy.integrate import quad
from scipy.optimize import brentq
from solving import R, failed_checks, solve, write_card

T_C, P_C = 300.0, 4.8e6
A = 27.0 * (R * T_C) ** 2 / (64.0 * P_C)
B = R * T_C / (8.0 * P_C)
CV = 3.0 * R
T1, V1 = 450.0, 4.0e-4


def p(T, v):
    return R * T / (v - B) - A / v**2


def u(T, v):
    return CV * T - A / v


def h(T, v):
    return u(T, v) + p(T, v) * v


def s(T, v):
    return CV * log(T) + R * log(v - B)


def T_of_s(entropy, v):
    from math import exp

    return exp((entropy - R * log(v - B)) / CV)


@pytest.fixture
def run(tmp_path):
    """Function that solves one leg: end (T, v), leg row and molar mass."""
    card = write_card(tmp_path, M=0.03, T_c=T_C, p_c=P_C, cp_over_R="[4.0]")

    def solved(leg, boundary="closed"):
        solution = solve(
            f"{card}, equation: van-der-waals",
            f"T: {T1} K, v: {V1} m3/mol",
            f"name: a, {leg}",
            boundary=boundary,
            root=tmp_path,
        )
        assert failed_checks(solution) == []
        return solution

    return solved


def check(solution, T, v, work, generated=0.0):
    """End state, closed-form differences, and the exchange that goes with ``work`` (J/mol)."""
    end, leg, M = solution.states["a"], solution.legs["a"], solution.path.model.M
    scale = R * T1
    assert end["T"] == pytest.approx(T, rel=1e-10)
    assert end.v * M == pytest.approx(v, rel=1e-10)
    assert end.p == pytest.approx(p(T, v), rel=1e-9)
    assert leg.delta.u * M == pytest.approx(u(T, v) - u(T1, V1), rel=1e-10, abs=1e-10 * scale)
    assert leg.delta.h * M == pytest.approx(h(T, v) - h(T1, V1), rel=1e-10, abs=1e-10 * scale)
    assert leg.delta.s * M == pytest.approx(s(T, v) - s(T1, V1), rel=1e-10, abs=1e-10 * R)
    energy = h if solution.path.setting.flow else u
    heat = energy(T, v) - energy(T1, V1) - work
    assert leg.work * M == pytest.approx(work, rel=1e-10, abs=1e-10 * scale)
    assert leg.heat * M == pytest.approx(heat, rel=1e-10, abs=1e-10 * scale)
    assert leg.entropy_generated * M == pytest.approx(generated, rel=1e-9, abs=1e-10 * R)


@pytest.mark.parametrize("ratio", [0.5, 3.0, 50.0])
def test_isothermal_closed(run, ratio):
    """w = -R T ln((v2-b)/(v1-b)) - a (1/v2 - 1/v1)."""
    v = ratio * V1
    work = -R * T1 * log((v - B) / (V1 - B)) - A * (1.0 / v - 1.0 / V1)
    check(run(f"path: isothermal, to: {{v: {{ratio: {ratio}}}}}"), T1, v, work)


@pytest.mark.parametrize("ratio", [0.5, 3.0])
def test_isothermal_flow(run, ratio):
    """The integral of v dp: d(pv) less the integral of p dv."""
    v = ratio * V1
    closed = -R * T1 * log((v - B) / (V1 - B)) - A * (1.0 / v - 1.0 / V1)
    work = closed + p(T1, v) * v - p(T1, V1) * V1
    check(run(f"path: isothermal, to: {{v: {{ratio: {ratio}}}}}", "flow"), T1, v, work)


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("ratio", [0.6, 2.5])
def test_isobaric(run, boundary, ratio):
    """T2 = (p + a/v2^2)(v2 - b)/R; w = -p (v2 - v1), 0 in flow."""
    v, p1 = ratio * V1, p(T1, V1)
    T = (p1 + A / v**2) * (v - B) / R
    work = 0.0 if boundary == "flow" else -p1 * (v - V1)
    check(run(f"path: isobaric, to: {{v: {{ratio: {ratio}}}}}", boundary), T, v, work)


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("T", [380.0, 700.0])
def test_isochoric(run, boundary, T):
    """q = c_v dT; shaft work in flow v (p2 - p1)."""
    work = V1 * (p(T, V1) - p(T1, V1)) if boundary == "flow" else 0.0
    check(run(f"path: isochoric, to: {{T: {T} K}}", boundary), T, V1, work)


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("ratio", [0.5, 4.0])
def test_reversible_adiabatic(run, boundary, ratio):
    """T (v - b)^(R/cv) stays."""
    v = ratio * V1
    T = T1 * ((V1 - B) / (v - B)) ** (R / CV)
    energy = h if boundary == "flow" else u
    work = energy(T, v) - energy(T1, V1)
    check(run(f"path: adiabatic, to: {{v: {{ratio: {ratio}}}}}", boundary), T, v, work)


@pytest.mark.parametrize("efficiency", [0.6, 0.85])
@pytest.mark.parametrize("ratio", [0.4, 3.0])
def test_adiabatic_flow_with_efficiency(run, efficiency, ratio):
    """End at the ideal leg's pressure, found here from the closed forms by bisection."""
    v_ideal = V1 * (0.45 if ratio > 1.0 else 2.0)
    T_ideal = T_of_s(s(T1, V1), v_ideal)
    p2 = p(T_ideal, v_ideal)
    ideal = h(T_ideal, v_ideal) - h(T1, V1)
    work = ideal / efficiency if ideal > 0.0 else ideal * efficiency

    def miss(v):
        T = (p2 + A / v**2) * (v - B) / R
        return h(T, v) - h(T1, V1) - work

    v = brentq(miss, 0.9 * v_ideal, 2.0 * v_ideal, xtol=1e-18, rtol=1e-14)
    T = (p2 + A / v**2) * (v - B) / R
    solution = run(f"path: adiabatic, to: {{p: {p2!r} Pa}}, efficiency: {efficiency}", "flow")
    check(solution, T, v, work, generated=s(T, v) - s(T1, V1))


def test_throttling(run):
    """h stays; the outlet is found here from the closed forms by bisection."""
    p2 = 0.2 * p(T1, V1)

    def T_at(v):
        return (p2 + A / v**2) * (v - B) / R

    v = brentq(lambda v: h(T_at(v), v) - h(T1, V1), 3.0 * V1, 8.0 * V1, xtol=1e-18, rtol=1e-14)
    T = T_at(v)
    assert T < T1 - 10.0
    solution = run(f"path: throttling, to: {{p: {p2!r} Pa}}", "flow")
    check(solution, T, v, 0.0, generated=s(T, v) - s(T1, V1))


@pytest.mark.parametrize("ratio", [2.0, 30.0])
def test_free_expansion(run, ratio):
    """T2 - T1 = -(a/cv)(1/v1 - 1/v2)."""
    v = ratio * V1
    T = T1 - A / CV * (1.0 / V1 - 1.0 / v)
    solution = run(f"path: free-expansion, to: {{v: {{ratio: {ratio}}}}}")
    check(solution, T, v, 0.0, generated=s(T, v) - s(T1, V1))


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("n", [0.6, 1.0, 1.3, 2.2])
def test_polytropic(run, boundary, n):
    """w = (p2 v2 - p1 v1)/(n - 1), or -p1 v1 ln(v2/v1) at n = 1; n times that in flow."""
    v, p1 = 1.7 * V1, p(T1, V1)
    p2 = p1 * (V1 / v) ** n
    T = (p2 + A / v**2) * (v - B) / R
    work = -p1 * V1 * log(v / V1) if n == 1.0 else (p2 * v - p1 * V1) / (n - 1.0)
    work *= n if boundary == "flow" else 1.0
    check(run(f"path: polytropic, exponent: {n}, to: {{v: {{ratio: 1.7}}}}", boundary), T, v, work)


@pytest.mark.parametrize("against", [0.0005, 0.5])
def test_isothermal_against_a_pressure(run, against):
    """w = -p_ext (v2 - v1), q = du - w."""
    v, outer = 3.0 * V1, against * p(T1, 3.0 * V1)
    work = -outer * (v - V1)
    heat = u(T1, v) - u(T1, V1) - work
    solution = run(f"path: isothermal, to: {{v: {{ratio: 3}}}}, against: {outer!r} Pa")
    check(solution, T1, v, work, generated=s(T1, v) - s(T1, V1) - heat / T1)


def test_adiabatic_against_a_pressure(run):
    """c_v (T2 - T1) = a (1/v2 - 1/v1) - p_ext (v2 - v1)."""
    v, outer = 3.0 * V1, 0.3 * p(T1, V1)
    T = T1 + (A * (1.0 / v - 1.0 / V1) - outer * (v - V1)) / CV
    solution = run(f"path: adiabatic, to: {{v: {{ratio: 3}}}}, against: {outer!r} Pa")
    check(solution, T, v, -outer * (v - V1), generated=s(T, v) - s(T1, V1))


def test_workless_with_drop(run):
    """q = dh, p linear in h; entropy generated ds less the integral of dh/T, here by scipy's quadrature."""
    T2, p2 = 520.0, 0.9 * p(T1, V1)
    v2 = brentq(lambda v: p(T2, v) - p2, V1, 3.0 * V1, xtol=1e-18, rtol=1e-14)
    h1, h2 = h(T1, V1), h(T2, v2)

    def one_over_T(fraction):
        pressure, enthalpy = p(T1, V1) * (1.0 - 0.1 * fraction), h1 + fraction * (h2 - h1)

        def T_at(v):
            return (pressure + A / v**2) * (v - B) / R

        v = brentq(lambda v: h(T_at(v), v) - enthalpy, 0.8 * V1, 2.0 * V1, xtol=1e-18, rtol=1e-14)
        return (h2 - h1) / T_at(v)

    with_heat, _ = quad(one_over_T, 0.0, 1.0, epsabs=1e-9, epsrel=1e-9)
    generated = s(T2, v2) - s(T1, V1) - with_heat
    assert generated > 0.5
    solution = run(f"path: workless, to: {{T: {T2} K, p: {p2!r} Pa}}", "flow")
    check(solution, T2, v2, 0.0, generated=generated)
