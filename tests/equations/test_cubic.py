"""Cubic equations: exact constants, printed worked examples, closed forms of the van der Waals gas."""

from __future__ import annotations

import math
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
import yaml

from pathcalc.equations.alpha import ConstantAlpha, RootAlpha, SoaveAlpha
from pathcalc.equations.build import build_model
from pathcalc.equations.contract import Model
from pathcalc.equations.cubic import (
    PENG_ROBINSON_FORM,
    REDLICH_KWONG_FORM,
    VAN_DER_WAALS_FORM,
    Form,
    TwoConstantCubic,
)
from pathcalc.equations.properties import full, thermal
from pathcalc.errors import UsageError
from pathcalc.substances import read_card

REFERENCE = Path(__file__).parents[2] / "shared" / "reference"


def example(key: str) -> dict[str, dict[str, float]]:
    text = (REFERENCE / "textbook_examples.yaml").read_text(encoding="utf-8")
    return next(e for e in yaml.safe_load(text)["examples"] if e["id"] == key)


def one(x: float) -> np.ndarray:
    return np.array([x])


@pytest.mark.parametrize(
    ("form", "z_c", "omega_a", "omega_b"),
    [
        # van der Waals 1873: 3/8, 27/64, 1/8. Redlich & Kwong 1949: 1/3, 0.4278, 0.0867; Soave 1972: 0.42747, 0.08664.
        (VAN_DER_WAALS_FORM, 0.375, 0.421875, 0.125),
        (REDLICH_KWONG_FORM, 1.0 / 3.0, 0.42747, 0.08664),
        # Peng & Robinson 1976, eqs. 7 to 9: 0.307, 0.45724, 0.07780
        (PENG_ROBINSON_FORM, 0.307, 0.45724, 0.07780),
    ],
)
def test_constants_round_to_the_published_ones(form: Form, z_c: float, omega_a: float, omega_b: float) -> None:
    assert form.z_c == pytest.approx(z_c, abs=5e-4)
    assert form.omega_a == pytest.approx(omega_a, abs=1.1e-5)  # Soave prints 0.42747 for 0.427480
    assert form.omega_b == pytest.approx(omega_b, abs=5.1e-6)


def test_pressure_is_flat_at_the_critical_point(cubic_model: Model) -> None:
    m = cubic_model
    h = 1e-4 * m.v_c
    v = m.v_c + h * np.arange(-2.0, 3.0)
    t = m.residual.pressure(np.full(5, m.T_c), v)
    assert t.p[2] == pytest.approx(m.p_c, rel=1e-13)
    assert abs(t.p_v[2]) * m.v_c / m.p_c < 1e-9
    assert abs(t.p_v[3] - t.p_v[1]) / (2 * h) * m.v_c**2 / m.p_c < 1e-4


@pytest.mark.parametrize(
    ("key", "equation", "tolerance"),
    [
        ("RAO-3.9-8.5", "redlich-kwong", 4e-4),
        ("RAO-3.15-8.6", "soave", 4e-4),
        ("RAO-3.16-8.7-10.3", "peng-robinson", 4e-4),
    ],
)
def test_octane_worked_examples(octane: Callable[[str], Model], key: str, equation: str, tolerance: float) -> None:
    """Printed answers of Y. V. C. Rao, Chemical Engineering Thermodynamics (1997), the examples named."""
    m, answer = octane(equation), example(key)["answer"]
    T, p = one(427.85), one(2.15e5)
    roots = m.residual.volume_roots(T, p)
    assert roots[1, 0] == pytest.approx(answer["v_vapour_m3_per_mol"], rel=tolerance)
    if "v_liquid_m3_per_mol" in answer:
        assert roots[0, 0] == pytest.approx(answer["v_liquid_m3_per_mol"], rel=4e-3)  # printed to three figures
    d = m.residual.reduced(T, 1.0 / roots[1])
    assert 1.0 + d.d01[0] == pytest.approx(answer["Z"], rel=tolerance)
    departure_h = m.R * T * (d.d10 + d.d01)
    departure_s = m.R * (d.d10 - d.d00 + np.log1p(d.d01))
    assert departure_h[0] == pytest.approx(answer["dep_H_J_per_mol"], rel=1e-3)
    assert departure_s[0] == pytest.approx(answer["dep_S_J_per_molK"], rel=1e-3)


def test_octane_van_der_waals_worked_example() -> None:
    """Y. V. C. Rao (1997), examples 3.6 and 8.2, with a and b as printed there."""
    e = example("RAO-3.6-8.2")
    a, b = e["input"]["a_Pa_m6_per_mol2"], e["input"]["b_m3_per_mol"]
    R = 8.314
    T_c = 8.0 * a / (27.0 * R * b)
    eos = TwoConstantCubic(VAN_DER_WAALS_FORM, ConstantAlpha(T_c), T_c, a / (27.0 * b * b), R=R)
    T = one(427.85)
    v = eos.volume_roots(T, one(2.15e5))[1]
    d = eos.reduced(T, 1.0 / v)
    assert v[0] == pytest.approx(e["answer"]["v_m3_per_mol"], rel=1e-4)
    assert (R * T * (d.d10 + d.d01))[0] == pytest.approx(e["answer"]["dep_H_J_per_mol"], rel=1e-3)
    assert (R * (d.d10 - d.d00 + np.log1p(d.d01)))[0] == pytest.approx(e["answer"]["dep_S_J_per_molK"], rel=1e-3)


def test_redlich_kwong_steam_maxwell_relation() -> None:
    """M. J. Moran, H. N. Shapiro, Fundamentals of Engineering Thermodynamics, 5th ed. (2006), example 11.3."""
    e = example("MS-11.3")
    a, b = e["input"]["RK"]["a_bar_m6_K05_per_kmol2"] * 1e5 * 1e-6, e["input"]["RK"]["b_m3_per_kmol"] * 1e-3
    R, M = 8.314, e["input"]["M"] * 1e-3
    f = REDLICH_KWONG_FORM
    T_c = (a * f.omega_b / (f.omega_a * R * b)) ** (2.0 / 3.0)  # from a = Ωa R² Tc^2.5/pc and b = Ωb R Tc/pc
    eos = TwoConstantCubic(f, RootAlpha(T_c), T_c, f.omega_b * R * T_c / b, R=R)
    p_T = eos.pressure(one(e["input"]["T_K"]), one(e["input"]["v_m3_per_kg"] * M)).p_T[0]
    assert p_T / 1e3 == pytest.approx(e["answer"]["dsdv_kJ_per_m3K"], rel=1e-3)


def test_van_der_waals_isothermal_closed_forms() -> None:
    """Δs = R ln((v2−b)/(v1−b)), Δu = a(1/v1 − 1/v2): elementary closed forms (van der Waals 1873)."""
    a, b, R, T = 0.1370, 3.87e-5, 8.314462618, 300.0
    T_c = 8.0 * a / (27.0 * R * b)
    eos = TwoConstantCubic(VAN_DER_WAALS_FORM, ConstantAlpha(T_c), T_c, a / (27.0 * b * b))
    v = np.array([24e-3, 1e-3])
    d = eos.reduced(np.full(2, T), 1.0 / v)
    s = R * (d.d10 - d.d00 + np.log(v))
    u = R * T * d.d10
    assert s[1] - s[0] == pytest.approx(R * math.log((v[1] - b) / (v[0] - b)), rel=1e-13)
    assert u[1] - u[0] == pytest.approx(a * (1 / v[0] - 1 / v[1]), rel=1e-13)
    np.testing.assert_allclose(R * T / v * (1 + d.d01), R * T / (v - b) - a / v**2, rtol=1e-13)


def test_van_der_waals_inversion_and_boyle_temperatures() -> None:
    """Exact: the zero-density inversion temperature is 27/4 Tc, Boyle's is 27/8 Tc."""
    m = build_model(read_card("helium"), "van-der-waals", heat_capacity=20.786)
    v = one(1e3)
    T = m.T_c * np.array([27 / 4 * 0.999, 27 / 4 * 1.001])
    mu = full(m, T, np.full(2, 1e3)).joule_thomson
    assert mu[0] > 0.0 > mu[1]
    Z = [full(m, one(m.T_c * 27 / 8 * f), v).Z[0] - 1.0 for f in (0.999, 1.001)]
    assert Z[0] < 0.0 < Z[1]


def test_helium_inversion_temperature_as_printed() -> None:
    """A. Manna, Heat and Thermodynamics, Ex. 7.5: He with Tc = 5.26 K inverts at 35.50 K."""
    assert pytest.approx(35.50, abs=0.01) == 27 / 4 * 5.26


def test_roots_fit_the_pressure_everywhere(cubic_model: Model) -> None:
    m = cubic_model
    T, p = (a.ravel() for a in np.meshgrid(np.geomspace(0.25 * m.T_c, 4 * m.T_c, 150), np.geomspace(1e-6, 1e10, 160)))
    roots = m.residual.volume_roots(T, p)
    assert np.isfinite(roots).any(axis=0).all()
    for row in roots:
        at = np.isfinite(row)
        t = m.residual.pressure(T[at], row[at])
        assert np.all(t.p_v < 0.0)
        assert np.max(np.abs((t.p - p[at]) / t.p_v / row[at])) < 3e-13
    both = np.isfinite(roots).all(axis=0)
    assert both.any()
    assert np.all(roots[0, both] < roots[1, both])


def test_shift_moves_volumes_and_nothing_else() -> None:
    card = read_card("propane")
    plain, moved = (build_model(card, "peng-robinson", volume_shift=c) for c in (0.0, 5e-6))
    T, v = np.array([250.0, 300.0, 500.0]), np.array([9e-5, 2e-3, 3e-4])
    a, b = thermal(plain, T, v), thermal(moved, T, v - 5e-6)
    np.testing.assert_allclose(b.p, a.p, rtol=1e-12)
    np.testing.assert_allclose(b.h - b.p * (v - 5e-6), a.h - a.p * v, rtol=1e-12)
    np.testing.assert_allclose(b.s, a.s, rtol=1e-12)


def test_soave_alpha_is_not_used_where_it_turns() -> None:
    alpha = SoaveAlpha(300.0, 0.5)
    assert alpha.T_max == pytest.approx(300.0 * 9.0)
    assert abs(alpha.alpha(one(alpha.T_max))[0][0]) < 1e-28
    m = build_model(read_card("decane"), "peng-robinson", heat_capacity=200.0)
    assert m.T_limits[1] < 1e4
    assert m.T_limits[1] == m.residual.alpha.T_max  # type: ignore[attr-defined]


def test_card_constants_only_when_asked() -> None:
    card = read_card("nitrogen")
    assert build_model(card, "van-der-waals").T_c == card.T_c.value
    own = build_model(card, "van-der-waals", constants="card")
    assert own.residual.a_c == pytest.approx(card.van_der_waals.a, rel=1e-12)  # type: ignore[union-attr,attr-defined]
    with pytest.raises(UsageError, match="constants"):
        build_model(card, "van-der-waals", constants="mine")


def test_unknown_equation_names_the_nearest() -> None:
    with pytest.raises(UsageError, match="did you mean 'peng-robinson'"):
        build_model(read_card("nitrogen"), "peng-robinsen")
