"""Models for the tests of the equations."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest

from pathcalc.equations.build import build_model
from pathcalc.equations.contract import Model
from pathcalc.substances import read_card
from pathcalc.substances.card import Constant

CUBICS = ("van-der-waals", "redlich-kwong", "soave", "peng-robinson")
EQUATIONS = ("ideal-gas", *CUBICS, "virial")


@pytest.fixture(params=EQUATIONS)
def any_model(request: pytest.FixtureRequest) -> Model:
    return build_model(read_card("propane"), request.param)


@pytest.fixture(params=CUBICS)
def cubic_model(request: pytest.FixtureRequest) -> Model:
    return build_model(read_card("propane"), request.param, volume_shift=4e-6)


@pytest.fixture
def octane() -> Callable[[str], Model]:
    """n-octane with the constants of the worked examples of Y. V. C. Rao (Tc 569.4 K, pc 24.97 bar, ω 0.398)."""
    card = read_card("octane")
    given = {"T_c": 569.4, "p_c": 24.97e5, "acentric": 0.398}
    constants = {**card.constants, **{k: Constant(v, "rao") for k, v in given.items()}}
    card = replace(card, constants=constants)
    return lambda equation: build_model(card, equation)
