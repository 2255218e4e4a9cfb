"""Starts and legs about a saturation line at 0.85 of the critical temperature, and the phases they pass."""

from __future__ import annotations

from functools import cache
from typing import Any

from solving import solve

from pathcalc.substances import read_card

SUBSTANCES = ("propane", "carbon-dioxide", "water", "r-134a", "ammonia")
WET = ("carbon-dioxide", "water", "ammonia")
"""Fluids whose saturated vapour gets wet in a reversible expansion from here (a slope of the T-s dome)."""
DRY = ("propane", "r-134a")

L, TWO, V, GAS = "liquid", "two-phase", "vapour", "gas"

# name: (start, leg, boundary, phases in the order of the path, substances)
LEGS: dict[str, tuple[str, str, str, tuple[str, ...], tuple[str, ...]]] = {
    "isobaric through": (
        "subcooling: 15 K, p: {p}", "path: isobaric, to: {{superheat: 20 K}}", "flow", (L, TWO, V), SUBSTANCES
    ),
    "isobaric back": (
        "superheat: 15 K, p: {p}", "path: isobaric, to: {{subcooling: 20 K}}", "closed", (V, TWO, L), SUBSTANCES
    ),
    "isobaric inside": ("x: 0.2, p: {p}", "path: isobaric, to: {{x: 0.7}}", "closed", (TWO,), SUBSTANCES),
    "isobaric from one edge to the other": (
        "x: 0, p: {p}", "path: isobaric, to: {{x: 1}}", "flow", (TWO,), SUBSTANCES
    ),
    "isothermal through": (
        "p: {above}, T: {T}", "path: isothermal, to: {{p: {{ratio: 0.2}}}}", "flow", (L, TWO, V), SUBSTANCES
    ),
    "isothermal from the edge": (
        "x: 1, T: {T}", "path: isothermal, to: {{p: {{ratio: 2}}}}", "closed", (TWO, L), SUBSTANCES
    ),
    "isothermal inside": ("x: 0.3, T: {T}", "path: isothermal, to: {{x: 0.1}}", "closed", (TWO,), SUBSTANCES),
    "isothermal to the edge": (
        "p: {above}, T: {T}", "path: isothermal, to: {{x: 0}}", "flow", (L,), SUBSTANCES
    ),
    "adiabatic vapour into": (
        "superheat: 5 K, p: {p}", "path: adiabatic, to: {{p: {{ratio: 0.4}}}}", "flow", (V, TWO), WET
    ),
    "adiabatic vapour stays dry": (
        "superheat: 5 K, p: {p}", "path: adiabatic, to: {{p: {{ratio: 0.4}}}}", "flow", (V,), DRY
    ),
    "adiabatic liquid into": (
        "subcooling: 5 K, p: {p}", "path: adiabatic, to: {{p: {{ratio: 0.4}}}}", "closed", (L, TWO), SUBSTANCES
    ),
    "adiabatic inside": (
        "x: 0.5, p: {p}", "path: adiabatic, to: {{p: {{ratio: 0.5}}}}", "closed", (TWO,), SUBSTANCES
    ),
    "adiabatic out of": (
        "x: 0.97, p: {p}", "path: adiabatic, to: {{p: {{ratio: 2}}}}", "closed", (TWO, V), WET
    ),
    "turbine into": (
        "superheat: 5 K, p: {p}",
        "path: adiabatic, to: {{p: {{ratio: 0.4}}}}, efficiency: 0.9",
        "flow",
        (V, TWO, TWO),
        WET,
    ),
    "polytropic turbine into": (
        "superheat: 5 K, p: {p}",
        "path: adiabatic, to: {{p: {{ratio: 0.4}}}}, polytropic_efficiency: 0.9",
        "flow",
        (V, TWO),
        WET,
    ),
    "polytropic turbine of liquid": (
        "subcooling: 5 K, p: {p}",
        "path: adiabatic, to: {{p: {{ratio: 0.4}}}}, polytropic_efficiency: 0.8",
        "flow",
        (L, TWO),
        SUBSTANCES,
    ),
    "isochoric out of": (
        "x: 0.9, p: {p}", "path: isochoric, to: {{T: {{ratio: 1.4}}}}", "closed", (TWO, GAS), SUBSTANCES
    ),
    "isochoric into": (
        "superheat: 10 K, p: {p}", "path: isochoric, to: {{T: {{ratio: 0.85}}}}", "flow", (V, TWO), SUBSTANCES
    ),
    "throttling liquid into": (
        "subcooling: 5 K, p: {p}", "path: throttling, to: {{p: {{ratio: 0.4}}}}", "flow", (L, TWO), SUBSTANCES
    ),
    "throttling inside": (
        "x: 0.4, p: {p}", "path: throttling, to: {{p: {{ratio: 0.5}}}}", "flow", (TWO,), SUBSTANCES
    ),
    "throttling from wet to dry": (
        "x: 0.99, p: {p}", "path: throttling, to: {{p: {{ratio: 0.3}}}}", "flow", (TWO, V), ("propane", "water")
    ),
    "free expansion of liquid": (
        "subcooling: 5 K, p: {p}", "path: free-expansion, to: {{v: {{ratio: 3}}}}", "closed", (L, TWO), SUBSTANCES
    ),
    "free expansion from wet to dry": (
        "x: 0.95, p: {p}", "path: free-expansion, to: {{v: {{ratio: 4}}}}", "closed", (TWO, V), ("propane",)
    ),
    "polytropic into": (
        "subcooling: 5 K, p: {p}",
        "path: polytropic, exponent: 0.3, to: {{v: {{ratio: 30}}}}",
        "closed",
        (L, TWO),
        SUBSTANCES,
    ),
    "workless through": (
        "subcooling: 10 K, p: {p}",
        "path: workless, to: {{superheat: 10 K}}, pressure_drop: 0.2 bar",
        "flow",
        (L, TWO, V),
        SUBSTANCES,
    ),
}  # fmt: skip


@cache
def saturation(substance: str, equation: str) -> tuple[float, float]:
    """T and p of the line the cases are about."""
    T = 0.85 * read_card(substance).T_c.value
    solution = solve(
        f"substance: {substance}, equation: {equation}",
        f"T: {T!r} K, x: 0",
        "name: a, path: isothermal, to: {x: 1}",
    )
    return T, float(solution.states["start"].p)


@cache
def solved(name: str, substance: str, equation: str) -> Any:
    """The solution of one of ``LEGS``."""
    start, leg, boundary, _, _ = LEGS[name]
    T, p = saturation(substance, equation)
    given = {"T": f"{T!r} K", "p": f"{p!r} Pa", "above": f"{1.5 * p!r} Pa"}
    return solve(
        f"substance: {substance}, equation: {equation}",
        start.format(**given),
        f"name: a, {leg.format()}",
        boundary=boundary,
    )


ALL = [(name, fluid) for name, (*_, fluids) in LEGS.items() for fluid in fluids]
EQUATIONS = ("soave", "peng-robinson")
