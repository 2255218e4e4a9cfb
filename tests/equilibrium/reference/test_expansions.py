"""The expansions of the saturation line against the full solution of equal pressure and equal Gibbs energy."""

from __future__ import annotations

import json
import shutil
from pathlib import Path

import numpy as np
import pytest
from substances import NAMES, model

from pathcalc.equations.build import build_model
from pathcalc.equations.contract import Array
from pathcalc.equations.helmholtz import coexistence, trace
from pathcalc.equations.helmholtz.residual import HelmholtzResidual
from pathcalc.equilibrium import reasons
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.saturation import ends, saturation_at_p, saturation_at_T
from pathcalc.equilibrium.states import state_properties
from pathcalc.substances import read_card
from pathcalc.substances.reference_reader import reference_path

ORDERS = ((0, 0), (0, 1), (0, 2), (1, 0))
EXTENDED = np.finfo(np.longdouble).eps < 1e-18


def temperatures(name: str, n: int) -> Array:
    """From the lowest temperature to 1 − 10⁻⁴ of the critical one, half of them near the latter."""
    m = model(name)
    low = m.T_limits[0]
    share = np.concatenate([np.linspace(0.0, 0.95, n // 2), 1.0 - np.geomspace(0.05, 1.1e-4, n - n // 2)])
    return low + (m.T_c * (1.0 - 1e-4) - low) * share


def full_solution(name: str, T: Array, dtype: type) -> tuple[Array, Array, Array]:
    """p, v_liquid, v_vapour by Newton's method from the expansions moved by a thousandth."""
    residual = HelmholtzResidual.of(model(name).residual.reference, dtype)

    def terms(T: Array, rho: Array) -> tuple[Array, ...]:
        return tuple(residual.derivatives(T, rho, ORDERS))

    start = model(name).residual.coexistence.at_T(T)
    gap = 1e-3 * np.log(start.v_vapour / start.v_liquid)
    t = T.astype(dtype)
    liquid, vapour, settled = trace.solve(
        terms, t, (gap - np.log(start.v_liquid)).astype(dtype), (-np.log(start.v_vapour) - gap).astype(dtype)
    )
    assert settled.all()
    rho = np.exp(vapour)
    return residual.R * t * rho * (1.0 + terms(t, rho)[1]), np.exp(-liquid), 1.0 / rho


@pytest.mark.parametrize("name", NAMES)
def test_expansions_solve_the_equation(name: str) -> None:
    """To 2·10⁻¹¹, as close to T_c as 10⁻⁴; away from there to 10⁻¹³ (where the machine has extended precision)."""
    T = temperatures(name, 40)
    want = full_solution(name, T, np.longdouble if EXTENDED else np.float64)
    got = saturation_at_T(model(name), T)
    assert not got.reason.any()
    far = 0.98 * model(name).T_c > T
    for ours, theirs in zip((got.p, got.v_liquid, got.v_vapour), want, strict=True):
        miss = np.abs(ours / theirs - 1.0).astype(np.float64)
        assert miss.max() < 2e-11
        assert miss[far].max() < (3e-13 if EXTENDED else 1e-9)


@pytest.mark.parametrize("name", ["water", "nitrogen", "helium", "R-134a", "methanol"])
def test_slope_and_energies(name: str) -> None:
    """dp/dT = Δs/Δv (Clapeyron); the energies told beforehand are those of the equation at both volumes."""
    m = model(name)
    T = temperatures(name, 30)
    sat = saturation_at_T(m, T)
    for x, column in ((0.0, 0), (1.0, 1)):
        states = state_properties(m, flash(m, {"T": T, "x": x}))
        for key, size in (("h", m.R * T), ("s", m.R), ("u", m.R * T)):
            told = ends(m, key, sat)[column]
            assert np.max(np.abs(told - getattr(states, key)) / size) < 3e-11
    ds = np.subtract(*ends(m, "s", sat)[::-1])
    np.testing.assert_allclose(sat.dp_dT, ds / (sat.v_vapour - sat.v_liquid), rtol=1e-9)


@pytest.mark.parametrize("name", NAMES)
def test_temperature_from_pressure(name: str) -> None:
    m = model(name)
    T = temperatures(name, 60)
    sat = saturation_at_T(m, T)
    back = saturation_at_p(m, sat.p)
    np.testing.assert_allclose(back.T, T, rtol=2e-14)
    away = 0.999 * m.T_c > T
    np.testing.assert_allclose(back.v_liquid[away], sat.v_liquid[away], rtol=1e-11)


@pytest.mark.parametrize("name", NAMES)
def test_near_the_critical_point_and_beyond(name: str) -> None:
    m = model(name)
    T = m.T_c * np.array([1.0 - 1e-9, 1.0, 1.0 + 1e-9, 1.5])
    near, above = reasons.NEAR_CRITICAL, reasons.ABOVE_CRITICAL
    got = saturation_at_T(m, T)
    assert got.reason.tolist() == [near, above, above, above]
    assert saturation_at_p(m, m.p_c * np.array([1.0 - 1e-12, 1.0, 2.0])).reason.tolist() == [near, above, above]
    assert np.isnan(got.p).all()
    assert saturation_at_T(m, 0.99 * m.T_limits[0]).reason[0] == reasons.BELOW_TRIPLE_POINT
    assert saturation_at_p(m, 0.9 * saturation_at_T(m, m.T_limits[0]).p).reason[0] == reasons.BELOW_RANGE
    # down to a few millionths of T_c there is a liquid and a vapour
    line = m.residual.coexistence
    assert 1.0 - line.T_top / m.T_c < 3e-6
    last = saturation_at_T(m, line.T_top)
    assert last.reason[0] == 0
    assert last.v_liquid[0] < last.v_vapour[0]


@pytest.fixture
def own_card(tmp_path: Path) -> Path:
    """A user's copy of propane's card and equation, without the expansions."""
    card = read_card("propane")
    shutil.copy(card.file, tmp_path / "propane.yaml")
    equation = reference_path(card)
    (tmp_path / "reference").mkdir()
    shutil.copy(equation, tmp_path / "reference" / equation.name)
    return tmp_path / "propane.yaml"


def test_a_card_without_expansions_is_fitted_when_asked(own_card: Path) -> None:
    m = build_model(read_card(str(own_card)), "reference")
    assert str(own_card.parent) in m.residual.reference.file
    T = np.linspace(m.T_limits[0], 0.999 * m.T_c, 50)
    got, want = saturation_at_T(m, T), saturation_at_T(model("propane"), T)
    for key in ("p", "v_liquid", "v_vapour", "dp_dT"):
        np.testing.assert_allclose(getattr(got, key), getattr(want, key), rtol=1e-9)


def test_expansions_of_another_equation_are_not_believed(own_card: Path) -> None:
    """A coefficient changed after the fit moves saturation; the old file is left unread."""
    equation = own_card.parent / "reference" / "propane.yaml"
    folder = equation.parent / "saturation"
    folder.mkdir()
    shutil.copy(reference_path(read_card("propane")).parent / "saturation" / "propane.json", folder)
    text = equation.read_text(encoding="utf-8")
    first = text.split("rows:\n")[1].split("[")[1].split(",")[0]
    equation.write_text(text.replace(first, repr(float(first) * (1.0 + 1e-6)), 1), encoding="utf-8")
    m = build_model(read_card(str(own_card)), "reference")
    T = np.array([250.0])
    assert abs(saturation_at_T(m, T).p[0] / saturation_at_T(model("propane"), T).p[0] - 1.0) > 1e-8
    residual = m.residual
    line = residual.coexistence
    sat = line.at_T(T)
    d_l = residual.derivatives(T, 1.0 / sat.v_liquid, ORDERS)
    d_v = residual.derivatives(T, 1.0 / sat.v_vapour, ORDERS)
    gibbs = np.log(sat.v_vapour / sat.v_liquid) + d_l[0] + d_l[1] - d_v[0] - d_v[1]
    assert abs(gibbs[0]) < 1e-9


def test_a_file_holds_what_was_fitted() -> None:
    """Writing and reading again changes a sum by no more than rounding; files are text of less than 60 kB."""
    for name in ("nitrogen", "water"):
        path = reference_path(read_card(name)).parent / "saturation" / f"{name}.json"
        traced = coexistence.from_dict(json.loads(path.read_text(encoding="utf-8")))
        again = coexistence.from_dict(json.loads(json.dumps(coexistence.to_dict(traced))))
        assert np.array_equal(traced.coefficients, again.coefficients)
        assert traced.T_x == again.T_x
    for file in (reference_path(read_card("water")).parent / "saturation").glob("*.json"):
        assert file.stat().st_size < 60_000


def test_no_curve_is_a_finding_not_a_number() -> None:
    """An ideal gas given for an equation with a dome: the curve cannot be followed, and says so."""

    def terms(T: Array, rho: Array) -> tuple[Array, Array, Array, Array]:
        zero = 0.0 * rho
        return zero, zero, zero, zero

    with pytest.raises(trace.NoCoexistence), np.errstate(all="ignore"):
        trace.trace(terms, 300.0, 1e4, 200.0, analytic=True, tolerance=1e-10, R=8.3)
