"""A lane of a reference equation is the same to the last bit alone, among thousands, and beside lanes that fail."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from substances import model, random_states

from pathcalc.equations.contract import Model
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.saturation import saturation_at_p, saturation_at_T
from pathcalc.equilibrium.states import States, state_properties

KEYS = ("T", "p", "v", "x", "h", "s", "u", "cp", "sound_speed", "joule_thomson", "fugacity_coefficient")
PAIRS = list(itertools.combinations("Tpvhsu", 2))


def same(a: States, b: States, where: object) -> None:
    for key in KEYS:
        assert np.array_equal(getattr(a, key)[where], getattr(b, key), equal_nan=True), key


def mixed(m: Model, n: int) -> States:
    """One phase and two, in turn."""
    T, p = random_states(m, n)
    one = flash(m, {"T": T, "p": p})
    rng = np.random.default_rng(2)
    two = flash(m, {"T": rng.uniform(m.T_limits[0], 0.999 * m.T_c, n), "x": rng.uniform(0.0, 1.0, n)})
    turn = np.arange(n) % 2 == 0
    v = np.where(turn, one.v, two.v)
    return state_properties(m, flash(m, {"T": np.where(turn, one.T, two.T), "v": v}))


@pytest.mark.parametrize("name", ["nitrogen", "water", "carbon-dioxide"])
@pytest.mark.parametrize("pair", PAIRS, ids="-".join)
def test_alone_or_in_company(name: str, pair: tuple[str, str]) -> None:
    m = model(name)
    n = 4 if set(pair) == {"h", "u"} else 60
    whole = mixed(m, n)
    given = {key: getattr(whole, key).copy() for key in pair}
    given[pair[1]][3::7] *= 1.3
    given[pair[0]][5::11] = np.nan
    together = state_properties(m, flash(m, given))
    for k in range(0, n, max(2, n // 12)):
        same(together, state_properties(m, flash(m, {key: a[k : k + 1] for key, a in given.items()})), slice(k, k + 1))


def test_twenty_thousand_lanes_and_some() -> None:
    """More lanes than a block; a piece from the middle solved on its own."""
    m = model("nitrogen")
    rng = np.random.default_rng(8)
    n = 20_000
    T, p = rng.uniform(64.0, 1000.0, n), np.exp(rng.uniform(np.log(1e3), np.log(1e8), n))
    whole = state_properties(m, flash(m, {"T": T, "p": p}))
    some = slice(16_000, 16_777)
    same(whole, state_properties(m, flash(m, {"T": T[some], "p": p[some]})), some)
    s = whole.s
    by_entropy = state_properties(m, flash(m, {"p": p, "s": s}))
    same(by_entropy, state_properties(m, flash(m, {"p": p[some], "s": s[some]})), some)


@pytest.mark.parametrize("name", ["nitrogen", "water", "methanol"])
def test_saturation_alone_or_in_company(name: str) -> None:
    m = model(name)
    T = np.linspace(0.9 * m.T_limits[0], 1.1 * m.T_c, 3001)
    whole = saturation_at_T(m, T)
    back = saturation_at_p(m, whole.p)
    for k in range(0, T.size, 97):
        one, again = saturation_at_T(m, T[k : k + 1]), saturation_at_p(m, whole.p[k : k + 1])
        for key in ("p", "v_liquid", "v_vapour", "dp_dT"):
            assert np.array_equal(getattr(one, key), getattr(whole, key)[k : k + 1], equal_nan=True)
        assert np.array_equal(again.T, back.T[k : k + 1], equal_nan=True)


def test_no_lanes_at_all() -> None:
    m = model("nitrogen")
    for pair in PAIRS:
        got = flash(m, {key: np.empty(0) for key in pair})
        assert got.T.shape == (0,)
        assert state_properties(m, got).h.shape == (0,)
