"""Legs of coexisting phases: along saturation at constant quality, phases parted, streams joined."""

from __future__ import annotations

from typing import Any

import pytest

import pathcalc
from pathcalc.errors import NoSolutionError

HEAD = """
pathcalc: 1
title: Coexisting phases
fluid: {{substance: {substance}, equation: {equation}}}
boundary: {boundary}
{amount}
start: {start}
legs:
"""


def solved(
    legs: str,
    start: str,
    boundary: str = "flow",
    amount: str = "amount: 1 kg/s",
    substance: str = "propane",
    equation: str = "peng-robinson",
) -> Any:
    head = HEAD.format(substance=substance, equation=equation, boundary=boundary, amount=amount, start=start)
    return pathcalc.solve(pathcalc.loads(head + legs))


def passed(solution: Any) -> None:
    failed = [row for row in solution.checks if not row["passed"]]
    assert not failed
    assert all(leg.maxwell.closure < 1e-9 for leg in solution.legs.values())


@pytest.mark.parametrize("x", [0.0, 0.25, 0.75, 1.0])
@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("equation", ["soave", "van-der-waals"])
def test_saturation_keeps_the_quality(x: float, boundary: str, equation: str) -> None:
    amount = "amount: 1 kg/s" if boundary == "flow" else "amount: 1 kg"
    solution = solved(
        "  - {name: line, path: saturation, to: {T: 320 K}}\n",
        f"{{T: 260 K, x: {x}}}",
        boundary,
        amount,
        equation=equation,
    )
    passed(solution)
    end = solution.states["line"]
    fluid = pathcalc.fluid("propane", equation)
    ends = [fluid.state(T=T, x=x) for T in (260.0, 320.0)]
    assert end.x == pytest.approx(x, abs=1e-12)
    assert end.p == pytest.approx(ends[1].p, rel=1e-10)
    leg = solution.legs["line"]
    assert leg.delta["s"] == pytest.approx(ends[1].s - ends[0].s, rel=1e-9)
    change = leg.delta["h" if boundary == "flow" else "u"]
    assert leg.heat + leg.work == pytest.approx(change, rel=1e-12)


def test_saturation_work_is_the_integral_of_p_dv() -> None:
    """Against a trapezoidal sum over states of the fluid handle, to the accuracy of the sum."""
    import numpy as np

    solution = solved("  - {name: line, path: saturation, to: {T: 320 K}}\n", "{T: 260 K, x: 0.4}", "closed", "")
    states = pathcalc.fluid("propane", "peng-robinson").state(T=np.linspace(260.0, 320.0, 2001), x=0.4)
    work = -np.sum(0.5 * (states.p[1:] + states.p[:-1]) * np.diff(states.v))
    assert solution.legs["line"].work == pytest.approx(work, rel=1e-5)


def test_saturation_needs_a_saturated_inlet() -> None:
    with pytest.raises(NoSolutionError, match="not saturated"):
        solved("  - {name: line, path: saturation, to: {T: 320 K}}\n", "{T: 300 K, p: 1 bar}")


@pytest.mark.parametrize("keep", ["vapour", "liquid"])
def test_separation_keeps_its_share(keep: str) -> None:
    legs = (
        "  - {name: valve, path: throttling, to: {p: 5 bar}}\n"
        f"  - {{name: drum, path: separation, keep: {keep}}}\n"
        "  - {name: after, path: isobaric, to: {T: 300 K}}\n"
    )
    solution = solved(legs, "{p: 14 bar, subcooling: 2 K}")
    passed(solution)
    x = solution.states["valve"].x
    share = x if keep == "vapour" else 1.0 - x
    assert solution.legs["valve"].amount == pytest.approx(1.0, rel=1e-14)
    assert solution.legs["drum"].amount == pytest.approx(share, rel=1e-12)
    assert solution.legs["after"].amount == pytest.approx(share, rel=1e-12)
    assert solution.states["drum"].x == (1.0 if keep == "vapour" else 0.0)
    assert pytest.approx(solution.states["valve"].T, rel=1e-12) == solution.states["drum"].T
    assert solution.legs["drum"].entropy_generated == 0.0
    after = solution.legs["after"]
    assert solution.totals.heat == pytest.approx(share * after.heat, rel=1e-12)


def test_both_phases_carry_the_enthalpy_of_the_inlet() -> None:
    legs = "  - {{name: valve, path: throttling, to: {{p: 5 bar}}}}\n  - {{name: drum, path: separation, keep: {0}}}\n"
    parts = [solved(legs.format(keep), "{p: 14 bar, subcooling: 2 K}") for keep in ("vapour", "liquid")]
    inlet = parts[0].states["valve"]
    for key in ("h", "s", "v", "g"):
        both = sum(part.legs["drum"].amount * part.states["drum"][key] for part in parts)
        assert both == pytest.approx(inlet[key], rel=1e-11)


def test_separation_needs_two_phases() -> None:
    with pytest.raises(NoSolutionError, match="nothing to separate"):
        solved("  - {name: drum, path: separation, keep: vapour}\n", "{T: 300 K, p: 1 bar}")


def test_mixing_of_a_perfect_gas_by_hand() -> None:
    """Constant c_p: the mean temperature by amounts; entropy from c_p ln T and R ln p (textbook formulas)."""
    from math import log

    head = """
pathcalc: 1
title: Two argon streams
fluid: {substance: argon, equation: ideal-gas, heat_capacity: constant}
boundary: flow
amount: 2 kg/s
start: {T: 300 K, p: 4 bar}
legs:
  - {name: joint, path: mixing, with: {state: {T: 500 K, p: 3 bar}, amount: 1 kg/s}}
"""
    solution = pathcalc.solve(pathcalc.loads(head))
    passed(solution)
    out = solution.states["joint"]
    assert pytest.approx(1100.0 / 3.0, rel=1e-12) == out.T
    assert out.p == 3e5
    R = 8.314462618 / solution.path.model.M
    c_p = 2.5 * R
    made = 2.0 * (c_p * log(out.T / 300.0) - R * log(3.0 / 4.0)) + c_p * log(out.T / 500.0)
    assert solution.totals.entropy_generated == pytest.approx(made, rel=1e-4)
    assert solution.legs["joint"].amount == pytest.approx(3.0, rel=1e-14)


def test_mixing_liquid_into_hot_vapour() -> None:
    legs = "  - {name: spray, path: mixing, with: {state: {T: 290 K, p: 12 bar}, amount: 0.2 kg/s}}\n"
    solution = solved(legs, "{T: 360 K, p: 10 bar}")
    passed(solution)
    fluid = pathcalc.fluid("propane", "peng-robinson")
    h = (fluid.state(T=360.0, p=1e6).h + 0.2 * fluid.state(T=290.0, p=1.2e6).h) / 1.2
    assert solution.states["spray"].h == pytest.approx(h, rel=1e-10)
    assert solution.states["spray"].p == 1e6
    assert solution.legs["spray"].entropy_generated > 0.0


def test_joining_its_own_kind_makes_no_entropy() -> None:
    legs = "  - {name: joint, path: mixing, with: {state: {T: 360 K, p: 10 bar}, amount: 0.2 kg/s}}\n"
    solution = solved(legs, "{T: 360 K, p: 10 bar}")
    passed(solution)
    assert solution.legs["joint"].entropy_generated == pytest.approx(0.0, abs=1e-9)
    assert pytest.approx(360.0, rel=1e-12) == solution.states["joint"].T
