"""Size, sameness and legibility of reports with all their figures."""

from __future__ import annotations

import os
import re
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

import pathcalc
from pathcalc.report import render_html

ROOT = Path(__file__).resolve().parents[2]
SIX_LEGS = (ROOT / "tests" / "benchmarks" / "six-legs.txt").read_text(encoding="utf-8")


def report(folder: Path, **environment: str) -> dict[str, bytes]:
    """The files of a report written by the command line as its own process, begun in ``folder``."""
    (folder / "six.yaml").write_text(SIX_LEGS, encoding="utf-8")
    command = [sys.executable, "-m", "pathcalc", "solve", "six.yaml", "--report", "html,md", "-o", "out"]
    path = os.pathsep.join([str(ROOT), os.environ.get("PYTHONPATH", "")])
    kept = {key: value for key, value in os.environ.items() if key != "PYTHONDONTWRITEBYTECODE"}  # as users run it
    subprocess.run(
        command, cwd=folder, check=True, capture_output=True, env={**kept, "PYTHONPATH": path, **environment}
    )
    return {p.name: p.read_bytes() for p in sorted((folder / "out").rglob("*")) if p.is_file()}


def test_six_legs_are_small_and_the_same_everywhere(tmp_path: Path) -> None:
    """Under 600 kB; the same bytes with other hashes, locale, folder. Its time is among the benchmarks."""
    first, second = tmp_path / "one", tmp_path / "zwei ü" / "deeper"
    for folder in (first, second):
        folder.mkdir(parents=True)
    other = report(second, PYTHONHASHSEED="4242", LC_ALL="de_DE.UTF-8", TZ="Asia/Tokyo")
    files = report(first, PYTHONHASHSEED="1", LC_ALL="C.UTF-8")
    assert other == files
    assert len(files["six.html"]) < 600_000
    figures = {name: len(data) for name, data in files.items() if name.endswith(".svg")}
    assert sorted(figures) == ["six-T-s.svg", "six-exergy.svg", "six-h-s.svg", "six-heat-work.svg", "six-p-h.svg"]
    assert max(figures.values()) < 20_000


TEXTS = """
() => {
  const found = [];
  for (const svg of document.querySelectorAll('figure svg')) {
    const sheet = svg.viewBox.baseVal;
    for (const t of svg.querySelectorAll('text')) {
      const b = t.getBBox(), turned = t.getAttribute('transform') !== null;
      const box = turned ? [b.x, b.x + b.width, b.y, b.y + b.height] : [b.x, b.x + b.width, b.y, b.y + b.height];
      found.push({text: t.textContent, figure: svg.closest('figure').id, turned, bold: !!t.closest('[font-weight]'),
        left: b.x, right: b.x + b.width, top: b.y, bottom: b.y + b.height, width: sheet.width, height: sheet.height});
    }
  }
  return found;
}
"""


@pytest.mark.parametrize("name", ["six", "ammonia-two-stage", "us-units-booster", "gas-spring-indicator-card"])
def test_texts_stay_on_the_sheet_and_numbers_apart(name: str, browser: Any, tmp_path: Path) -> None:
    """As a real browser sets them: no text off the sheet, no state number on another, no bar's number on a name."""
    case = pathcalc.loads(SIX_LEGS) if name == "six" else pathcalc.load(ROOT / "cases" / f"{name}.yaml")
    path = tmp_path / "r.html"
    path.write_text(render_html(pathcalc.solve(case)), encoding="utf-8")
    tab = browser.new_page(viewport={"width": 1280, "height": 900})
    tab.goto(path.as_uri())
    found = tab.evaluate(TEXTS)
    tab.close()
    assert len(found) > 60
    for t in found:
        if not t["turned"]:
            assert t["left"] >= 0, t
            assert t["right"] <= t["width"], t
            assert t["bottom"] <= t["height"] + 0.5, t
    for figure in {t["figure"] for t in found}:
        own = [t for t in found if t["figure"] == figure and not t["turned"]]
        watched = [t for t in own if t["bold"] or figure in ("diagram-heat-work", "diagram-exergy")]
        for i, a in enumerate(watched):
            for b in watched[:i]:
                wide = min(a["right"], b["right"]) - max(a["left"], b["left"])
                high = min(a["bottom"], b["bottom"]) - max(a["top"], b["top"])
                assert wide <= 0.5 or high <= 3.5, (a["text"], b["text"], figure)


def test_figures_are_wide_enough_to_read_and_print(browser: Any, tmp_path: Path) -> None:
    """At 1280 px the text of a figure is 14 px or more, at 360 px it still has 9; in print 8 points or more."""
    path = tmp_path / "r.html"
    path.write_text(render_html(pathcalc.solve(pathcalc.loads(SIX_LEGS))), encoding="utf-8")
    tab = browser.new_page()
    widths = {}
    for width in (360, 1280):
        tab.set_viewport_size({"width": width, "height": 900})
        tab.goto(path.as_uri())
        widths[width] = tab.evaluate("document.querySelector('figure svg').getBoundingClientRect().width")
    tab.set_viewport_size({"width": 680, "height": 900})
    tab.emulate_media(media="print")
    printed = tab.evaluate("document.querySelector('figure svg').getBoundingClientRect().width")
    tab.close()
    assert widths[1280] * 13 / 480 >= 14.0
    assert widths[360] * 13 / 480 >= 8.5
    assert printed * 13 / 480 * 72 / 96 >= 8.0


def test_identifiers_of_figures_do_not_clash() -> None:
    html = render_html(pathcalc.solve(pathcalc.loads(SIX_LEGS)))
    own = re.findall(r' id="([^"]+)"', html)
    assert len(own) == len(set(own))
    for reference in re.findall(r"url\(#([^)]+)\)", html):
        assert reference in own
