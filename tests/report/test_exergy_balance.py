"""The exergy balance and the bar charts: sums, signs, exergy of heat, numbers and lengths of bars."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest
from builders import two_stages
from drawings import SVG, marked, points, texts, tree

import pathcalc
from pathcalc.report.context import Context
from pathcalc.report.drawing import bars
from pathcalc.report.exergy_balance import balance
from pathcalc.report.sections.diagrams import section

CASES = Path(__file__).resolve().parents[2] / "cases"
NAMES = (
    "steam-power-cycle",
    "nitrogen-booster",
    "hot-gas-engine",
    "gas-spring-indicator-card",
    "carbon-dioxide-flash-drum",
    "ammonia-two-stage",
    "methane-liquefier-throttling",
    "propane-cylinder-in-the-sun",
    "cylinder-against-atmosphere",
    "receiver-into-vacuum",
)
_KEPT: dict[str, Any] = {}


def solved(name: str) -> Any:
    if name not in _KEPT:
        _KEPT[name] = pathcalc.solve(pathcalc.load(CASES / f"{name}.yaml"))
    return _KEPT[name]


@pytest.mark.parametrize("name", NAMES)
def test_balance_closes_leg_by_leg_and_as_a_whole(name: str) -> None:
    """start + heat + work + streams - destroyed = end, with start and end from the states and their amounts."""
    result = solved(name).to_dict()
    found = balance(result)
    assert found is not None
    first, last = result["states"][0], result["states"][-1]
    assert found.start == pytest.approx(first["exergy"] * result["amount"]["value"], rel=1e-12)
    assert found.end == pytest.approx(last["exergy"] * result["legs"][-1]["amount"], rel=1e-12, abs=1e-6)
    size = sum(abs(leg.heat) + abs(leg.work) + abs(leg.stream) + leg.destroyed for leg in found.legs)
    total = found.start + sum(leg.heat + leg.work + leg.stream - leg.destroyed for leg in found.legs)
    assert total == pytest.approx(found.end, abs=1e-9 * size)
    parts = [found.gained(key) - found.given(key) for key in ("heat", "work", "stream")]
    assert found.start + sum(parts) - found.destroyed == pytest.approx(found.end, abs=1e-9 * size)
    assert found.destroyed == pytest.approx(result["totals"]["exergy_destroyed"], rel=1e-9, abs=1e-9 * size)
    for leg in found.legs:
        assert leg.destroyed >= 0.0


@pytest.mark.parametrize("name", NAMES)
def test_exergy_of_heat_is_that_of_its_reservoir(name: str) -> None:
    """q (1 - T0/T_res) wherever the case names a reservoir: the balance must leave just that. No heat, none."""
    solution = solved(name)
    result = solution.to_dict()
    found = balance(result)
    assert found is not None
    dead = result["surroundings"]["T"]
    for leg, own, case in zip(found.legs, result["legs"], solution.case.legs, strict=True):
        heat, reservoir = own["total"]["heat"], getattr(case, "reservoir", None)
        size = abs(heat) + abs(leg.change) + abs(found.start)
        if heat == 0.0:
            assert leg.heat == pytest.approx(0.0, abs=1e-9 * size)
        elif reservoir is not None:
            assert leg.heat == pytest.approx(heat * (1.0 - dead / reservoir.value), abs=1e-8 * size)


def test_exergy_of_heat_without_a_reservoir_follows_the_fluid() -> None:
    """Isobaric heating of an ideal gas of constant heat capacity: c_p [(T2 - T1) - T0 ln(T2/T1)], by hand."""
    text = """
pathcalc: 1
title: t
fluid: {substance: argon, equation: ideal-gas, heat_capacity: constant}
boundary: flow
amount: 2 kg/s
surroundings: {T: 290 K, p: 1 bar}
start: {T: 300 K, p: 3 bar}
legs: [{name: a, path: isobaric, to: {T: 450 K}}]
"""
    solution = pathcalc.solve(pathcalc.loads(text))
    found = balance(solution.to_dict())
    assert found is not None
    cp = solution.states["start"].cp
    assert found.legs[0].heat == pytest.approx(2 * cp * (150.0 - 290.0 * np.log(1.5)), rel=1e-10)
    assert found.destroyed == 0.0


def test_useful_work_of_a_closed_mass_leaves_out_the_surroundings() -> None:
    """Slow isothermal compression at T0: all of -∫p dV less p0 ΔV is stored, R T0 [ln(p2/p1) - p0 (1/p1 - 1/p2)]."""
    text = """
pathcalc: 1
title: t
fluid: {substance: argon, equation: ideal-gas}
boundary: closed
amount: 3 kg
surroundings: {T: 300 K, p: 1 bar}
start: {T: 300 K, p: 2 bar}
legs: [{name: a, path: isothermal, to: {p: 8 bar}}]
"""
    solution = pathcalc.solve(pathcalc.loads(text))
    result = solution.to_dict()
    found = balance(result)
    assert found is not None
    specific = 8.314462618 / result["fluid"]["molar_mass"] * 300.0
    assert found.legs[0].work == pytest.approx(3 * specific * (np.log(4.0) + 1e5 * (1 / 8e5 - 1 / 2e5)), rel=1e-9)
    assert found.end - found.start == pytest.approx(found.legs[0].work, rel=1e-9)
    assert found.legs[0].heat == 0.0


def test_stream_that_parts_carries_the_exergy_of_its_own_state() -> None:
    """The vapour of the flash drum: its amount times its exergy as a state of the fluid."""
    solution = solved("carbon-dioxide-flash-drum")
    result = solution.to_dict()
    found = balance(result)
    assert found is not None
    valve, drum = result["states"][1], result["states"][2]
    assert drum["x"] == 0.0
    fluid = pathcalc.fluid("carbon-dioxide", equation=result["fluid"]["equation"], datum=result["fluid"]["datum"])
    vapour = fluid.state(T=drum["T"], x=1.0)
    dead = fluid.state(T=result["surroundings"]["T"], p=result["surroundings"]["p"])
    exergy = (vapour.h - dead.h) - result["surroundings"]["T"] * (vapour.s - dead.s)
    parted = result["legs"][0]["amount"] * valve["x"]
    assert found.legs[1].stream == pytest.approx(-parted * exergy, rel=1e-8)
    assert found.given("stream") == pytest.approx(parted * exergy, rel=1e-8)


def test_no_balance_where_there_is_none() -> None:
    made = two_stages()
    made.result["states"][1]["exergy"] = None
    assert balance(made.result) is None
    words = [b.text for b in section(Context(made)).blocks if b.kind == "paragraph"]
    assert any("No exergy balance is drawn" in text for text in words)
    made = two_stages()
    made.result["amount"] = {"value": None, "unit": "kg/s"}
    for leg in made.result["legs"]:
        leg["amount"] = None
    specific = balance(made.result)
    assert specific is not None
    assert not specific.total
    made.result["legs"][1]["path"] = "separation"
    assert balance(made.result) is None


@pytest.mark.parametrize("name", NAMES)
def test_bars_are_the_results(name: str) -> None:
    """Each number of the results stands at its bar; lengths and sides go with the values."""
    solution = solved(name)
    ctx = Context(solution)
    figures = {b.name: b for b in section(ctx).blocks if b.kind == "figure"}
    root = tree(figures["heat-work"].svg)
    said = texts(root)
    scale = ctx.units["total"]
    found = marked(root, "bar")
    lengths = []
    for leg in ctx.legs:
        for key in ("heat", "work"):
            value = leg["total"][key]
            if value == 0.0:
                continue
            words = ctx.number("total", value)
            assert words in said
            if words in found:
                lengths.append((abs(scale.of(value)), float(found[words].attrib["width"])))
    assert len(lengths) >= 1
    longest = max(lengths)
    for value, length in lengths:
        assert length == pytest.approx(value / longest[0] * longest[1], abs=0.06)
    rules = [p for p in root.iter(f"{SVG}path") if p.get("stroke") and p.get("d", "").count("l") == 1]
    zero = {float(points(p.attrib["d"])[0, 0]) for p in rules}
    assert len(zero) == 1
    for words, bar in found.items():
        left = float(bar.attrib["x"])
        right = left + float(bar.attrib["width"])
        (at,) = zero
        assert (right if words.startswith("−") else left) == pytest.approx(at, abs=0.11)
    whole = solution.totals
    assert ctx.measure("total", whole.heat) in figures["heat-work"].caption
    assert ctx.measure("total", whole.work) in figures["heat-work"].caption
    for leg in ctx.legs:
        assert f"{leg['name']}: heat {ctx.measure('total', leg['total']['heat'])}" in figures["heat-work"].alt


@pytest.mark.parametrize("name", NAMES)
def test_rungs_of_the_balance_add_up_as_printed(name: str) -> None:
    """What a reader adds up from the chart ends at the last bar, within a unit of the last digit a row."""
    solution = solved(name)
    ctx = Context(solution)
    found = balance(ctx.result)
    assert found is not None
    rows = bars.rungs(found, "1", "n")
    printed = [float(ctx.number("total", r.value).replace("−", "-").replace("\u202f", "")) for r in rows]
    step = 10.0 ** -len(ctx.number("total", rows[0].value).partition(".")[2])
    assert sum(printed[:-1]) == pytest.approx(printed[-1], abs=step * len(rows))
    figure = next(b for b in section(ctx).blocks if b.kind == "figure" and b.name == "exergy")
    said = texts(tree(figure.svg))
    for row in rows:
        assert ctx.number("total", row.value) in said
        assert ctx.measure("total", row.value) in figure.alt
    destroyed = [row for row in rows if row.kind == "destroyed"]
    assert sum(row.value for row in destroyed) == pytest.approx(-solution.totals.exergy_destroyed, rel=1e-9, abs=1e-9)
    assert [row.words for row in destroyed] == [leg.name for leg in found.legs if leg.destroyed]


def test_many_legs_are_drawn_tight_and_added_up() -> None:
    made = two_stages()
    one = made.result["legs"][0]
    made.result["legs"] = [dict(one, name=f"stage {i}") for i in range(24)]
    ctx = Context(made)
    root = tree(bars.heat_and_work(ctx, "t", "d"))
    assert sum(text.startswith("1 → 2") for text in texts(root)) == 24
    found = balance(made.result)
    assert found is not None
    rows = bars.rungs(found, "1", "25")
    assert sum(row.kind == "destroyed" for row in rows) == 14
    assert rows[-2].words == "the other legs"
    assert sum(r.value for r in rows if r.kind == "destroyed") == pytest.approx(-24 * one["total"]["exergy_destroyed"])


def test_path_without_heat_and_work_says_so() -> None:
    solution = pathcalc.solve(pathcalc.load(CASES / "letdown-unheated.yaml"))
    blocks = section(Context(solution)).blocks
    assert any(b.kind == "paragraph" and b.text == "No leg takes in or gives off heat or work." for b in blocks)
    assert "heat-work" not in [b.name for b in blocks if b.kind == "figure"]
