"""Each term form against its formula, evaluated and differentiated with forty digits."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest

from pathcalc.equations.helmholtz.bank import Bank
from pathcalc.equations.helmholtz.double_exponential import DoubleExponentialTerms
from pathcalc.equations.helmholtz.exponential import ExponentialTerms
from pathcalc.equations.helmholtz.gao import GaoTerms
from pathcalc.equations.helmholtz.gaussian import GaussianTerms
from pathcalc.equations.helmholtz.non_analytic import NonAnalyticTerms
from pathcalc.equations.helmholtz.power import PowerTerms
from pathcalc.equations.helmholtz.residual import HelmholtzResidual
from pathcalc.equations.helmholtz.term import Place

ORDERS = ((0, 0), (0, 1), (0, 2), (0, 3), (1, 0), (1, 1), (1, 2), (2, 0), (2, 1))


def power(d, t, n, k, m):
    return n * d**k * t**m


def exponential(d, t, n, k, m, length, g=1.0):
    return n * d**k * t**m * mp.exp(-g * d**length)


def double(d, t, n, k, m, g, length, h, q):
    return n * d**k * t**m * mp.exp(-g * d**length - h * t**q)


def gaussian(d, t, n, k, m, eta, beta, gamma, epsilon):
    return n * d**k * t**m * mp.exp(-eta * (d - epsilon) ** 2 - beta * (t - gamma) ** 2)


def gao(d, t, n, k, m, eta, beta, gamma, epsilon, b):
    return n * d**k * t**m * mp.exp(-eta * (d - epsilon) ** 2 + 1 / (beta * (t - gamma) ** 2 + b))


def non_analytic(d, t, n, a, b, beta, A, B, C, D):
    square = (d - 1) ** 2
    theta = (1 - t) + A * square ** (1 / (2 * mp.mpf(beta)))
    delta = theta**2 + B * square**a
    return n * delta**b * d * mp.exp(-C * square - D * (t - 1) ** 2)


CASES = {
    "power": (PowerTerms, power, [(0.8, 1, 0.25), (-1.7, 3, 4.5), (0.2, 2, -0.5)]),
    "exponential": (ExponentialTerms, exponential, [(0.8, 1, 2.5, 1), (-0.7, 4, 13, 3), (0.3, 2, 1, 1, 1.017)]),
    "double-exponential": (
        DoubleExponentialTerms,
        double,
        [(-1.532005, 2, 4.5, 1, 2, 1, 1.7), (0.02, 5, 24, 1, 3, 1, 6), (0.01, 1, 0, 4.1, 2, -3.9, 1)],
    ),
    "gaussian": (
        GaussianTerms,
        gaussian,
        [(0.6, 1, 1, 1.2, 0.9, 1.3, 0.7), (-31.3, 3, 0, 20, 150, 1.21, 1), (0.1, 2, 1.5, 0, 3, 1, 0)],
    ),
    "gao": (
        GaoTerms,
        gao,
        [(-1.69, 1, 4.3315, 2.8452, 0.3696, 1.108, 0.4478, 1.244), (0.9, 2, 1, 3, 0.3, 1.3, 0.4, 0.7)],
    ),
    "non-analytic": (
        NonAnalyticTerms,
        non_analytic,
        [(-0.149, 3.5, 0.85, 0.3, 0.32, 0.2, 28, 700), (0.318, 3.5, 0.95, 0.3, 0.32, 0.2, 32, 800)],
    ),
}  # fmt: skip


def places(form: str) -> list[tuple[float, float]]:
    if form == "non-analytic":
        return [(1.03, 1.01), (0.96, 0.995), (1.2, 1.05), (0.999, 1.001), (0.4, 1.1)]
    return [(1.0, 1.0), (0.01, 0.6), (0.7, 1.9), (2.3, 1.1), (3.1, 0.4)]


def by_mpmath(formula, table, delta: float, tau: float, i: int, j: int) -> float:
    with mp.workdps(40):
        d, t = mp.mpf(delta), mp.mpf(tau)
        total = sum(mp.diff(lambda x, y, row=row: formula(x, y, *row), (d, t), (j, i)) for row in table)
        return float(total * t**i * d**j)


@pytest.mark.parametrize("form", CASES)
def test_derivatives_of_each_form(form: str) -> None:
    kind, formula, table = CASES[form]
    points = places(form)
    delta, tau = (np.array(x) for x in zip(*points, strict=True))
    x = Place(delta, tau, np.log(delta), np.log(tau))
    terms = kind(table)
    got = (terms if form == "non-analytic" else Bank([terms])).sums(x, ORDERS)
    for k, (i, j) in enumerate(ORDERS):
        want = np.array([by_mpmath(formula, table, d, t, i, j) for d, t in points])
        scale = np.abs(want) + 1e-3 * np.max(np.abs(got[:, :]), axis=0) + 1e-30
        assert np.max(np.abs(got[k] - want) / scale) < 1e-10, (i, j)


@pytest.mark.parametrize("form", CASES)
def test_orders_can_be_asked_for_singly(form: str) -> None:
    kind, _, table = CASES[form]
    delta, tau = np.array([0.98, 1.1]), np.array([1.02, 0.99])
    x = Place(delta, tau, np.log(delta), np.log(tau))
    terms = kind(table)
    source = terms if form == "non-analytic" else Bank([terms])
    whole = source.sums(x, ORDERS)
    for k, order in enumerate(ORDERS):
        assert np.array_equal(source.sums(x, (order,))[0], whole[k])


def test_non_analytic_terms_at_the_critical_point() -> None:
    """All but the second τ-derivatives vanish there; those are very large, as c_v is infinite, yet finite."""
    terms = NonAnalyticTerms(CASES["non-analytic"][2])
    one = np.ones(2)
    got = dict(zip(ORDERS, terms.sums(Place(one, one, 0 * one, 0 * one), ORDERS)[:, 0], strict=True))
    assert np.isfinite(list(got.values())).all()
    for order in ((0, 0), (0, 1), (0, 2), (0, 3), (1, 0), (1, 1)):
        assert abs(got[order]) < 1e-15
    assert abs(got[2, 0]) > 1e4


def test_non_analytic_terms_near_the_critical_point_stay_bounded() -> None:
    terms = NonAnalyticTerms(CASES["non-analytic"][2])
    step = np.concatenate([s * 10.0 ** np.arange(-16.0, -2.0) for s in (1.0, -1.0)])
    for delta, tau in ((1.0 + step, np.ones_like(step)), (np.ones_like(step), 1.0 + step), (1.0 + step, 1.0 + step)):
        got = terms.sums(Place(delta, tau, np.log(delta), np.log(tau)), ((0, 1), (0, 2), (1, 1), (1, 0)))
        assert np.isfinite(got).all()
        assert np.max(np.abs(got)) < 1.0


def test_what_is_left_out_far_from_the_critical_point_does_not_count() -> None:
    terms = NonAnalyticTerms(CASES["non-analytic"][2])
    delta, tau = np.array([2.5, 1.0]), np.array([1.0, 1.31])
    x = Place(delta, tau, np.log(delta), np.log(tau))
    assert not terms.near(x).any()
    for i, j in ORDERS:
        assert np.max(np.abs(terms.sums(x, ((i, j),)))) < 1e-17


def test_one_lane_has_the_bits_of_many() -> None:
    forms = [kind(table) for kind, _, table in CASES.values()]
    residual = HelmholtzResidual(300.0, 1e4, 8.3, forms)
    rng = np.random.default_rng(3)
    T = 300.0 * rng.uniform(0.7, 1.6, 3 * residual.block + 1)
    rho = 1e4 * rng.uniform(0.0, 2.5, T.size)
    whole = residual.derivatives(T, rho, ORDERS)
    for i in (0, 1, residual.block - 1, residual.block, T.size - 1):
        assert np.array_equal(residual.derivatives(T[i], rho[i], ORDERS), whole[:, i])
    for start, stop in ((0, 2), (5, 12), (7, residual.block + 8), (T.size - 3, T.size)):
        assert np.array_equal(residual.derivatives(T[start:stop], rho[start:stop], ORDERS), whole[:, start:stop])


def test_shapes_and_what_is_no_number() -> None:
    residual = HelmholtzResidual(300.0, 1e4, 8.3, [PowerTerms([(0.5, 1, 1)])])
    out = residual.derivatives(np.full((2, 1), 300.0), np.array([0.0, 1e4, 2e4]), ORDERS[:2])
    assert out.shape == (2, 2, 3)
    assert np.array_equal(out[0, 0], [0.0, 0.5, 1.0])
    bad = residual.derivatives(np.array([-1.0, 0.0, np.nan, 300.0]), np.array([1.0, 1.0, 1.0, -1.0]), ((0, 1),))
    assert np.isnan(bad[0, [0, 2, 3]]).all()
    assert not np.isfinite(bad[0, 1])


def test_extended_precision() -> None:
    table = [(0.8, 1, 2.5), (-1.7, 3, 4.5)]
    residual = HelmholtzResidual(300.0, 1e4, 8.3, [PowerTerms(table, np.longdouble)])
    out = residual.derivatives(np.longdouble(270.0), np.longdouble(1.3e4), ((0, 0),))
    assert out.dtype == np.longdouble
    with mp.workdps(30):
        want = sum(power(mp.mpf(1.3e4) / mp.mpf(1e4), mp.mpf(300) / 270, *row) for row in table)
        exact = mp.mpf(float(out[0])) + mp.mpf(float(out[0] - np.longdouble(float(out[0]))))
        assert abs(exact / want - 1) < 5e-18 * (1 if np.finfo(np.longdouble).eps < 1e-18 else 1e3)
