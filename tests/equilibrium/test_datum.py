"""Datums put zero where they say, and move nothing that can be measured."""

from __future__ import annotations

import numpy as np
import pytest

from pathcalc.equations.build import build_model
from pathcalc.equilibrium.datum import DATUMS, with_datum
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.states import state_properties
from pathcalc.errors import NoSolutionError, UsageError
from pathcalc.substances import read_card


def test_zero_is_where_it_should_be() -> None:
    m = build_model(read_card("propane"), "peng-robinson")
    a = with_datum(m, "triple-liquid")
    s = state_properties(a, flash(a, {"T": m.T_triple, "x": 0.0}))
    assert abs(s.u[0]) < 1e-9
    assert abs(s.s[0]) < 1e-11
    b = with_datum(m, "boiling-liquid")
    s = state_properties(b, flash(b, {"p": 101325.0, "x": 0.0}))
    assert abs(s.h[0]) < 1e-8
    assert abs(s.s[0]) < 1e-10
    c = with_datum(a, "liquid-0C")
    s = state_properties(c, flash(c, {"T": 273.15, "x": 0.0}))
    assert s.h[0] / m.M == pytest.approx(200e3, abs=1e-6)
    assert s.s[0] / m.M == pytest.approx(1e3, abs=1e-8)
    assert with_datum(c, "ideal-gas-298") == m


@pytest.mark.parametrize("name", DATUMS)
def test_differences_do_not_depend_on_the_datum(name: str) -> None:
    m = build_model(read_card("propane"), "soave")
    n = with_datum(m, name)
    pair = {"T": np.array([280.0, 420.0]), "p": np.array([2e6, 3e5])}
    a, b = state_properties(m, flash(m, pair)), state_properties(n, flash(n, pair))
    assert b.h[1] - b.h[0] == pytest.approx(a.h[1] - a.h[0], rel=1e-12)
    assert b.s[1] - b.s[0] == pytest.approx(a.s[1] - a.s[0], rel=1e-12)
    back = flash(n, {"p": b.p, "s": b.s})
    np.testing.assert_allclose(back.T, pair["T"], rtol=1e-12)


@pytest.mark.parametrize(("substance", "name"), [("nitrogen", "liquid-0C"), ("carbon-dioxide", "boiling-liquid")])
def test_no_such_liquid(substance: str, name: str) -> None:
    m = build_model(read_card(substance), "peng-robinson")
    with pytest.raises(NoSolutionError, match="ideal-gas-298"):
        with_datum(m, name)
    with pytest.raises(NoSolutionError):
        with_datum(build_model(read_card(substance), "ideal-gas"), "triple-liquid")
    with pytest.raises(UsageError):
        with_datum(m, "elsewhere")
