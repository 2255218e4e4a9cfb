"""Every leg kind with an ideal gas of constant heat capacity, against the formula written beside it.

pv = RT and du = c_v dT are exact, so the tolerance is that of rounding: 1e-11. Formulas: common practice of
textbooks, for example SVA, 6th ed. (2001), section 3.3.
"""

from math import exp, log
from types import SimpleNamespace

import pytest
from solving import R, failed_checks, solve

CP = 3.5 * R
CV = 2.5 * R
GAMMA = 1.4
T1, P1 = 320.0, 2e5
V1 = R * T1 / P1
FLUID = f"substance: nitrogen, equation: ideal-gas, heat_capacity: {CP!r} J/(mol K)"
AMBIENT = 298.15


def run(leg: str, boundary: str) -> SimpleNamespace:
    """End state and exchange of one leg, molar."""
    solution = solve(FLUID, f"T: {T1} K, p: {P1} Pa", f"name: a, {leg}", boundary=boundary)
    M, end, row = solution.path.model.M, solution.states["a"], solution.legs["a"]
    assert failed_checks(solution) == []
    return SimpleNamespace(
        T=end.T,
        p=end.p,
        v=end.v * M,
        work=row.work * M,
        heat=row.heat * M,
        ds=row.delta.s * M,
        du=row.delta.u * M,
        dh=row.delta.h * M,
        da=row.delta.a * M,
        dg=row.delta.g * M,
        generated=row.entropy_generated * M,
        destroyed=row.exergy_destroyed * M,
    )


def near(value: float, scale: float = 0.0) -> object:
    """Equal but for rounding; ``scale`` is the size of what a difference is made of."""
    return pytest.approx(value, rel=1e-11, abs=max(1e-11 * scale, 1e-30))


def check(got: SimpleNamespace, T: float, p: float, work: float, heat: float, generated: float = 0.0) -> None:
    """State and exchange, and the differences of the state functions that follow from T and p."""
    ds = CP * log(T / T1) - R * log(p / P1)
    assert near(got.T) == T
    assert p == near(got.p)
    assert got.v == near(R * T / p)
    assert got.du == near(CV * (T - T1), CV * T1)
    assert got.dh == near(CP * (T - T1), CP * T1)
    assert got.ds == near(ds, R)
    assert got.work == near(work, R * T1)
    assert got.heat == near(heat, R * T1)
    assert got.generated == near(generated, R)
    assert got.destroyed == near(AMBIENT * generated, R * T1)


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("ratio", [0.1, 0.7, 3.0, 40.0])
def test_isothermal(boundary, ratio):
    """w = R T ln(p2/p1) for a closed mass and for a flow; dA = dG = w."""
    got = run(f"path: isothermal, to: {{p: {{ratio: {ratio}}}}}", boundary)
    work = R * T1 * log(ratio)
    check(got, T1, P1 * ratio, work, -work)
    assert got.da == near(work, R * T1)
    assert got.dg == near(work, R * T1)


@pytest.mark.parametrize(("ratio", "factor"), [(3.0, 1.0 / 0.8), (0.2, 0.8)])
def test_isothermal_flow_with_efficiency(ratio, factor):
    """The machine takes w/eta, or gives w eta; the rest of the balance is heat at T."""
    got = run(f"path: isothermal, to: {{p: {{ratio: {ratio}}}}}, efficiency: 0.8", "flow")
    work = R * T1 * log(ratio) * factor
    check(got, T1, P1 * ratio, work, -work, generated=work / T1 - R * log(ratio))


def test_isothermal_against_a_pressure():
    """w = -p_ext (v2 - v1), q = -w; entropy generated R ln(v2/v1) - q/T."""
    got = run("path: isothermal, to: {v: {ratio: 4}}, against: 0.4 bar", "closed")
    work = -0.4e5 * 3.0 * V1
    check(got, T1, P1 / 4.0, work, -work, generated=R * log(4.0) + work / T1)


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("T2", [250.0, 500.0])
def test_isobaric(boundary, T2):
    """q = c_p (T2 - T1); w = -R (T2 - T1) closed, 0 in flow."""
    got = run(f"path: isobaric, to: {{T: {T2} K}}", boundary)
    work = 0.0 if boundary == "flow" else -R * (T2 - T1)
    check(got, T2, P1, work, CP * (T2 - T1))


@pytest.mark.parametrize("boundary", ["flow", "closed"])
def test_isobaric_from_a_reservoir(boundary):
    """Heat from a body at 600 K: entropy generated ds - q/600 K."""
    got = run("path: isobaric, to: {T: 500 K}, reservoir: 600 K", boundary)
    heat = CP * 180.0
    work = 0.0 if boundary == "flow" else -R * 180.0
    check(got, 500.0, P1, work, heat, generated=CP * log(500.0 / T1) - heat / 600.0)


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("p_ratio", [0.6, 2.5])
def test_isochoric(boundary, p_ratio):
    """q = c_v dT closed; in flow w = v dp and q = dh - v dp, the same heat."""
    got = run(f"path: isochoric, to: {{p: {{ratio: {p_ratio}}}}}", boundary)
    T2 = T1 * p_ratio
    work = V1 * (P1 * p_ratio - P1) if boundary == "flow" else 0.0
    check(got, T2, P1 * p_ratio, work, CV * (T2 - T1))


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("ratio", [0.05, 8.0])
def test_reversible_adiabatic(boundary, ratio):
    """T2 = T1 (p2/p1)^(R/cp); w = c_p dT in flow, c_v dT closed."""
    got = run(f"path: adiabatic, to: {{p: {{ratio: {ratio}}}}}", boundary)
    T2 = T1 * ratio ** (R / CP)
    check(got, T2, P1 * ratio, (CP if boundary == "flow" else CV) * (T2 - T1), 0.0)


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("ratio", [0.2, 6.0])
def test_adiabatic_with_efficiency(boundary, ratio):
    """T2 - T1 = (T2s - T1)/eta in compression and times eta in expansion, to the same pressure."""
    got = run(f"path: adiabatic, to: {{p: {{ratio: {ratio}}}}}, efficiency: 0.75", boundary)
    ideal = T1 * ratio ** (R / CP) - T1
    T2 = T1 + (ideal / 0.75 if ratio > 1.0 else ideal * 0.75)
    work = (CP if boundary == "flow" else CV) * (T2 - T1)
    check(got, T2, P1 * ratio, work, 0.0, generated=CP * log(T2 / T1) - R * log(ratio))


@pytest.mark.parametrize(("ratio", "exponent"), [(7.0, 1.0 / 0.82), (0.1, 0.82)])
def test_adiabatic_with_polytropic_efficiency(ratio, exponent):
    """T2 = T1 (p2/p1)^(R/(cp eta)) in compression, ^(R eta/cp) in expansion."""
    got = run(f"path: adiabatic, to: {{p: {{ratio: {ratio}}}}}, polytropic_efficiency: 0.82", "flow")
    T2 = T1 * ratio ** (R / CP * exponent)
    check(got, T2, P1 * ratio, CP * (T2 - T1), 0.0, generated=CP * log(T2 / T1) - R * log(ratio))


@pytest.mark.parametrize("ratio", [0.25, 3.0])
def test_adiabatic_against_a_pressure(ratio):
    """c_v (T2 - T1) = -p2 (v2 - v1), p2 = p_ext: T2 = (c_v T1 + p2 v1)/c_p."""
    got = run(f"path: adiabatic, to: {{p: {P1 * ratio!r} Pa}}, against: {P1 * ratio!r} Pa", "closed")
    T2 = (CV * T1 + P1 * ratio * V1) / CP
    check(got, T2, P1 * ratio, CV * (T2 - T1), 0.0, generated=CP * log(T2 / T1) - R * log(ratio))


def test_throttling():
    """T stays; entropy generated R ln(p1/p2)."""
    got = run("path: throttling, to: {p: {ratio: 0.05}}", "flow")
    check(got, T1, P1 * 0.05, 0.0, 0.0, generated=R * log(20.0))


def test_free_expansion():
    """T stays; entropy generated R ln(v2/v1)."""
    got = run("path: free-expansion, to: {v: {ratio: 6}}", "closed")
    check(got, T1, P1 / 6.0, 0.0, 0.0, generated=R * log(6.0))


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("n", [-0.5, 0.5, 1.2, GAMMA, 2.0])
def test_polytropic(boundary, n):
    """p2 = p1 r^n with r = v1/v2; closed w = R (T2 - T1)/(n - 1), in flow n times that."""
    got = run(f"path: polytropic, exponent: {n}, to: {{v: {{ratio: 0.5}}}}", boundary)
    T2, p2 = T1 * 2.0 ** (n - 1.0), P1 * 2.0**n
    work = R * (T2 - T1) / (n - 1.0) * (n if boundary == "flow" else 1.0)
    energy = (CP if boundary == "flow" else CV) * (T2 - T1)
    check(got, T2, p2, work, energy - work)


@pytest.mark.parametrize("boundary", ["flow", "closed"])
def test_polytropic_with_exponent_one(boundary):
    """n = 1 is the isotherm."""
    got = run("path: polytropic, exponent: 1, to: {v: {ratio: 0.5}}", boundary)
    check(got, T1, 2.0 * P1, R * T1 * log(2.0), -R * T1 * log(2.0))


@pytest.mark.parametrize("boundary", ["flow", "closed"])
def test_polytropic_between_two_states(boundary):
    """n = ln(p2/p1)/ln(v1/v2) from two targets."""
    got = run("path: polytropic, to: {p: 8 bar, T: 400 K}", boundary)
    n = log(4.0) / log(4.0 * T1 / 400.0)
    work = R * (400.0 - T1) / (n - 1.0) * (n if boundary == "flow" else 1.0)
    energy = (CP if boundary == "flow" else CV) * (400.0 - T1)
    check(got, 400.0, 8e5, work, energy - work)


def test_workless_with_pressure_drop():
    """q = c_p dT; drop in proportion to the heat, so T = T1 + k (p1 - p) and the friction's share is

    the integral of v dp/T = R ln(p1/p2).
    """
    got = run("path: workless, to: {T: 450 K}, pressure_drop: 0.3 bar", "flow")
    check(got, 450.0, P1 - 0.3e5, 0.0, CP * (450.0 - T1), generated=R * log(2.0 / 1.7))


def test_workless_without_drop_and_with_reservoir():
    """Entropy generated is ds - q/T_b."""
    got = run("path: workless, to: {T: 290 K}, reservoir: 280 K", "flow")
    heat = CP * (290.0 - T1)
    check(got, 290.0, P1, 0.0, heat, generated=CP * log(290.0 / T1) - heat / 280.0)


def test_heat_target_inverts_the_formula():
    """T2 = T1 + q/c_p along an isobar, and + q/c_v along an isochore."""
    assert near(T1 + 2000.0 / CP) == run("path: isobaric, to: {heat: 2000 J/mol}", "flow").T
    assert near(T1 + 2000.0 / CV) == run("path: isochoric, to: {heat: 2000 J/mol}", "closed").T


def test_isothermal_to_an_entropy():
    """p2 = p1 exp(-ds/R)."""
    got = run("path: isothermal, to: {s: {rise: 5 J/(mol K)}}", "closed")
    assert got.p == near(P1 * exp(-5.0 / R))
