"""Legs over the dome on reference equations, and what they come to by another library alone.

Every case starts from the saturation line at 0.85 of the critical temperature; ``expected`` gives the state at the end
and the heat and work into the fluid from the definition of the leg and the library's states.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from typing import Any

from library import NAMES, Library, State
from solving import solve

SUBSTANCES = tuple(NAMES)
WET = ("water", "carbon-dioxide", "nitrogen", "ammonia", "methane", "hydrogen")
"""Fluids whose saturated vapour gets wet in a reversible expansion from here (a slope of the T-s dome)."""
HALF, OTHER_HALF = SUBSTANCES[::2], SUBSTANCES[1::2]
L, TWO, V = "liquid", "two-phase", "vapour"


@dataclass(frozen=True)
class Result:
    """End of a leg, heat and work (J/kg), and entropy generated (J/(kg K))."""

    end: State
    heat: float
    work: float
    entropy_generated: float = 0.0


@cache
def library(substance: str) -> Library:
    """The library's states of a substance."""
    return Library(substance)


@dataclass(frozen=True)
class Where:
    """The saturation line a case is about: the temperature and pressure, and temperature steps in parts of T_c."""

    lib: Library
    T: float
    p: float

    def start(self, kind: str) -> State:
        """Subcooled by 0.04 T_c, superheated by 0.04 T_c, compressed, rarefied or of a quality."""
        if kind in ("subcooled", "superheated"):
            return self.lib.of(p=self.p, T=self.T + (0.04 if kind == "superheated" else -0.04) * self.lib.T_c)
        if kind in ("compressed", "rarefied"):
            return self.lib.of(p=(1.5 if kind == "compressed" else 0.5) * self.p, T=self.T)
        return self.lib.of(T=self.T, x=float(kind))


@cache
def where(substance: str) -> Where:
    """The line at 0.85 of the critical temperature."""
    lib = library(substance)
    T = 0.85 * lib.T_c
    return Where(lib, T, lib.of(T=T, x=1.0).p)


Expected = Callable[[Where, State], Result]


def _isobaric(steps: float, *, flow: bool) -> Expected:
    def expected(w: Where, a: State) -> Result:
        b = w.lib.of(p=a.p, T=w.T + steps * w.lib.T_c)
        return Result(b, b.h - a.h, 0.0 if flow else -a.p * (b.v - a.v))

    return expected


def _isobaric_by_heat(w: Where, a: State) -> Result:
    heat = 0.5 * (w.lib.of(T=w.T, x=1.0).h - a.h)
    b = w.lib.of(h=a.h + heat, p=a.p)
    return Result(b, heat, -a.p * (b.v - a.v))


def _isochoric(ratio: float, *, flow: bool) -> Expected:
    def expected(w: Where, a: State) -> Result:
        b = w.lib.of(T=ratio * a.T, v=a.v)
        return Result(b, b.u - a.u, a.v * (b.p - a.p) if flow else 0.0)

    return expected


def _isentropic(ratio: float, efficiency: float = 1.0, *, flow: bool) -> Expected:
    def expected(w: Where, a: State) -> Result:
        b = w.lib.of(p=ratio * a.p, s=a.s)
        if efficiency != 1.0:
            factor = efficiency if ratio < 1.0 else 1.0 / efficiency
            b = w.lib.of(h=a.h + factor * (b.h - a.h), p=ratio * a.p)
        return Result(b, 0.0, b.h - a.h if flow else b.u - a.u, b.s - a.s if efficiency != 1.0 else 0.0)

    return expected


def _throttling(w: Where, a: State) -> Result:
    b = w.lib.of(h=a.h, p=0.4 * a.p)
    return Result(b, 0.0, 0.0, b.s - a.s)


def _isothermal(ratio: float, *, flow: bool) -> Expected:
    def expected(w: Where, a: State) -> Result:
        b = w.lib.of(p=ratio * a.p, T=a.T)
        return Result(b, a.T * (b.s - a.s), b.g - a.g if flow else b.a - a.a)

    return expected


def _free_expansion(w: Where, a: State) -> Result:
    b = w.lib.at_volume(3.0 * a.v, a.u, w.T)
    return Result(b, 0.0, 0.0, b.s - a.s)


def _against_pressure(w: Where, a: State) -> Result:
    against, v = 0.3 * w.p, 4.0 * a.v
    work = -against * (v - a.v)
    b = w.lib.at_volume(v, a.u + work, w.T)
    return Result(b, 0.0, work, b.s - a.s)


def _polytropic(w: Where, a: State) -> Result:
    n, v = 0.3, 12.0 * a.v
    b = w.lib.of(p=a.p * (a.v / v) ** n, v=v)
    work = -(b.p * b.v - a.p * a.v) / (1.0 - n)
    return Result(b, b.u - a.u - work, work)


def _polytropic_between(w: Where, a: State) -> Result:
    from math import log

    b = w.lib.of(p=1.3 * a.p, T=0.9 * a.T)
    n = log(b.p / a.p) / log(a.v / b.v)
    work = n * (b.p * b.v - a.p * a.v) / (n - 1.0)
    return Result(b, b.h - a.h - work, work)


def _workless(w: Where, a: State) -> Result:
    b = w.lib.of(p=0.9 * a.p, T=w.T + 0.02 * w.lib.T_c)
    return Result(b, b.h - a.h, 0.0, b.s - a.s - w.lib.heat_over_T(a, b))


def _saturation(w: Where, a: State) -> Result:
    b = w.lib.of(T=1.1 * a.T, x=a.x)
    v_dp = w.lib.saturation_v_dp(a.x, a.T, b.T)
    work = v_dp - (b.p * b.v - a.p * a.v)
    return Result(b, b.u - a.u - work, work)


def _separated(x: float) -> Expected:
    def expected(w: Where, a: State) -> Result:
        return Result(w.lib.of(T=a.T, x=x), 0.0, 0.0)

    return expected


def _mixed(w: Where, a: State) -> Result:
    other = w.start("subcooled")
    h = (a.h + 0.6 * other.h) / 1.6
    b = w.lib.of(h=h, p=a.p)
    return Result(b, 0.0, 0.0, b.s - (a.s + 0.6 * other.s) / 1.6)


@dataclass(frozen=True)
class Case:
    """A leg: where it starts, its text, what it comes to, the phases it passes."""

    boundary: str
    start: str
    leg: str
    expected: Expected
    phases: tuple[str, ...]
    substances: tuple[str, ...] = SUBSTANCES


CASES: dict[str, Case] = {
    "evaporating at constant pressure": Case(
        "flow", "subcooled", "path: isobaric, to: {{T: {warm!r} K}}", _isobaric(0.06, flow=True), (L, TWO, V)
    ),
    "condensing at constant pressure": Case(
        "closed", "superheated", "path: isobaric, to: {{T: {cold!r} K}}", _isobaric(-0.06, flow=False), (V, TWO, L)
    ),
    "half evaporated by a given heat": Case(
        "closed", "0.0", "path: isobaric, to: {{heat: {half!r} J/kg}}", _isobaric_by_heat, (TWO,), OTHER_HALF
    ),
    "dried at constant volume": Case(
        "closed", "0.8", "path: isochoric, to: {{T: {{ratio: 1.3}}}}", _isochoric(1.3, flow=False), (TWO, V)
    ),
    "filled with liquid at constant volume": Case(
        "closed", "0.01", "path: isochoric, to: {{T: {{ratio: 1.17}}}}", _isochoric(1.17, flow=False), (TWO, L),
        OTHER_HALF,
    ),
    "condensing at constant volume": Case(
        "flow", "superheated", "path: isochoric, to: {{T: {{ratio: 0.85}}}}", _isochoric(0.85, flow=True), (V, TWO),
        OTHER_HALF,
    ),
    "wetted by expansion": Case(
        "closed", "1.0", "path: adiabatic, to: {{p: {{ratio: 0.3}}}}", _isentropic(0.3, flow=False), (TWO,), WET
    ),
    "superheated, then wetted by expansion": Case(
        "flow", "superheated", "path: adiabatic, to: {{p: {{ratio: 0.3}}}}", _isentropic(0.3, flow=True), (V, TWO), WET
    ),
    "dry by expansion": Case(
        "flow", "superheated", "path: adiabatic, to: {{p: {{ratio: 0.3}}}}", _isentropic(0.3, flow=True), (V,),
        ("propane", "r-134a"),
    ),
    "turbine": Case(
        "flow", "superheated", "path: adiabatic, to: {{p: {{ratio: 0.3}}}}, efficiency: 0.8",
        _isentropic(0.3, 0.8, flow=True), (V, TWO, TWO), ("carbon-dioxide", "nitrogen", "ammonia", "water"),
    ),
    "flashing by expansion": Case(
        "closed", "subcooled", "path: adiabatic, to: {{p: {{ratio: 0.4}}}}", _isentropic(0.4, flow=False), (L, TWO)
    ),
    "liquid expander": Case(
        "flow", "subcooled", "path: adiabatic, to: {{p: {{ratio: 0.4}}}}, efficiency: 0.7",
        _isentropic(0.4, 0.7, flow=True), (L, TWO, TWO), HALF
    ),
    "pump": Case(
        "flow", "0.0", "path: adiabatic, to: {{p: {{ratio: 3}}}}, efficiency: 0.7",
        _isentropic(3.0, 0.7, flow=True), (L, L),
    ),
    "wet compression": Case(
        "flow", "0.95", "path: adiabatic, to: {{p: {{ratio: 1.9}}}}, efficiency: 0.75",
        _isentropic(1.9, 0.75, flow=True), (TWO, V, V), ("carbon-dioxide", "ammonia", "water"),
    ),
    "throttle": Case(
        "flow", "subcooled", "path: throttling, to: {{p: {{ratio: 0.4}}}}", _throttling, (L, TWO)
    ),
    "condensing at constant temperature": Case(
        "closed", "rarefied", "path: isothermal, to: {{p: {{ratio: 3}}}}", _isothermal(3.0, flow=False), (V, TWO, L)
    ),
    "evaporating at constant temperature": Case(
        "flow", "compressed", "path: isothermal, to: {{p: {{ratio: 0.3}}}}", _isothermal(0.3, flow=True), (L, TWO, V)
    ),
    "free expansion": Case(
        "closed", "subcooled", "path: free-expansion, to: {{v: {{ratio: 3}}}}", _free_expansion, (L, TWO)
    ),
    "against a pressure": Case(
        "closed", "subcooled", "path: adiabatic, to: {{v: {{ratio: 4}}}}, against: {outer!r} Pa",
        _against_pressure, (L, TWO, TWO), OTHER_HALF
    ),
    "polytropic": Case(
        "closed", "subcooled", "path: polytropic, exponent: 0.3, to: {{v: {{ratio: 12}}}}", _polytropic, (L, TWO)
    ),
    "polytropic between two states": Case(
        "flow", "superheated", "path: polytropic, to: {{p: {{ratio: 1.3}}, T: {{ratio: 0.9}}}}",
        _polytropic_between, (V, TWO, L), HALF
    ),
    "evaporator with friction": Case(
        "flow", "subcooled", "path: workless, to: {{T: {nearly!r} K}}, pressure_drop: {drop!r} Pa", _workless,
        (L, TWO, V), HALF
    ),
    "shut vessel": Case(
        "closed", "0.3", "path: saturation, to: {{T: {{ratio: 1.1}}}}", _saturation, (TWO,), OTHER_HALF
    ),
    "vapour of a drum": Case(
        "flow", "0.3", "path: separation, keep: vapour", _separated(1.0), (TWO,), HALF
    ),
    "liquid of a drum": Case(
        "flow", "0.3", "path: separation, keep: liquid", _separated(0.0), (TWO,), OTHER_HALF
    ),
    "liquid sprayed into vapour": Case(
        "flow", "superheated",
        "path: mixing, with: {{state: {{T: {spray!r} K, p: {p!r} Pa}}, amount: 0.6 kg/s}}", _mixed, (V, TWO), HALF
    ),
}  # fmt: skip
ALL = [(name, substance) for name, case in CASES.items() for substance in case.substances]


@cache
def solved(name: str, substance: str) -> Any:
    """The program's solution."""
    case, w = CASES[name], where(substance)
    a = w.start(case.start)
    second = f"x: {case.start}" if a.x == a.x else f"p: {a.p!r} Pa"
    step = w.lib.T_c
    leg = case.leg.format(
        warm=w.T + 0.06 * step,
        cold=w.T - 0.06 * step,
        nearly=w.T + 0.02 * step,
        drop=0.1 * a.p,
        outer=0.3 * w.p,
        half=0.5 * (w.lib.of(T=w.T, x=1.0).h - a.h),
        spray=w.T - 0.04 * step,
        p=w.p,
    )
    return solve(
        f"substance: {substance}, equation: reference",
        f"T: {a.T!r} K, {second}",
        f"name: a, {leg}",
        boundary=case.boundary,
        more=f"amount: 1 kg{'/s' if case.boundary == 'flow' else ''}\n",
    )


@cache
def by_library(name: str, substance: str) -> tuple[State, Result]:
    """Start and outcome by the library alone."""
    case, w = CASES[name], where(substance)
    a = w.start(case.start)
    return a, case.expected(w, a)
