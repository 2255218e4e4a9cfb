"""Where a reference equation ends: solid, too cold, too hot, too dense; a reason, never a number."""

from __future__ import annotations

import numpy as np
import pytest
from substances import NAMES, model, rows, some

from pathcalc.equations.build import build_model
from pathcalc.equilibrium import reasons
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.metastable import metastable
from pathcalc.equilibrium.saturation import saturation_at_T
from pathcalc.equilibrium.states import state_properties
from pathcalc.substances import read_card

MELTING = [name for name in NAMES if model(name).residual.reference.melting]


def test_melting_pressures_of_water() -> None:
    """IAPWS R14-08(2011), table 3: liquid just below the line, an error just above it.

    Between 251 and 273 K the lowest of several lines counts, that of ice Ih; ice VII lies beyond the equation.
    """
    m = model("water")
    checked = 0
    for row in rows("iapws_melting_sublimation.csv"):
        T, p = float(row["T"]), 1e6 * float(row["p"])
        if row["curve"] not in ("ice Ih melting", "ice VI melting"):
            continue
        line = m.residual.limits.melting_pressure(np.array([T]))[0]
        assert line == pytest.approx(p, rel=5e-6)
        checked += 1
        if m.T_limits[0] > T:
            assert flash(m, {"T": T, "p": 0.999 * p}).reason[0] == reasons.BELOW_TRIPLE_POINT
        elif p < m.residual.limits.p_max:
            got = flash(m, {"T": T, "p": p * np.array([0.9999, 1.0001])})
            assert got.reason.tolist() == [0, reasons.INSIDE_SOLID]
    assert checked == 2


@pytest.mark.parametrize("name", MELTING)
def test_no_state_inside_the_solid(name: str) -> None:
    m = model(name)
    T = np.linspace(1.0001 * m.T_limits[0], 1.3 * m.T_limits[0], 7)
    melting = m.residual.limits.melting_pressure(T)
    T, melting = T[melting < 0.9 * m.residual.limits.p_max], melting[melting < 0.9 * m.residual.limits.p_max]
    assert T.size
    assert flash(m, {"T": T, "p": 0.999 * melting}).ok.all()
    solid = flash(m, {"T": T, "p": 1.001 * melting})
    assert (solid.reason == reasons.INSIDE_SOLID).all()
    assert np.isnan(solid.v).all()
    inside = flash(m, {"T": T, "p": 0.999 * melting})
    denser = flash(m, {"T": T, "v": 0.99 * inside.v})
    assert not denser.ok.any()
    assert np.isnan(state_properties(m, denser).h).all()


@pytest.mark.parametrize("name", NAMES)
def test_temperature_and_pressure_limits(name: str) -> None:
    m = model(name)
    low, high = m.T_limits
    p_max = m.residual.limits.p_max
    hot = 0.9 * high
    got = flash(m, {"T": [0.999 * low, 1.001 * high, hot, hot], "p": [1e5, 1e5, 1.01 * p_max, 0.99 * p_max]})
    assert got.reason[:3].tolist() == [reasons.BELOW_TRIPLE_POINT, reasons.ABOVE_RANGE, reasons.ABOVE_PRESSURE]
    assert got.reason[3] in (0, reasons.INSIDE_SOLID)
    for array in (got.T, got.p, got.v, got.x):
        assert np.isnan(array[:3]).all()
    warm = flash(m, {"T": 0.95 * high, "p": 1e5})
    s = state_properties(m, warm)
    for key in ("h", "s", "u"):
        shift = 10.0 * m.R * (high if key != "s" else 1.0)
        far = flash(m, {"p": [1e5, 1e5], key: getattr(s, key)[0] + np.array([-40.0, 4.0]) * shift})
        assert far.reason[0] == reasons.BELOW_TRIPLE_POINT
        assert far.reason[1] == reasons.ABOVE_RANGE


@pytest.mark.parametrize("name", some(3))
def test_bad_values_give_reasons(name: str) -> None:
    """No NaN, infinity or negative value reaches a result as a number."""
    m = model(name)
    bad = np.array([np.nan, np.inf, -np.inf, -1.0, 0.0, 1e300, 5e-324])
    for pair in ("Tp", "ph", "ps", "pu", "pv", "Ts", "Th", "Tv", "vh", "hs", "xT", "xp"):
        for first, second in ((pair[0], pair[1]), (pair[1], pair[0])):
            good = {"T": 1.1 * m.T_c, "p": 1e6, "v": 2.0 * m.v_c, "h": 0.0, "s": 0.0, "u": 0.0, "x": 0.5}[second]
            got = flash(m, {first: bad, second: np.full(bad.size, good)})
            states = state_properties(m, got)
            for array in (states.T, states.p, states.v, states.h, states.s, states.cp, states.sound_speed):
                assert not np.isinf(array).any()
                assert np.isnan(array[~got.ok]).all() or array is states.T or array is states.p
            assert np.isfinite(states.h[got.ok]).all()


def test_air_has_no_states_between_dew_and_bubble() -> None:
    """As the equation of air treats the mixture as one component (Lemmon et al., 2000)."""
    m = model("air")
    dew, bubble = m.residual.limits.dew_and_bubble(np.array([100.0]))
    assert dew[0] < bubble[0]
    p = np.array([0.99 * dew[0], 0.5 * (dew[0] + bubble[0]), 1.01 * bubble[0]])
    between = reasons.BETWEEN_DEW_AND_BUBBLE
    assert flash(m, {"T": 100.0, "p": p}).reason.tolist() == [0, between, 0]
    assert flash(m, {"T": 100.0, "x": 0.5}).reason[0] == between


@pytest.mark.parametrize("name", ["water", "nitrogen", "propane", "R-134a", "carbon-dioxide"])
def test_metastable_states_only_when_asked(name: str) -> None:
    m = model(name)
    T = np.full(3, 0.9 * m.T_c)
    p_s = saturation_at_T(m, T).p
    p = p_s * np.array([0.95, 1.0 + 1e-6, 1.05])
    stable = flash(m, {"T": T, "p": p})
    liquid, vapour = metastable(m, T, p, liquid=True), metastable(m, T, p, liquid=False)
    assert liquid.ok.all()
    assert vapour.ok.all()
    assert stable.v[0] == vapour.v[0]
    assert stable.v[2] == liquid.v[2]
    assert liquid.v[0] > saturation_at_T(m, T).v_liquid[0] > stable.v[2]
    assert vapour.v[2] < saturation_at_T(m, T).v_vapour[0] < stable.v[0]
    # the state of lower Gibbs energy is the one that flash gives
    g = [state_properties(m, points).g for points in (liquid, vapour)]
    assert g[1][0] < g[0][0]
    assert g[0][2] < g[1][2]
    for points in (liquid, vapour):
        again = m.residual.pressure(points.T, points.v)
        np.testing.assert_allclose(again.p, p, rtol=1e-9)
        assert (again.p_v < 0.0).all()
    # beyond the limit of mechanical stability there is nothing
    far = metastable(m, T, p_s * np.array([2.0, 3.0, 5.0]), liquid=False)
    assert (far.reason == reasons.NO_ROOT).all()
    assert metastable(m, np.array([1.1 * m.T_c]), p[:1], liquid=True).reason[0] == reasons.ABOVE_CRITICAL


def test_metastable_states_of_a_cubic() -> None:
    m = build_model(read_card("propane"), "peng-robinson")
    T = np.array([300.0])
    p_s = saturation_at_T(m, T).p
    got = metastable(m, T, 0.9 * p_s, liquid=True)
    assert got.ok.all()
    assert got.v[0] < m.v_c
    assert flash(m, {"T": T, "p": 0.9 * p_s}).v[0] > m.v_c
