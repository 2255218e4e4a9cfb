"""Reports of cases that were really solved, from the text of a case to the page."""

from __future__ import annotations

import re
from pathlib import Path
from typing import Any
from xml.etree import ElementTree

import pytest
from markdown_it import MarkdownIt

import pathcalc
from pathcalc.report import render_html, render_markdown

CASES = {
    "flow": """
pathcalc: 1
title: Nitrogen booster <b>two</b> stages | $x$
record: {number: N-1, revision: A, date: 2026-03-02, sources: {vendor: Data sheet D-1}}
fluid: {substance: nitrogen, equation: peng-robinson}
boundary: flow
amount: 0.35 kg/s
surroundings: {T: 20 degC, p: 1.013 bar}
start: {T: 15 degC, p: 1.2 barg}
legs:
  - {name: first stage, path: adiabatic, to: {p: 4.5 barg}, efficiency: {value: 0.76, u: 0.02, source: vendor}}
  - {name: intercooler, path: workless, to: {T: 35 degC}, pressure_drop: 0.15 bar}
  - {name: second stage, path: adiabatic, to: {p: {ratio: 3.1}}, efficiency: 0.74}
limits:
  - {quantity: first stage.T, max: 160 degC}
  - {quantity: totals.work, max: 90 kW}
units: {T: degC, p: barg}
report: {diagrams: [T-s, p-h, p-v, h-s], compare_with: [ideal-gas]}
""",
    "cycle": """
pathcalc: 1
title: Ammonia chiller
fluid: {substance: ammonia, equation: peng-robinson}
boundary: flow
start: {p: 2.9 bar, superheat: 5 K}
cycle: true
legs:
  - {name: compressor, path: adiabatic, to: {p: 13 bar}, efficiency: 0.75}
  - {name: condenser, path: workless, to: {subcooling: 3 K}}
  - {name: valve, path: throttling, to: {p: {same_as: start}}}
  - {name: evaporator, path: workless, to: {superheat: 5 K}}
units: {T: degC}
""",
    "closed": """
pathcalc: 1
title: Bottle of argon
fluid: {substance: argon, equation: ideal-gas}
boundary: closed
amount: 2 kg
start: {T: 300 K, p: 5 bar}
legs:
  - {name: warm, path: isochoric, to: {T: 350 K}}
  - {name: vent, path: isothermal, to: {p: {ratio: 0.4}}}
""",
}


@pytest.fixture(scope="module", params=sorted(CASES))
def solved(request: pytest.FixtureRequest) -> Any:
    return request.param, pathcalc.solve(pathcalc.loads(CASES[request.param]))


def test_page_carries_the_numbers_of_the_results(solved: Any) -> None:
    name, solution = solved
    html = render_html(solution)
    if name == "flow":
        work = f"{solution.totals.work / 1e3:.4f}"
        assert f">{work}<" in html or f">{work}\u00a0kW<" in html
        assert f"1 of 2 missed: totals.work = {work}\u00a0kW" in html
        assert "the surroundings’ 1.013\u00a0bar" in html
        assert html.count("<svg") == 6
    if name == "cycle":
        assert "coefficient of performance, cooling" in html
        assert "The two-phase region is outlined." in html
        assert "there are no totals" in html
        assert "two-phase" in html
    if name == "closed":
        assert "fixed mass of argon" in html
        assert "Work is −∫p dV" in html
    assert "= NaN" not in html
    assert "None<" not in html.replace("None stated", "")


def test_formulas_of_the_legs_convert(solved: Any) -> None:
    html = render_html(solved[1])
    assert '<code class="latex">' not in html
    for part in re.findall(r"<math.*?</math>", html, re.S):
        ElementTree.fromstring(part)


def test_markdown_has_every_table(solved: Any) -> None:
    text, files = render_markdown(solved[1])
    tokens = MarkdownIt("commonmark").enable("table").parse(text)
    points = sum(step.table is not None for steps in solved[1].explanations.values() for step in steps)
    captions = len(re.findall(r"^\*\*Table \d+\.", text, re.M))
    assert sum(t.type == "table_open" for t in tokens) == captions + points + 2  # facts and signatures have none
    assert files


def test_same_bytes_from_the_same_case(solved: Any) -> None:
    name, solution = solved
    again = pathcalc.solve(pathcalc.loads(CASES[name]))
    assert render_html(again) == render_html(solution)
    assert render_markdown(again) == render_markdown(solution)


def test_page_fits_narrow_screens(solved: Any, browser: Any, tmp_path: Path) -> None:
    path = tmp_path / "report.html"
    path.write_text(render_html(solved[1]), encoding="utf-8")
    tab = browser.new_page()
    for width in (360, 768, 1280):
        tab.set_viewport_size({"width": width, "height": 800})
        tab.goto(path.as_uri())
        assert tab.evaluate("document.documentElement.scrollWidth <= document.documentElement.clientWidth")
    tab.close()


@pytest.mark.parametrize("width", [680, 703])
def test_nothing_is_cut_off_in_print(solved: Any, browser: Any, tmp_path: Path, width: int) -> None:
    """A4 (210 mm) and Letter (215.9 mm) less two margins of 15 mm, at 96 px to 25.4 mm."""
    path = tmp_path / "report.html"
    path.write_text(render_html(solved[1]), encoding="utf-8")
    tab = browser.new_page(viewport={"width": width, "height": 900})
    tab.emulate_media(media="print")
    tab.goto(path.as_uri())
    cut = tab.evaluate(
        "w => [...document.querySelectorAll('table, math, pre, svg')]"
        ".filter(e => e.getBoundingClientRect().right > w + 1).map(e => e.textContent.slice(0, 60))",
        width,
    )
    assert cut == []
    tab.close()
