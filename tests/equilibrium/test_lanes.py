"""A lane is the same to the last bit alone, among thousands, and beside lanes that fail."""

from __future__ import annotations

import itertools

import numpy as np
import pytest

from pathcalc.equations.contract import Model
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.saturation import saturation_at_p, saturation_at_T
from pathcalc.equilibrium.states import States, state_properties

KEYS = ("T", "p", "v", "h", "s", "u", "cp", "sound_speed", "joule_thomson", "fugacity_coefficient")
PAIRS = list(itertools.combinations("Tpvhsu", 2))


def same(a: States, b: States, where: np.ndarray) -> None:
    for key in KEYS:
        assert np.array_equal(getattr(a, key)[where], getattr(b, key)[where], equal_nan=True), key


def test_ten_thousand_lanes_with_one_bad(robinson: Model) -> None:
    m = robinson
    rng = np.random.default_rng(5)
    T, p = rng.uniform(150.0, 600.0, 10_000), np.exp(rng.uniform(np.log(1e3), np.log(5e7), 10_000))
    clean = state_properties(m, flash(m, {"T": T, "p": p}))
    good = np.arange(10_000) != 4321
    for bad in (np.nan, -3.0, 0.0, 1e308, 5e-324, np.inf):
        q = p.copy()
        q[4321] = bad
        points = flash(m, {"T": T, "p": q})
        same(clean, state_properties(m, points), good)
    s = clean.s.copy()
    first = state_properties(m, flash(m, {"p": p, "s": s}))
    s[4321] = 1e9
    second = flash(m, {"p": p, "s": s})
    assert second.reason[4321] != 0
    same(first, state_properties(m, second), good)


@pytest.mark.parametrize("pair", PAIRS, ids="-".join)
def test_alone_or_in_company(any_model: Model, pair: tuple[str, str]) -> None:
    m = any_model
    rng = np.random.default_rng(6)
    n = 4 if set(pair) == {"u", "h"} else 40
    T, p = rng.uniform(70.0, 400.0, n), np.exp(rng.uniform(np.log(1e4), np.log(2e7), n))
    whole = state_properties(m, flash(m, {"T": T, "p": p}))
    given = {k: getattr(whole, k).copy() for k in pair}
    given[pair[1]][::5] *= 1.3
    together = state_properties(m, flash(m, given))
    for k in range(0, n, max(2, n // 5)):
        alone = state_properties(m, flash(m, {key: a[k : k + 1] for key, a in given.items()}))
        for key in KEYS:
            assert np.array_equal(getattr(together, key)[k : k + 1], getattr(alone, key), equal_nan=True), (key, k)


def test_saturation_alone_or_in_company(cubic_model: Model) -> None:
    m = cubic_model
    T = np.linspace(0.9 * m.T_limits[0], 1.1 * m.T_c, 500)
    whole = saturation_at_T(m, T)
    back = saturation_at_p(m, whole.p)
    for k in range(0, 500, 61):
        one = saturation_at_T(m, T[k : k + 1])
        assert np.array_equal(one.p, whole.p[k : k + 1], equal_nan=True)
        again = saturation_at_p(m, whole.p[k : k + 1])
        assert np.array_equal(again.T, back.T[k : k + 1], equal_nan=True)


def test_no_lanes_at_all(robinson: Model) -> None:
    for pair in PAIRS:
        got = flash(robinson, {k: np.empty(0) for k in pair})
        assert got.T.shape == (0,)
        assert state_properties(robinson, got).h.shape == (0,)
