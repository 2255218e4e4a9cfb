"""Every pair of T, p, v, h, s, u gives the state back: one phase, two phases, near-critical, dense and cryogenic.

No lane may fail inside the range. Where a pair has two states both are told, and one of them is the one asked for,
save where there are more: (u, h) can have four, and liquids that contract on heating (water, heavy water, helium) have
a third for pairs with T.
"""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from substances import NAMES, model, random_states, seed, some

from pathcalc.equations.contract import Model
from pathcalc.equilibrium import reasons
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.states import States, state_properties

PAIRS = [pair for pair in itertools.combinations("Tpvhsu", 2) if set(pair) != {"T", "p"}]
QUICK = [pair for pair in PAIRS if set(pair) not in ({"h", "s"}, {"s", "u"}, {"h", "u"}, {"T", "h"}, {"T", "u"})]
AMBIGUOUS = ({"T", "h"}, {"T", "u"}, {"h", "u"})
CONTRACTING = ("water", "heavy-water", "helium")
POINTS = 48

STRICT = 1e-8


def one_phase(m: Model, n: int) -> States:
    T, p = random_states(m, n)
    points = flash(m, {"T": T, "p": p})
    keep = points.ok if m.name == "air" else np.ones(n, dtype=bool)
    assert points.ok[keep].all()
    return state_properties(m, flash(m, {"T": T[keep], "p": p[keep]}))


def two_phases(m: Model, n: int) -> States:
    rng = np.random.default_rng(seed(m.name))
    T = rng.uniform(m.T_limits[0], 0.9995 * m.T_c, n)
    return state_properties(m, flash(m, {"T": T, "x": rng.uniform(0.0, 1.0, n)}))


def near_critical(m: Model, n: int) -> States:
    rng = np.random.default_rng(seed(m.name))
    T = m.T_c * (1.0 + rng.choice([-1.0, 1.0], n) * 10.0 ** rng.uniform(-6.0, -1.5, n))
    p = m.p_c * (1.0 + rng.choice([-1.0, 1.0], n) * 10.0 ** rng.uniform(-6.0, -0.7, n))
    return state_properties(m, flash(m, {"T": T, "p": p}))


def check(m: Model, want: States, pair: tuple[str, str]) -> None:
    points = flash(m, {key: getattr(want, key) for key in pair})
    allowed = {0, reasons.TWO_SOLUTIONS} if set(pair) in AMBIGUOUS or m.name in CONTRACTING else {0}
    wrong = ~np.isin(points.reason, list(allowed))
    assert not wrong.any(), [(want.T[k], want.p[k], points.reason[k]) for k in np.flatnonzero(wrong)]
    got = state_properties(m, points)
    ok = points.ok
    RT = m.R * want.T
    scale = {"T": want.T, "v": want.v, "h": RT, "u": RT, "s": np.full(RT.shape, m.R)}
    slack = np.zeros(RT.shape)
    if set(pair) == {"s", "u"}:
        # p, and with it h, of a cold liquid drowns in the rounding of u: du = -p dv, with p v tiny beside u
        scale.pop("h")
        slack += 1e-10 / want.Z
    if "T" in pair and not {"h", "u"}.isdisjoint(pair):
        # h and u of a thin gas hardly depend on v
        thin = np.where(want.x == want.x, 1.0, want.Z - 1.0)
        slack += 1e-13 / np.maximum(np.abs(thin), 1e-9)
    for key, size in scale.items():
        miss = np.abs(getattr(got, key) - getattr(want, key)) / size
        far = ok & ~(miss < STRICT + slack)
        assert not far.any(), [(key, want.T[k], want.p[k], miss[k]) for k in np.flatnonzero(far)]
    soft = np.abs(want.v * m.residual.pressure(want.T, want.v).p_v)  # a liquid's p is no better than its v
    if "p" in pair or "T" in pair:
        loose = ok & (np.abs(got.p - want.p) > (STRICT + slack) * want.p + 1e-11 * soft)
        assert not (loose & (want.x != want.x)).any()
    twice = points.reason == reasons.TWO_SOLUTIONS
    if twice.any():
        miss = [
            np.abs(a / want.T - 1.0) + np.abs(b - want.p) / (want.p + 1e-5 * soft)
            for a, b in ((points.T, points.p), (points.T_other, points.p_other))
        ]
        found = np.fmin(*miss)[twice] < 1e-6
        if set(pair) == {"h", "u"}:
            assert np.mean(found) > 0.5
        else:
            assert found.all() or m.name in CONTRACTING


WHERE = {"one-phase": one_phase, "two-phase": two_phases}
# air, a mixture treated as one component, has no two-phase states
EVERY = [(name, where) for where in WHERE for name in NAMES if (name, where) != ("air", "two-phase")]


@pytest.mark.parametrize(("name", "where"), EVERY)
def test_every_substance(name: str, where: str) -> None:
    """The pairs that cost little, every substance."""
    m = model(name)
    want = WHERE[where](m, POINTS)
    for pair in QUICK:
        check(m, want, pair)


@pytest.mark.parametrize("pair", [pair for pair in PAIRS if pair not in QUICK], ids="-".join)
@pytest.mark.parametrize("name", [*some(0), "water"])
def test_dear_pairs(name: str, pair: tuple[str, str]) -> None:
    m = model(name)
    n = 8 if set(pair) == {"h", "u"} else 32
    check(m, one_phase(m, n), pair)
    if name != "air":
        check(m, two_phases(m, n // 2), pair)


@pytest.mark.parametrize("name", [*some(1), "water", "carbon-dioxide", "nitrogen"])
def test_near_the_critical_point(name: str) -> None:
    m = model(name)
    want = near_critical(m, POINTS)
    assert want.points.ok.all()
    for pair in QUICK:
        check(m, want, pair)
    check(m, want, ("h", "s"))


@pytest.mark.parametrize("name", sorted(set(some(2)) - {"air"}))
def test_quality_superheat_and_subcooling(name: str) -> None:
    m = model(name)
    T = np.linspace(m.T_limits[0] + 0.2 * (m.T_c - m.T_limits[0]), 0.99 * m.T_c, 9)
    for x in (0.0, 0.4, 1.0):
        want = state_properties(m, flash(m, {"T": T, "x": x}))
        assert want.points.ok.all()
        for key in "pvhsu":
            got = flash(m, {"x": x, key: getattr(want, key)})
            assert set(got.reason.tolist()) <= {0, reasons.TWO_SOLUTIONS}
            best = np.fmin(np.abs(got.T / T - 1.0), np.abs(got.T_other / T - 1.0))
            assert np.mean(best < 1e-9) > 0.8  # a third now and then
    p = flash(m, {"T": T, "x": 1.0}).p
    hot, cold = flash(m, {"p": p, "superheat": 3.0}), flash(m, {"p": p, "subcooling": 3.0})
    np.testing.assert_allclose(hot.T, T + 3.0, rtol=1e-12)
    np.testing.assert_allclose(cold.T, T - 3.0, rtol=1e-12)
    assert (hot.v > cold.v).all()
    again = flash(m, {"T": T, "phase": "saturated-liquid"})
    np.testing.assert_allclose(again.p, p, rtol=1e-13)
