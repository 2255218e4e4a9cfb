"""The ideal-gas heat capacity: laws that hold for every card, forms, shapes, extremes."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad

from pathcalc.equations import ideal_gas
from pathcalc.equations.contract import R_CODATA, T_STANDARD
from pathcalc.equations.ideal_gas import IdealGasHeatCapacity
from pathcalc.substances import LevelTerm, PowerTerm, TemperatureRange, names, read_card

ALL = [(name, item.name) for name in names() for item in read_card(name).ideal_gas]


def chosen(name: str, choice: str | None = None) -> IdealGasHeatCapacity:
    return ideal_gas.from_card(read_card(name), choice)


def inside(item: IdealGasHeatCapacity, count: int) -> np.ndarray:
    """Temperatures within the stated range, off the joints of piecewise forms."""
    return np.geomspace(item.T_min * 1.013, item.T_max * 0.987, count)


# --- laws that hold for every card ---


@pytest.mark.parametrize(("name", "choice"), ALL, ids=lambda value: value)
def test_enthalpy_and_entropy_are_the_integrals_of_the_heat_capacity(name: str, choice: str) -> None:
    item = chosen(name, choice)
    T = inside(item, 23)
    step = 1e-4 * T
    ahead, here, behind = item.terms(T + step), item.terms(T), item.terms(T - step)
    # central differences: truncation about 1e-9 of c_p, rounding of h over the step about 1e-10
    assert (ahead.h0_R - behind.h0_R) / (2.0 * step) == pytest.approx(here.cp0_R, rel=5e-8)
    assert (ahead.s0_R - behind.s0_R) / (2.0 * step) == pytest.approx(here.cp0_R / T, rel=5e-8)


@pytest.mark.parametrize(("name", "choice"), ALL, ids=lambda value: value)
def test_zero_is_at_298_K_and_the_heat_capacity_is_physical(name: str, choice: str) -> None:
    item = chosen(name, choice)
    _, h, s = item.terms(np.array([T_STANDARD]))
    assert h[0] == 0.0
    assert s[0] == 0.0
    assert 0.0 < item.T_min < item.T_max
    # every atom's translation gives 5/2; nothing gives less, and the fits stray by less than 0.1 %
    assert (item.cp0_R(inside(item, 200)) > 2.4975).all()


@pytest.mark.parametrize("name", names())
def test_the_default_holds_from_the_triple_point(name: str) -> None:
    card = read_card(name)
    assert card.ideal_gas[0].T_min <= card.T_triple.value * (1.0 + 1e-12)
    assert card.ideal_gas[0].T_max > T_STANDARD


@pytest.mark.parametrize("name", names())
def test_lanes_do_not_know_of_each_other(name: str) -> None:
    for correlation in read_card(name).ideal_gas:
        item = ideal_gas.from_correlation(correlation)
        T = np.linspace(item.T_min * 0.9, item.T_max * 1.1, 613)
        together = np.array(item.terms(T))
        for k in (0, 1, 300, 612):
            assert np.array_equal(np.array(item.terms(T[k : k + 1])), together[:, k : k + 1])
        assert np.array_equal(np.array(item.terms(T[5:8])), together[:, 5:8])


def rotation(T: float, even: bool) -> float:
    """c_rot/R of a rigid rotator with centrifugal stretching, levels J even (para) or odd (ortho).

    H2: B0 = 59.33 1/cm, D0 = 0.0457 1/cm (K. P. Huber and G. Herzberg, Constants of Diatomic Molecules,
    1979; values from memory); hc/k = 1.438777 cm K (CODATA 2018).
    """
    J = np.arange(0 if even else 1, 14, 2)
    x = 1.438777 * (59.33 * J * (J + 1) - 0.0457 * (J * (J + 1)) ** 2) / T
    weight = (2 * J + 1) * np.exp(-x)
    mean = (weight * x).sum() / weight.sum()
    return float((weight * x**2).sum() / weight.sum() - mean**2)


@pytest.mark.parametrize("T", [100.0, 200.0])
def test_the_quantum_mechanics_of_hydrogen_is_that_of_the_tables(T: float) -> None:
    """NIST-JANAF, table H-050, is of the equilibrium of ortho and para: 28.154 and 27.447 J/(mol K)."""
    J = np.arange(0, 14)
    x = 1.438777 * (59.33 * J * (J + 1) - 0.0457 * (J * (J + 1)) ** 2) / T
    weight = np.where(J % 2, 3, 1) * (2 * J + 1) * np.exp(-x)
    mean = (weight * x).sum() / weight.sum()
    rotational = (weight * x**2).sum() / weight.sum() - mean**2
    assert R_CODATA * (2.5 + rotational) == pytest.approx({100.0: 28.154, 200.0: 27.447}[T], abs=4e-3)


@pytest.mark.parametrize("T", [30.0, 60.0, 100.0, 150.0, 200.0, 300.0])
def test_hydrogen_and_parahydrogen_differ_as_quantum_mechanics_says(T: float) -> None:
    para, ortho = rotation(T, even=True), rotation(T, even=False)
    # the equation's terms are a fit: 1 % of c_p
    assert float(chosen("parahydrogen").cp0_R(np.float64(T))) == pytest.approx(2.5 + para, rel=0.01)
    normal = 0.25 * para + 0.75 * ortho
    assert float(chosen("hydrogen").cp0_R(np.float64(T))) == pytest.approx(2.5 + normal, rel=0.01)


# --- forms, shapes, extremes ---


def built(ranges: tuple[PowerTerm, ...], levels: tuple[LevelTerm, ...] = ()) -> IdealGasHeatCapacity:
    whole = TemperatureRange(100.0, 2000.0, ranges)
    return IdealGasHeatCapacity("test", "planck-einstein", 100.0, 2000.0, (whole,), levels)


@pytest.mark.parametrize("T", [150.0, 298.15, 1200.0])
def test_hyperbolic_terms_are_energy_levels(T: float, tmp_path: Path) -> None:
    """(y/sinh y)2 and (y/cosh y)2 of F. A. Aly and L. L. Lee, Fluid Phase Equilib. 6 (1981) 169."""
    text = """\
substance: trial
formula: X
hazards: []
constants:
  molar_mass: {value: 0.03, unit: kg/mol, source: lab}
ideal_gas:
  - {name: lab, form: planck-einstein, T_min: 100, T_max: 2000, source: lab,
     constant: 4, sinh: [[3, 900]], cosh: [[2, 1300]], shifted: [[0.5, 700, 0.4]]}
sources: {lab: Laboratory sheet 7 (2026)}
"""
    (tmp_path / "trial.yaml").write_text(text, encoding="utf-8")
    item = ideal_gas.from_card(read_card(tmp_path / "trial.yaml"))

    def cp(T: float) -> float:
        x, z, y = 900.0 / T, 1300.0 / T, 700.0 / T
        shifted = y**2 * math.exp(y) / (math.exp(y) + 0.4) ** 2
        return 4.0 + 3.0 * (x / math.sinh(x)) ** 2 + 2.0 * (z / math.cosh(z)) ** 2 + 0.5 * shifted

    got = item.terms(np.float64(T))
    assert float(got.cp0_R) == pytest.approx(cp(T), rel=1e-13)
    assert float(got.h0_R) == pytest.approx(quad(cp, T_STANDARD, T, epsrel=1e-12)[0], rel=1e-11, abs=1e-12)
    entropy = quad(lambda T: cp(T) / T, T_STANDARD, T, epsrel=1e-12)[0]
    assert float(got.s0_R) == pytest.approx(entropy, rel=1e-11, abs=1e-14)


def test_powers_minus_one_and_zero_integrate_to_logarithms() -> None:
    item = built((PowerTerm(3.0, 0.0), PowerTerm(120.0, -1.0)))
    T, x = 700.0, math.log(700.0 / T_STANDARD)
    assert float(item.h0_R(np.float64(T))) == pytest.approx(3.0 * (T - T_STANDARD) + 120.0 * x, rel=1e-14)
    expected = 3.0 * x + 120.0 * (1.0 / T_STANDARD - 1.0 / T)
    assert float(item.s0_R(np.float64(T))) == pytest.approx(expected, rel=1e-14)


@given(st.floats(1e-4, 1e8), st.floats(1.0, 1e4))
def test_one_vibration_is_safe_at_any_temperature(T: float, theta: float) -> None:
    """Between 5/2 and 7/2, and the two ends exactly; no overflow, no invalid value."""
    item = built((PowerTerm(2.5, 0.0),), (LevelTerm(1.0, theta),))
    with np.errstate(over="raise", invalid="raise", divide="raise"):
        cp, h, s = (float(x) for x in item.terms(np.float64(T)))
    y = theta / T
    assert 2.5 <= cp <= 3.5 + 1e-12
    if y > 800.0:
        assert cp == 2.5
    if y < 1e-3:
        assert cp == pytest.approx(3.5 - y**2 / 12.0, rel=1e-13)  # series of the Planck-Einstein function
    assert math.isfinite(h)
    assert math.isfinite(s)
    assert (h > 0.0) == (T > T_STANDARD) or abs(T - T_STANDARD) < 1e-9
    assert (s > 0.0) == (T > T_STANDARD) or abs(T - T_STANDARD) < 1e-9


@pytest.mark.parametrize("shape", [(), (0,), (1,), (5,), (2, 3), (3, 5000)])
def test_any_shape(shape: tuple[int, ...]) -> None:
    item = chosen("carbon-dioxide")
    T = np.full(shape, 350.0)
    alone = item.terms(np.array([350.0]))
    for got, one in zip(item.terms(T), alone, strict=True):
        assert got.shape == shape
        assert (got == one[0]).all()


def test_what_is_no_temperature_gives_nan_and_leaves_the_others() -> None:
    for choice in ("span2000", "nasa9"):
        item = chosen("nitrogen", choice)
        T = np.array([300.0, 0.0, -5.0, np.nan, 400.0])
        got = np.array(item.terms(T))
        assert np.isnan(got[:, 1:4]).all()
        assert np.array_equal(got[:, [0, 4]], np.array(item.terms(T[[0, 4]])))


def test_polynomials_hold_their_last_heat_capacity_outside_their_range() -> None:
    item = chosen("nitrogen", "nasa9")
    low, high = item.T_min, item.T_max
    cp_low, cp_high = item.cp0_R(np.array([low, high]))
    T = np.array([0.3 * low, 2.0 * high])
    cp, h, s = item.terms(T)
    h_ends, s_ends = item.h0_R(np.array([low, high])), item.s0_R(np.array([low, high]))
    assert list(cp) == [cp_low, cp_high]
    assert h == pytest.approx(h_ends + cp * (T - [low, high]), rel=1e-14)
    assert s == pytest.approx(s_ends + cp * np.log(T / [low, high]), rel=1e-14)


def test_the_gas_constant_of_the_model_is_divided_out() -> None:
    card = read_card("nitrogen")
    own = ideal_gas.from_card(card, R=8.31451)
    usual = ideal_gas.from_card(card)
    T = np.array([200.0, 900.0])
    for a, b in zip(own.terms(T), usual.terms(T), strict=True):
        assert a * 8.31451 == pytest.approx(b * R_CODATA, rel=1e-14)
    assert own.cp0_R(np.array([1e-9]))[0] == pytest.approx(3.5, rel=1e-12)  # the paper's own constant term


def test_a_constant_heat_capacity() -> None:
    item = ideal_gas.constant(3.5, source="given")
    T = np.array([100.0, 298.15, 1000.0])
    cp, h, s = item.terms(T)
    assert list(cp) == [3.5, 3.5, 3.5]
    assert h == pytest.approx(3.5 * (T - T_STANDARD), rel=1e-14, abs=1e-12)
    assert s == pytest.approx(3.5 * np.log(T / T_STANDARD), rel=1e-14, abs=1e-15)
    assert (item.T_min, item.T_max, item.source) == (0.0, math.inf, "given")
