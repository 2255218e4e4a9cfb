"""State diagrams: what stands in them, where, and how it is told apart."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from builders import throttled, two_stages
from drawings import SVG, marked, numbers_in, points, texts, tree
from hostile import HOSTILE, SCRIPT, hostile

import pathcalc
from pathcalc.report.context import Context
from pathcalc.report.drawing import SMALLEST, WIDTH, style
from pathcalc.report.drawing.diagram import Diagram
from pathcalc.report.drawing.plane import AXES, KINDS
from pathcalc.report.numbers import short
from pathcalc.report.sections.diagrams import asked, section

CASES = Path(__file__).resolve().parents[2] / "cases"
SOLVED = (
    "steam-power-cycle",
    "ammonia-two-stage",
    "nitrogen-booster",
    "ethylene-equation-choice",
    "methane-bank-cool-down",
    "receiver-into-vacuum",
    "carbon-dioxide-flash-drum",
)
_KEPT: dict[str, Any] = {}
_DRAWN: dict[tuple[int, str], Any] = {}


def solved(name: str) -> Any:
    if name not in _KEPT:
        _KEPT[name] = pathcalc.solve(pathcalc.load(CASES / f"{name}.yaml"))
    return _KEPT[name]


def drawn(solution: Any, name: str) -> tuple[Diagram, Any]:
    key = (id(solution), name)
    if key not in _DRAWN:
        diagram = Diagram(Context(solution), name)
        _DRAWN[key] = (solution, diagram, tree(diagram.svg("title", "description")))
    return _DRAWN[key][1:]


@pytest.mark.parametrize("name", SOLVED)
@pytest.mark.parametrize("kind", AXES)
def test_every_state_and_leg_is_there(name: str, kind: str) -> None:
    solution = solved(name)
    diagram, root = drawn(solution, kind)
    said = texts(root)
    n = len(solution.states)
    bold = [g for g in root.iter(f"{SVG}g") if g.get("font-weight") == "bold"]
    assert numbers_in(texts(bold[0])) == list(range(1, n + 1))
    assert len(list(root.iter(f"{SVG}circle"))) == n
    ways = [f"{i}–{i + 1}" for i in range(1, n)]
    assert set(ways) <= set(said)
    assert sorted(marked(root, "leg")) == sorted(ways)
    for i, leg in enumerate(solution.legs, 1):
        assert f"{i} → {i + 1}\u2002{leg}" in said
    for axis, key in (("x", diagram.plane.x), ("y", diagram.plane.y)):
        assert any(diagram.ctx.units[KINDS[key]].unit in t for t in said), axis


@pytest.mark.parametrize("name", SOLVED)
@pytest.mark.parametrize("kind", AXES)
def test_states_stand_where_the_results_are(name: str, kind: str) -> None:
    """Circles lie at the places that the ticks say: read off by the ticks nearest to the ends of each axis."""
    solution = solved(name)
    diagram, root = drawn(solution, kind)
    x, y = AXES[kind]
    for circle, state in zip(root.iter(f"{SVG}circle"), solution.states.values(), strict=True):
        for key, place, scale in ((x, "cx", diagram.sx), (y, "cy", diagram.sy)):
            unit = diagram.ctx.units[KINDS[key]]
            value = float(state[key]) * unit.factor + unit.offset
            low, high = scale.low, scale.high
            if scale.log:
                value, low, high = math.log(value), math.log(low), math.log(high)
            want = scale.start + (value - low) / (high - low) * (scale.stop - scale.start)
            assert float(circle.attrib[place]) == pytest.approx(want, abs=0.051)


@pytest.mark.parametrize("name", SOLVED)
@pytest.mark.parametrize("kind", AXES)
def test_arrows_point_the_way_the_leg_goes(name: str, kind: str) -> None:
    diagram, root = drawn(solved(name), kind)
    arrows = marked(root, "arrow")
    lengths = []
    for i, leg in enumerate(diagram.plane.legs):
        path = np.column_stack([diagram.sx(leg.line.points[:, 0]), diagram.sy(leg.line.points[:, 1])])
        lengths.append(float(np.hypot(*np.diff(path, axis=0).T).sum()))
        head = arrows.get(diagram.way_of(i))
        if head is None:
            assert lengths[-1] < 40.0
            continue
        tip, left, right = points(head.attrib["d"])
        forward = tip - 0.5 * (left + right)
        nearest = int(np.argmin(np.hypot(*(path - 0.5 * (tip + 0.5 * (left + right))).T)))
        a, b = max(nearest - 1, 0), min(nearest + 1, len(path) - 1)
        assert forward @ (path[b] - path[a]) > 0.0, diagram.way_of(i)
    assert len(arrows) >= sum(length > 60.0 for length in lengths)


def test_arrows_of_legs_on_one_line_stand_apart() -> None:
    _, root = drawn(solved("methane-bank-cool-down"), "p-v")
    heads = [points(node.attrib["d"]).mean(axis=0) for node in marked(root, "arrow").values()]
    assert len(heads) == 2
    assert np.hypot(*(heads[0] - heads[1])) > 12.0


def test_dome_is_drawn_where_it_is_in_view() -> None:
    for name, kind, there in (
        ("steam-power-cycle", "T-s", True),
        ("steam-power-cycle", "h-s", True),
        ("nitrogen-booster", "T-s", False),
        ("methane-bank-cool-down", "p-v", False),
    ):
        diagram, root = drawn(solved(name), kind)
        assert diagram.plane.dome_shown is there
        assert any("two-phase region" in t for t in texts(root)) is there
    _, root = drawn(throttled(), "T-s")
    assert any("two-phase region" in t for t in texts(root))
    _, root = drawn(two_stages(), "T-s")
    assert not any("two-phase region" in t for t in texts(root))


def test_two_phase_stretches_are_banded_within_the_dome() -> None:
    """Condenser and boiler of the steam cycle: the band spans the saturated states at the leg's pressure."""
    solution = solved("steam-power-cycle")
    diagram, root = drawn(solution, "T-s")
    widths = {}
    for way, group in marked(root, "leg").items():
        for path in group.iter(f"{SVG}path"):
            if path.get("stroke-width") == str(int(style.BAND_WIDTH)):
                widths[way] = points(path.attrib["d"])
    assert sorted(widths) == ["2–3", "3–4", "4–5"]
    pressure = solution.states["boiler"].p
    water = pathcalc.fluid("water", equation="reference", datum=solution.case.fluid.datum)
    liquid, vapour = water.state(p=pressure, x=0.0), water.state(p=pressure, x=1.0)
    ends = [float(diagram.sx(s.s / 1e3)) for s in (liquid, vapour)]
    found = widths["2–3"]
    assert found[0, 0] == pytest.approx(ends[0], abs=1.5)
    assert found[-1, 0] == pytest.approx(ends[1], abs=1.5)
    assert "leg in two phases" in texts(root)


def test_irreversible_legs_are_open_lines() -> None:
    for name in ("nitrogen-booster", "receiver-into-vacuum", "carbon-dioxide-flash-drum"):
        solution = solved(name)
        diagram, root = drawn(solution, "T-s")
        for leg, (way, group) in zip(solution.path.legs, marked(root, "leg").items(), strict=True):
            cores = [p for p in group.iter(f"{SVG}path") if p.get("stroke") == style.PAPER]
            lossy = leg.leg.path in ("throttling", "free-expansion", "separation") or bool(
                getattr(leg.leg, "efficiency", None)
            )
            assert bool(cores) is lossy, (name, way)
            arrow = marked(root, "arrow").get(way)
            if arrow is not None:
                assert (arrow.get("fill") == style.PAPER) is lossy
        assert "not a row of states" in texts(root)
        assert any(not leg.states for leg in diagram.plane.legs)
    _, root = drawn(solved("methane-bank-cool-down"), "T-s")
    assert "not a row of states" not in texts(root)


def test_reversible_looks_follow_the_case_not_the_name() -> None:
    base = """
pathcalc: 1
title: one leg
fluid: {substance: nitrogen, equation: ideal-gas}
boundary: BOUNDARY
start: {T: 300 K, p: 5 bar}
legs: [LEG]
"""
    for boundary, leg, states in (
        ("flow", "{name: a, path: adiabatic, to: {p: 9 bar}}", True),
        ("flow", "{name: a, path: adiabatic, to: {p: 9 bar}, efficiency: 0.8}", False),
        ("flow", "{name: a, path: adiabatic, to: {p: 9 bar}, polytropic_efficiency: 0.8}", True),
        ("flow", "{name: a, path: throttling, to: {p: 2 bar}}", False),
        ("flow", "{name: a, path: workless, to: {T: 350 K}, pressure_drop: 0.1 bar}", True),
        ("flow", "{name: a, path: isothermal, to: {p: 9 bar}, efficiency: 0.7}", False),
        ("flow", "{name: a, path: mixing, with: {state: {T: 350 K, p: 5 bar}, amount: 1 kg/s}}", False),
        ("closed", "{name: a, path: free-expansion, to: {p: 2 bar}}", False),
        ("closed", "{name: a, path: isothermal, to: {p: 2 bar}}", True),
        ("closed", "{name: a, path: isothermal, to: {p: 2 bar}, against: 2 bar}", False),
        ("closed", "{name: a, path: adiabatic, to: {p: 2 bar}, against: 2 bar}", False),
    ):
        text = base.replace("BOUNDARY", boundary).replace("LEG", leg)
        if "mixing" in leg:
            text += "amount: 1 kg/s\n"
        (curve,) = pathcalc.solve(pathcalc.loads(text)).curves
        assert curve.states is states, leg


@pytest.mark.parametrize("name", SOLVED)
@pytest.mark.parametrize("kind", AXES)
def test_isolines_carry_the_values_of_the_states(name: str, kind: str) -> None:
    solution = solved(name)
    diagram, root = drawn(solution, kind)
    key = "p" if kind in ("T-s", "h-s") else "T"
    unit = diagram.ctx.units[KINDS[key]]
    known = [float(s[key]) * unit.factor + unit.offset for s in solution.states.values()]
    said = list(marked(root, "isoline"))
    assert said
    assert set(said) <= {short(value, 4) for value in known}
    values = [value for value, _ in diagram.plane.isolines]
    assert len(values) <= 7
    if key == "p":
        known, values = list(np.log(known)), list(np.log(values))
    for value in known:
        nearest = min(abs(value - other) for other in values)
        assert nearest <= 0.0121 * (max(known) - min(known)) + 1e-9 or len(values) == 7
    words = "isobars" if key == "p" else "isotherms"
    assert f"{words}, {diagram.unit_of(key)}" in texts(root)


@pytest.mark.parametrize("name", SOLVED)
@pytest.mark.parametrize("kind", AXES)
def test_isolines_pass_through_their_states(name: str, kind: str) -> None:
    """On the sheet, within the width of the state's mark."""
    diagram, _ = drawn(solved(name), kind)
    spots = np.column_stack([diagram.sx(diagram.plane.points[:, 0]), diagram.sy(diagram.plane.points[:, 1])])
    for _value, line in diagram.plane.isolines:
        path = np.column_stack([diagram.sx(line[:, 0]), diagram.sy(line[:, 1])])
        a, b = path[:-1], path[1:]
        way = b - a
        size = np.maximum((way**2).sum(axis=1), 1e-12)
        away = []
        for spot in spots:
            along = np.clip(((spot - a) * way).sum(axis=1) / size, 0.0, 1.0)
            away.append(float(np.hypot(*(a + along[:, None] * way - spot).T).min()))
        assert min(away) < 2.0


def test_other_equations_are_thin_lines_named_in_the_legend() -> None:
    solution = solved("ethylene-equation-choice")
    diagram, root = drawn(solution, "T-s")
    others = ["ideal-gas", "van-der-waals", "redlich-kwong", "soave"]
    assert [equation for equation, _ in diagram.plane.others] == others
    dashes = set()
    for k, equation in enumerate(others):
        assert any(t.startswith(f"path by {equation}") for t in texts(root))
        dash = style.OTHER_DASHES[k]
        lines = [
            p for p in root.iter(f"{SVG}path") if p.get("stroke-dasharray") == dash and p.get("stroke-width") == "1"
        ]
        assert lines
        dashes.add(dash)
    assert len(dashes) == 4
    end = diagram.plane.others[3][1][0][-1]
    soave = solution.others["soave"].states["circulator"]
    assert end == pytest.approx([soave.s / 1e3, soave.T - 273.15], rel=1e-9)


def test_an_equation_that_fails_or_lies_elsewhere_is_no_line() -> None:
    solution = solved("methane-bank-cool-down")
    _, root = drawn(solution, "p-v")
    assert "path by ideal-gas, not in view" in texts(root)
    made = two_stages()
    made.__dict__["others"] = {"virial": "first stage: there is no such state"}
    diagram, root = drawn(made, "T-s")
    assert diagram.plane.others == []
    assert not any("virial" in t for t in texts(root))


def test_axes_are_logarithmic_where_the_trade_has_them_so() -> None:
    for name, kind, log in (
        ("steam-power-cycle", "p-h", (False, True)),
        ("steam-power-cycle", "T-s", (False, False)),
        ("steam-power-cycle", "h-s", (False, False)),
        ("steam-power-cycle", "p-v", (True, True)),
        ("methane-bank-cool-down", "p-v", (False, False)),
        ("nitrogen-booster", "p-h", (False, True)),
    ):
        plane = Diagram(Context(solved(name)), kind).plane
        assert tuple(scale.log for scale in plane.scales) == log


def test_what_is_drawn_where_the_case_does_not_say() -> None:
    text = """
pathcalc: 1
title: t
fluid: {substance: propane, equation: peng-robinson}
boundary: BOUNDARY
start: START
legs: [LEG]
"""
    for boundary, start, leg, names in (
        ("flow", "{T: 300 K, p: 5 bar}", "{name: a, path: isobaric, to: {T: 330 K}}", ["T-s", "p-h"]),
        ("closed", "{T: 300 K, p: 5 bar}", "{name: a, path: isobaric, to: {T: 330 K}}", ["p-v", "T-s"]),
        ("closed", "{T: 300 K, x: 0.2}", "{name: a, path: isobaric, to: {x: 0.9}}", ["p-v", "T-s", "p-h"]),
    ):
        case = text.replace("BOUNDARY", boundary).replace("START", start).replace("LEG", leg)
        solution = pathcalc.solve(pathcalc.loads(case))
        assert asked(Context(solution)) == names
        figures = [b.name for b in section(Context(solution)).blocks if b.kind == "figure"]
        assert figures == [*names, "heat-work", "exergy"]


def test_hostile_names_stay_text() -> None:
    made = hostile()
    made.result["legs"][0]["name"] = HOSTILE
    made.result["states"][1]["name"] = HOSTILE
    for leg in made.result["legs"]:
        leg["from"] = {"first $tage_stage": HOSTILE}.get(leg["from"], leg["from"])
        leg["to"] = {"first $tage_stage": HOSTILE}.get(leg["to"], leg["to"])
    for block in section(Context(made)).blocks:
        if block.kind != "figure":
            continue
        assert SCRIPT not in block.svg
        assert "\x1b" not in block.svg
        assert "\u202e" not in block.svg
        root = tree(block.svg)
        assert {node.tag.removeprefix(SVG) for node in root.iter()} <= {
            "svg", "title", "desc", "defs", "clipPath", "pattern", "rect", "path", "circle", "g", "text", "tspan",
        }  # fmt: skip
        assert not any(key.startswith("on") or "href" in key for node in root.iter() for key in node.attrib)
        assert any("<script>" in t for t in [*texts(root), *root.itertext()])


def test_text_is_large_enough_at_half_page_width() -> None:
    """At 85 mm, in points of 25.4/72 mm: nothing under 6.5."""
    for name in SOLVED:
        for block in section(Context(solved(name))).blocks:
            if block.kind == "figure":
                root = tree(block.svg)
                assert root.get("viewBox", "").split()[2] == str(int(WIDTH))
                sizes = [float(node.get("font-size", SMALLEST)) for node in root.iter()]
                assert min(sizes) / WIDTH * 85.0 / 25.4 * 72.0 >= 6.5


def test_legs_differ_without_colour_and_with_it() -> None:
    kinds = [style.of_leg(i) for i in range(30)]
    assert len(set(kinds)) == 30
    for i in range(29):
        assert kinds[i].dash != kinds[i + 1].dash
        assert kinds[i].colour != kinds[i + 1].colour


@pytest.mark.parametrize("ink", [*style.COLOURS, style.SOFT, style.INK, style.HEAT, style.WORK, style.OTHER])
def test_inks_stand_out_from_paper(ink: str) -> None:
    """At least 4.5 to 1 (WCAG 2.2, 1.4.3; relative luminance as defined there)."""
    parts = [int(ink[i : i + 2], 16) / 255 for i in (1, 3, 5)]
    linear = [c / 12.92 if c <= 0.03928 else ((c + 0.055) / 1.055) ** 2.4 for c in parts]
    light = 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]
    assert 1.05 / (light + 0.05) >= 4.5


def test_description_tells_the_figure_in_numbers() -> None:
    solution = solved("steam-power-cycle")
    ctx = Context(solution)
    figure = next(b for b in section(ctx).blocks if b.kind == "figure")
    for text in (
        "Temperature against Entropy",
        "1 start",
        "Not a row of states: feed pump and turbine.",
        "The two-phase region is outlined.",
        "Isobars at 0.1 and 40 bar.",
        ctx.measure("T", solution.states["turbine"].T),
        ctx.measure("s", solution.states["turbine"].s),
    ):
        assert text in figure.alt, text
    root = tree(figure.svg)
    desc = root.find(f"{SVG}desc")
    assert desc is not None
    assert desc.text == figure.alt.replace("\u00a0", "\u00a0")
    assert root.get("aria-labelledby") == "d-T-s-title d-T-s-desc"
