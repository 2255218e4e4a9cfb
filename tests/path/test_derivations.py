"""Worked numbers: whoever puts the printed numbers into the printed formulas gets the result."""

from __future__ import annotations

import ast
import math
import operator
import re
from pathlib import Path
from typing import Any

import pytest
from scipy.integrate import simpson as scipy_simpson

import pathcalc
from pathcalc.path.hand_sums import simpson

CASES = Path(__file__).resolve().parents[2] / "cases"
NAMES = [
    "steam-power-cycle", "ammonia-two-stage", "propane-vaporiser", "carbon-dioxide-flash-drum", "low-pressure-virial",
    "argon-power-cycle", "gas-spring-indicator-card", "nitrogen-tank-hold", "hydrogen-letdown",
]  # fmt: skip


@pytest.fixture(scope="module", params=NAMES)
def solution(request: pytest.FixtureRequest) -> Any:
    return pathcalc.solve(pathcalc.load(CASES / f"{request.param}.yaml"))


OPERATORS: dict[type[ast.AST], Any] = {
    ast.Add: operator.add, ast.Sub: operator.sub, ast.Mult: operator.mul, ast.Div: operator.truediv,
    ast.Pow: operator.pow,
}  # fmt: skip


def evaluated(text: str, rounding: float) -> tuple[float, float]:
    """Value of plain arithmetic with ``ln`` and ``sqrt``, and how far the rounding of its numbers can move it.

    Whole numbers are exact, others rounded to a relative ``rounding``.
    """

    def value(node: ast.AST) -> tuple[float, float]:
        if isinstance(node, ast.Expression):
            return value(node.body)
        if isinstance(node, ast.BinOp):
            (x, dx), (y, dy) = value(node.left), value(node.right)
            result = float(OPERATORS[type(node.op)](x, y))
            if isinstance(node.op, ast.Add | ast.Sub):
                return result, dx + dy
            if isinstance(node.op, ast.Pow):
                return result, abs(result * y * dx / x) if x else 0.0
            return result, (
                abs(y) * dx + abs(x) * dy if isinstance(node.op, ast.Mult) else (dx + abs(x / y) * dy) / abs(y)
            )
        if isinstance(node, ast.UnaryOp):
            x, dx = value(node.operand)
            return (-x if isinstance(node.op, ast.USub) else x), dx
        if isinstance(node, ast.Call):
            assert isinstance(node.func, ast.Name)
            x, dx = value(node.args[0])
            return (math.log(x), dx / x) if node.func.id == "ln" else (math.sqrt(x), 0.5 * dx / math.sqrt(x))
        assert isinstance(node, ast.Constant)
        exact = isinstance(node.value, int)
        return float(node.value), 0.0 if exact else rounding * abs(float(node.value))

    return value(ast.parse(text, mode="eval"))


def grouped(text: str, at: int) -> tuple[str, int]:
    """What the brace at ``at`` encloses, and where it ends."""
    depth = 0
    for i in range(at, len(text)):
        depth += {"{": 1, "}": -1}.get(text[i], 0)
        if depth == 0:
            return text[at + 1 : i], i + 1
    raise AssertionError(text)


def arithmetic(latex: str) -> str:
    """LaTeX of numbers, fractions, roots, powers and logarithms as Python's arithmetic."""
    text = latex.replace(r"\left", "").replace(r"\right", "").replace(r"\times", "*")
    out, i = "", 0
    while i < len(text):
        if text.startswith(r"\frac{", i):
            above, i = grouped(text, i + 5)
            below, i = grouped(text, i)
            out += f"(({arithmetic(above)})/({arithmetic(below)}))"
        elif text.startswith(r"\sqrt{", i):
            inside, i = grouped(text, i + 5)
            out += f"sqrt({arithmetic(inside)})"
        elif text.startswith("^{", i):
            inside, i = grouped(text, i + 1)
            out += f"**({arithmetic(inside)})"
        elif text.startswith(r"\ln", i):
            i += 3
            if text.startswith(r"\frac{", i):
                above, i = grouped(text, i + 5)
                below, i = grouped(text, i)
                out += f"ln(({arithmetic(above)})/({arithmetic(below)}))"
            else:
                assert text[i] == "(", latex
                out += "ln"
        elif text[i] == "^":
            out += "**"
            i += 1
        else:
            out += text[i]
            i += 1
    return out


def stated(result: str) -> float:
    """The number a result begins with."""
    found = re.match(r"\s*(-?[0-9.]+)(?:\\times 10\^\{(-?\d+)\})?", result)
    assert found, result
    return float(found[1]) * 10.0 ** int(found[2] or 0)


def test_numbers_put_in_give_the_result(solution: Any) -> None:
    """Every worked step with plain numbers, recomputed from its text within the rounding of what is printed."""
    checked = 0
    for address, steps in solution.explanations.items():
        for step in steps:
            if not step.numbers or not step.result or "=" in step.numbers or r"\text" in step.numbers:
                continue
            rounding = 5e-6 if step.title.startswith("By hand") else 5e-7  # six digits there, seven elsewhere
            value, loose = evaluated(arithmetic(step.numbers), rounding)
            result = stated(step.result)
            assert abs(value - result) <= loose + rounding * abs(result), (address, step)
            checked += 1
    assert checked > 40


def test_sums_by_hand_come_near_the_quadrature(solution: Any) -> None:
    """Simpson's rule over the points shown, by another implementation, and Clapeyron's product."""
    seen = 0
    for sums in solution.hand_sums.values():
        for item in sums:
            seen += 1
            if item.clapeyron is not None:
                _T, slope, v_a, v_b, _p = item.clapeyron
                assert slope * (v_b - v_a) == pytest.approx(item.quadrature, rel=1e-9)
                continue
            x = [row[0] for row in item.rows]
            slopes = [row[4] / row[1] * row[6] + row[5] * row[7] for row in item.rows]
            assert slopes == pytest.approx([row[-1] for row in item.rows], rel=1e-12, abs=1e-12)
            total = scipy_simpson(slopes, x=x)
            assert simpson(slopes) == pytest.approx(total, rel=1e-12, abs=1e-14)
            size = max(abs(s) for s in slopes)
            assert item.simpson == pytest.approx(item.quadrature, abs=2e-3 * size)
    assert seen > 0


def test_sums_of_a_leg_add_up_to_its_change_of_entropy(solution: Any) -> None:
    for name, sums in solution.hand_sums.items():
        if sums:
            total = sum(item.quadrature for item in sums)
            assert 1e3 * total == pytest.approx(solution.legs[name].delta.s, rel=1e-8, abs=1e-6)


def test_parts_give_the_properties(solution: Any) -> None:
    """u, h, s, c_v, c_p, Z from the parts alone, by the formulas of the report."""
    M = solution.path.model.M
    for parts in solution.state_parts:
        if parts.state == "surroundings":
            assert not parts.wet
            h = parts["h0"] + parts["R"] * parts["T"] * (parts["a_t"] + parts["a_d"])
            assert h == pytest.approx(float(solution.dead.h[0]) / M / 1e3, rel=1e-9, abs=1e-7)
            continue
        state = solution.states[parts.state]
        if parts.wet:
            x = parts["x"]
            assert parts["h_l"] + x * (parts["h_v"] - parts["h_l"]) == pytest.approx(state.h / 1e3, rel=1e-9, abs=1e-9)
            continue
        R, T, v = parts["R"], parts["T"], parts["v"]
        h = parts["h0"] + R * T * (parts["a_t"] + parts["a_d"])
        s = parts["s0"] + R * math.log(100.0 * v / (R * T)) + R * (parts["a_t"] - parts["a"])
        cv = parts["cp0"] - R - R * parts["a_tt"]
        assert h == pytest.approx(state.h / 1e3, rel=1e-9, abs=1e-7)
        assert s == pytest.approx(state.s / 1e3, rel=1e-9, abs=1e-10)
        assert R * T / v * (1.0 + parts["a_d"]) == pytest.approx(state.p / 1e3, rel=1e-7)
        if state.cv == state.cv:
            assert cv == pytest.approx(state.cv / 1e3, rel=1e-9)
            assert cv - T * parts["p_T"] ** 2 / parts["p_v"] == pytest.approx(state.cp / 1e3, rel=1e-8)


def test_balance_over_all_streams_is_heat_and_work() -> None:
    """Mass that leaves and joins is counted: the enthalpy of all streams changes by what crosses the boundary."""
    for name in ("ammonia-two-stage", "carbon-dioxide-flash-drum", "methane-liquefier-throttling"):
        totals = pathcalc.solve(pathcalc.load(CASES / f"{name}.yaml")).totals
        assert totals.delta.h == pytest.approx(totals.heat + totals.work, rel=1e-9, abs=1e-4)


def test_figures_of_a_cycle_are_addresses() -> None:
    solution = pathcalc.solve(pathcalc.load(CASES / "heat-pump-reference.yaml"))
    heats = [leg.heat for leg in solution.legs.values()]
    work = sum(leg.work for leg in solution.legs.values())
    assert solution.quantity("cycle.cop_cooling") == pytest.approx(sum(q for q in heats if q > 0.0) / work, rel=1e-12)
    assert solution.explanations["cycle.cop_heating"][0].numbers
