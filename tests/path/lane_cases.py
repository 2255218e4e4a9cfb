"""Cases for the tests of lanes: fluid, start, legs, boundary and seeded arrays over the lanes."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np


class LaneCase(NamedTuple):
    """A case and functions of (generator, n) that give its lane values; ``bad``: one lane's values that fail."""

    fluid: str
    start: str
    legs: tuple[str, ...]
    boundary: str
    lanes: dict[str, Any]
    bad: dict[str, float]


def spread(low: float, high: float) -> Any:
    """Uniform values."""
    return lambda rng, n: rng.uniform(low, high, n)


PROPANE = "substance: propane, equation: peng-robinson"
CO2 = "substance: carbon-dioxide, equation: soave"

CASES = {
    "compression with efficiency": LaneCase(
        PROPANE,
        "T: 340 K, p: 5 bar",
        ("name: a, path: adiabatic, to: {p: 12 bar}, efficiency: 0.8",),
        "flow",
        {
            "start.T": spread(310.0, 400.0),
            "start.p": spread(1e5, 6e5),
            "a.p": spread(8e5, 30e5),
            "a.efficiency": spread(0.5, 0.95),
        },
        {"start.T": 60.0},
    ),
    "throttling": LaneCase(
        CO2,
        "T: 300 K, p: 60 bar",
        ("name: a, path: throttling, to: {p: {ratio: 0.4}}",),
        "flow",
        {"start.T": spread(250.0, 285.0), "start.p": spread(60e5, 100e5), "a.p": spread(0.3, 0.9)},
        {"start.p": -1e5},
    ),
    "isobaric through the dome": LaneCase(
        PROPANE,
        "T: 280 K, p: 15 bar",
        ("name: a, path: isobaric, to: {T: 360 K}",),
        "closed",
        {"start.T": spread(240.0, 300.0), "start.p": spread(11e5, 40e5), "a.T": spread(365.0, 420.0)},
        {"a.T": 20.0},
    ),
    "polytropic efficiency": LaneCase(
        CO2,
        "T: 300 K, p: 5 bar",
        ("name: a, path: adiabatic, to: {p: {ratio: 4}}, polytropic_efficiency: 0.8",),
        "flow",
        {
            "start.T": spread(280.0, 400.0),
            "start.p": spread(1e5, 20e5),
            "a.p": spread(0.6, 5.0),
            "a.polytropic_efficiency": spread(0.6, 0.95),
        },
        {"a.p": 1e-7},
    ),
    "polytrope to a temperature": LaneCase(
        PROPANE,
        "T: 340 K, p: 5 bar",
        ("name: a, path: polytropic, exponent: 1.1, to: {T: 380 K}",),
        "closed",
        {"start.T": spread(310.0, 350.0), "start.p": spread(1e5, 8e5), "a.T": spread(355.0, 420.0)},
        {"a.T": 9e4},
    ),
    "three legs": LaneCase(
        PROPANE,
        "T: 340 K, p: 5 bar",
        (
            "name: a, path: adiabatic, to: {p: {ratio: 3}}, efficiency: 0.8",
            "name: b, path: workless, to: {subcooling: 5 K}, pressure_drop: 0.1 bar",
            "name: c, path: throttling, to: {p: {same_as: start}}",
        ),
        "flow",
        {
            "start.T": spread(320.0, 380.0),
            "start.p": spread(2e5, 8e5),
            "a.p": spread(2.0, 4.0),
            "b.pressure_drop": spread(0.0, 0.5e5),
        },
        {"b.pressure_drop": 1e8},
    ),
}


def arrays(case: LaneCase, n: int, seed: int = 3) -> dict[str, Any]:
    """Seeded lane values."""
    rng = np.random.default_rng(seed)
    return {address: make(rng, n) for address, make in case.lanes.items()}
