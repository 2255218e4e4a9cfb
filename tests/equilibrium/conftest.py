"""Models for the tests of equilibrium."""

from __future__ import annotations

import pytest

from pathcalc.equations.build import build_model
from pathcalc.equations.contract import Model
from pathcalc.substances import read_card

CUBICS = ("van-der-waals", "redlich-kwong", "soave", "peng-robinson")


@pytest.fixture(scope="session", params=("ideal-gas", *CUBICS, "virial"))
def any_model(request: pytest.FixtureRequest) -> Model:
    return build_model(read_card("nitrogen"), request.param)


@pytest.fixture(scope="session", params=CUBICS)
def cubic_model(request: pytest.FixtureRequest) -> Model:
    return build_model(read_card("propane"), request.param)


@pytest.fixture(scope="session")
def robinson() -> Model:
    return build_model(read_card("propane"), "peng-robinson")
