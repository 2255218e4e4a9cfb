"""Saturation: an exact reduced table, an independent library with the same constants, closed-form checks."""

from __future__ import annotations

import csv
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from CoolProp import CoolProp

from pathcalc.equations.alpha import SoaveAlpha, peng_robinson_m, soave_m
from pathcalc.equations.build import build_model
from pathcalc.equations.contract import Model
from pathcalc.equations.cubic import PENG_ROBINSON_FORM, REDLICH_KWONG_FORM, Form, TwoConstantCubic
from pathcalc.equilibrium import reasons
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.quantity import value
from pathcalc.equilibrium.saturation import difference, saturation_at_p, saturation_at_T
from pathcalc.substances import read_card
from pathcalc.substances.card import Constant

REFERENCE = Path(__file__).parents[2] / "shared" / "reference"


def test_reduced_van_der_waals_table() -> None:
    """Reduced saturation states of the van der Waals fluid (J. Lekner, Am. J. Phys. 50 (1982) 161)."""
    text = (REFERENCE / "vdw_saturation_and_cubic_constants.csv").read_text(encoding="utf-8")
    rows = list(csv.DictReader(line for line in text.splitlines() if not line.startswith("#")))
    m = build_model(read_card("nitrogen"), "van-der-waals")
    Tr, pr, vl, vv, ds = (np.array([float(r[k]) for r in rows]) for k in rows[0])
    at = Tr * m.T_c > m.T_limits[0]
    assert at.sum() >= 8
    sat = saturation_at_T(m, Tr * m.T_c)
    np.testing.assert_allclose((sat.p / m.p_c)[at], pr[at], rtol=2e-12)
    np.testing.assert_allclose((sat.v_liquid / m.v_c)[at], vl[at], rtol=2e-11)
    np.testing.assert_allclose((sat.v_vapour / m.v_c)[at], vv[at], rtol=2e-11)
    got = (value(m, "s", sat.T, sat.v_vapour) - value(m, "s", sat.T, sat.v_liquid)) / m.R
    np.testing.assert_allclose(got[at], ds[at], rtol=2e-11)
    np.testing.assert_allclose((sat.dp_dT * (sat.v_vapour - sat.v_liquid) / m.R)[at], ds[at], rtol=2e-11)
    assert np.all(sat.reason[~at] == reasons.BELOW_TRIPLE_POINT)


def test_octane_vapour_pressure_is_near_the_boiling_state_of_the_worked_example() -> None:
    """Y. V. C. Rao (1997) takes 427.85 K, 0.215 MPa for saturated n-octane: within 3 %."""
    card = read_card("octane")
    given = {"T_c": 569.4, "p_c": 24.97e5, "acentric": 0.398}
    card = replace(card, constants={**card.constants, **{k: Constant(v, "rao") for k, v in given.items()}})
    sat = saturation_at_T(build_model(card, "peng-robinson"), 427.85)
    assert sat.p[0] == pytest.approx(2.15e5, rel=0.03)


@pytest.mark.parametrize(
    ("backend", "form", "m_of"), [("SRK", REDLICH_KWONG_FORM, soave_m), ("PR", PENG_ROBINSON_FORM, peng_robinson_m)]
)
def test_against_an_independent_library(backend: str, form: Form, m_of: Callable[[float], float]) -> None:
    """CoolProp's cubic equations with its own Tc, pc, ω, R: saturation and single-phase states at random points."""
    other = CoolProp.AbstractState(backend, "Propane")
    T_c, p_c, R, w = other.T_critical(), other.p_critical(), other.gas_constant(), other.acentric_factor()
    eos = TwoConstantCubic(form, SoaveAlpha(T_c, m_of(w)), T_c, p_c, R=R)
    base = build_model(read_card("propane"), "peng-robinson")
    m = replace(base, residual=eos, T_c=T_c, p_c=p_c, v_c=eos.v_c, R=R, T_limits=(120.0, 1200.0))
    tolerance = 1e-8 if backend == "SRK" else 1e-11  # it keeps δ2 of the first a little off zero
    rng = np.random.default_rng(11)
    T = rng.uniform(0.45, 0.97, 40) * T_c
    sat = saturation_at_T(m, T)
    assert np.all(sat.reason == 0)
    for k in range(T.size):
        other.update(CoolProp.QT_INPUTS, 1.0, float(T[k]))
        assert sat.p[k] == pytest.approx(other.p(), rel=1e-6)  # that library's own tolerance
    T = rng.uniform(0.6, 2.0, 60) * T_c
    p = np.exp(rng.uniform(np.log(1e4), np.log(3e7), 60))
    points = flash(m, {"T": T, "p": p})
    d = eos.reduced(T, 1.0 / points.v)
    for k in range(T.size):
        other.update(CoolProp.DmolarT_INPUTS, 1.0 / float(points.v[k]), float(T[k]))
        assert other.p() == pytest.approx(p[k], rel=100 * tolerance)
        assert d.d00[k] == pytest.approx(other.alphar(), rel=tolerance)
        assert d.d10[k] == pytest.approx(other.tau() * other.dalphar_dTau(), rel=tolerance)


def test_equal_pressure_and_gibbs_energy_up_to_the_critical_point(cubic_model: Model) -> None:
    m = cubic_model
    T = np.concatenate([np.linspace(m.T_limits[0], 0.999 * m.T_c, 300), m.T_c * (1 - np.geomspace(1e-3, 1.1e-8, 60))])
    sat = saturation_at_T(m, T)
    assert np.all(sat.reason == 0)
    v = np.stack([sat.v_liquid, sat.v_vapour])
    f = difference(m, sat.T, sat.p, v)[0]
    assert np.max(np.abs(f)) < 5e-14
    ordinary = slice(150, 300)  # warm enough for the liquid's pressure to be more than rounding
    p = m.residual.pressure(np.stack([T, T])[:, ordinary], v[:, ordinary]).p
    np.testing.assert_allclose(p[0], p[1], rtol=1e-8)


def test_both_routes_and_clapeyron_agree(cubic_model: Model) -> None:
    m = cubic_model
    T = np.linspace(1.05 * m.T_limits[0], 0.9999 * m.T_c, 200)
    sat = saturation_at_T(m, T)
    back = saturation_at_p(m, sat.p)
    assert np.all(back.reason == 0)
    np.testing.assert_allclose(back.T, T, rtol=3e-13)
    h = 1e-4 * T[:-20]
    p = [saturation_at_T(m, T[:-20] + k * h).p for k in (-2, -1, 1, 2)]
    slope = (8 * (p[2] - p[1]) - (p[3] - p[0])) / (12 * h)
    np.testing.assert_allclose(slope, sat.dp_dT[:-20], rtol=1e-7)


def test_where_there_is_no_saturation(cubic_model: Model) -> None:
    m = cubic_model
    T = np.array([m.T_c, 2 * m.T_c, m.T_c * (1 - 1e-9), 0.5 * m.T_limits[0], np.nan, -5.0, 300.0])
    sat = saturation_at_T(m, T)
    want = [
        reasons.ABOVE_CRITICAL,
        reasons.ABOVE_CRITICAL,
        reasons.NEAR_CRITICAL,
        reasons.BELOW_TRIPLE_POINT,
        reasons.NOT_A_STATE,
        reasons.NOT_A_STATE,
        0,
    ]
    assert sat.reason.tolist() == want
    assert np.isnan(sat.p[:-1]).all()
    assert np.isnan(sat.T[:-1]).all()
    at = saturation_at_p(m, np.array([m.p_c, 1e-12, np.nan, 5e5]))
    assert at.reason.tolist() == [reasons.ABOVE_CRITICAL, reasons.BELOW_RANGE, reasons.NOT_A_STATE, 0]


def test_without_a_dome() -> None:
    for equation in ("ideal-gas", "virial"):
        m = build_model(read_card("nitrogen"), equation)
        assert saturation_at_T(m, 100.0).reason[0] == reasons.NO_COEXISTENCE
        assert saturation_at_p(m, 1e5).reason[0] == reasons.NO_COEXISTENCE
