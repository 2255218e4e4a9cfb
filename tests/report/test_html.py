"""The HTML page: whole, self-contained, escaped, the same every time, good in a real browser."""

from __future__ import annotations

import itertools
import os
import re
import subprocess
import sys
import time
from pathlib import Path
from typing import Any
from xml.etree import ElementTree

import pytest
from builders import MadeSolution, throttled, two_stages
from hostile import SCRIPT, hostile

from pathcalc.report import render_html, render_markdown

MADE = {"two_stages": two_stages, "throttled": throttled, "hostile": hostile}
ROOT = Path(__file__).resolve().parents[2]
HERE = Path(__file__).resolve().parent


@pytest.fixture(scope="module", params=sorted(MADE))
def page(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("page")
    path = folder / "report.html"
    path.write_text(render_html(MADE[request.param]()), encoding="utf-8")
    return path


def test_browser_finds_nothing_wrong(browser: Any, page: Path, tmp_path: Path) -> None:
    """No console message, no request but the page's own, no script run, no sideways scroll, and it prints."""
    tab = browser.new_page()
    messages: list[str] = []
    requests: list[str] = []
    tab.on("console", lambda m: messages.append(m.text))
    tab.on("pageerror", lambda e: messages.append(str(e)))
    tab.on("request", lambda r: requests.append(r.url))
    for width in (360, 768, 1280):
        tab.set_viewport_size({"width": width, "height": 900})
        tab.goto(page.as_uri())
        overflow = tab.evaluate("document.documentElement.scrollWidth - document.documentElement.clientWidth")
        assert overflow <= 0, f"{overflow} px wider than {width}"
    assert tab.evaluate("window.broken === undefined")
    assert tab.evaluate("document.querySelectorAll('script, iframe, object, link, img').length") == 0
    assert messages == []
    assert set(requests) == {page.as_uri()}
    printed = tab.pdf(prefer_css_page_size=True)
    assert printed.startswith(b"%PDF")
    assert len(printed) > 20_000
    tab.close()


def test_structure_for_readers_and_screen_readers(browser: Any, page: Path) -> None:
    tab = browser.new_page(viewport={"width": 1280, "height": 900})
    tab.goto(page.as_uri())
    levels = tab.evaluate("[...document.querySelectorAll('h1,h2,h3,h4')].map(h => +h.tagName[1])")
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert all(b - a <= 1 for a, b in itertools.pairwise(levels))
    assert tab.evaluate("[...document.querySelectorAll('table')].every(t => t.caption && t.caption.innerText)")
    assert tab.evaluate("[...document.querySelectorAll('th')].every(t => t.scope === 'col' || t.scope === 'row')")
    assert tab.evaluate(
        "[...document.querySelectorAll('svg')].every(s => s.getAttribute('role') === 'img'"
        " && s.querySelector(':scope > title').textContent && s.querySelector(':scope > desc').textContent)"
    )
    ids = tab.evaluate("[...document.querySelectorAll('[id]')].map(e => e.id)")
    assert len(ids) == len(set(ids)), "an id is used twice"
    targets = tab.evaluate("[...document.querySelectorAll('a[href^=\"#\"]')].map(a => a.hash.slice(1))")
    assert targets
    assert set(targets) <= set(ids)
    tables = tab.evaluate(
        "[...document.querySelectorAll('table')].filter(t => t.tBodies[0].rows.length)"
        ".map(t => [...t.tBodies[0].rows].every(r => r.cells.length === t.tHead.rows[0].cells.length))"
    )
    assert all(tables)
    tab.close()


CONTRAST = """
() => {
  const linear = x => x <= 0.03928 ? x / 12.92 : ((x + 0.055) / 1.055) ** 2.4;
  const light = c => { const v = c.map(x => linear(x / 255));
    return 0.2126 * v[0] + 0.7152 * v[1] + 0.0722 * v[2]; };
  const read = s => s.match(/[0-9.]+/g).map(Number);
  let worst = 21;
  for (const e of document.querySelectorAll('body *')) {
    if (e.closest('svg') || ![...e.childNodes].some(n => n.nodeType === 3 && n.textContent.trim())) continue;
    if (getComputedStyle(e).visibility === 'hidden') continue;
    const ink = light(read(getComputedStyle(e).color).slice(0, 3));
    worst = Math.min(worst, 1.05 / (ink + 0.05));
  }
  return worst;
}
"""


def test_text_contrast(browser: Any, page: Path) -> None:
    """At least 4.5 to 1 on white (WCAG 2.2, success criterion 1.4.3; formula of relative luminance there)."""
    tab = browser.new_page()
    tab.goto(page.as_uri())
    assert tab.evaluate("getComputedStyle(document.documentElement).backgroundColor") == "rgb(255, 255, 255)"
    assert tab.evaluate(CONTRAST) >= 4.5
    tab.close()


POINTS = """
() => {
  const tables = [...document.querySelectorAll('table')];
  const table = tables.find(t => t.innerText.includes('Specific volume'));
  return [...table.tBodies[0].rows].map(row => {
    const text = row.cells[4].firstChild, range = document.createRange(), i = text.textContent.indexOf('.');
    range.setStart(text, i);
    range.setEnd(text, i + 1);
    return range.getBoundingClientRect().x;
  });
}
"""


def test_numbers_line_up_at_the_point(browser: Any, tmp_path: Path) -> None:
    path = tmp_path / "r.html"
    path.write_text(render_html(two_stages()), encoding="utf-8")
    tab = browser.new_page(viewport={"width": 1280, "height": 900})
    tab.goto(path.as_uri())
    spots = tab.evaluate(POINTS)
    assert len(spots) == 4
    assert max(spots) - min(spots) < 0.5
    tab.close()


def test_hostile_text_stays_text() -> None:
    html = render_html(hostile())
    assert SCRIPT not in html
    assert "&lt;script&gt;" in html
    assert re.search(r"<script|<img|onerror=\"", html) is None
    assert html.count("</style>") == 1
    assert html.count("</title>") == 1 + html.count("<title id=")
    assert not any(ord(c) < 32 and c not in "\n\t" for c in html)
    assert "\u202e" not in html
    assert "[U+202E]" in html
    assert "{{ 7*7 }} {% raw %}" in html


def test_drawings_and_formulas_are_well_formed() -> None:
    for make in MADE.values():
        html = render_html(make())
        drawings = re.findall(r"<svg.*?</svg>", html, re.S)
        assert len(drawings) == 5
        for part in drawings + re.findall(r"<math.*?</math>", html, re.S):
            ElementTree.fromstring(part)


def test_formula_that_fails_is_shown_as_code() -> None:
    assert '<code class="latex">e_x = \\notacommand{x}</code>' in render_html(two_stages())


def render_elsewhere(**environment: str) -> str:
    code = (
        "import sys; sys.path[:0] = sys.argv[1:]; import builders, pathcalc.report as r; "
        "sys.stdout.buffer.write(r.render_html(builders.two_stages()).encode())"
    )
    done = subprocess.run(
        [sys.executable, "-c", code, str(ROOT), str(HERE)],
        capture_output=True,
        check=True,
        env={**os.environ, **environment},
    )
    return done.stdout.decode()


def test_same_bytes_every_time(tmp_path: Path) -> None:
    """Twice, and in other processes with other hashes, another locale, another folder."""
    first = render_html(two_stages())
    assert render_html(two_stages()) == first
    assert render_elsewhere(PYTHONHASHSEED="1", LC_ALL="C.UTF-8", TZ="Asia/Tokyo") == first
    assert render_elsewhere(PYTHONHASHSEED="77", HOME=str(tmp_path)) == first


def test_nothing_of_the_machine_in_the_page() -> None:
    import socket

    html = render_html(two_stages())
    assert str(ROOT) not in html
    assert socket.gethostname() not in html
    assert time.strftime("%Y-%m-%d") not in html
    assert len(html) < 600_000


def test_page_says_what_a_reviewer_needs() -> None:
    html = render_html(two_stages())
    for text in (
        "C-2041-07",
        "Prepared by",
        "Checked by",
        "Approved by",
        "12 of 13 inputs without a source",
        "heat and work are positive into the fluid",
        "evidence for a reviewer",
        "SHA-256",
        "127.967",
        "2 of 2 met",
        "Nitrogen purge booster",
        "does not establish compliance",
        "Asphyxiant",
        "221\u202f300",
        "Gauge readings were taken above",
    ):
        assert text in html, text


def test_case_that_says_little_shows_blanks() -> None:
    made = two_stages()
    made.case.record = None
    made.case.amount = None
    made.case.limits = []
    made.result |= {"limits": [], "amount": {"value": None, "unit": "kg/s"}, "checks": [], "warnings": []}
    for one in made.result["legs"]:
        one["amount"] = None
        one["total"] = dict.fromkeys(one["total"])
    made.result["totals"] = dict.fromkeys(("heat", "work", "entropy_generated", "exergy_destroyed", "delta"))
    html = render_html(made)
    for text in (
        "not stated",
        "No purpose is stated",
        "None stated.",
        "No limits are stated",
        "there are no totals",
    ):
        assert text in html, text
    text, _ = render_markdown(made)
    assert "*None stated.*" in text


def test_missed_limit_and_failed_check_lead_the_page() -> None:
    made = two_stages()
    made.result["limits"][1] |= {"passed": False, "margin": -2000.0, "value": 122e3}
    made.result["checks"][0]["passed"] = False
    head = render_html(made).split("<nav")[0]
    assert "1 of 2 missed: totals.work = 122.0000" in head
    assert "1 of 4 of the program’s own checks failed: route closure (first stage)" in head


@pytest.mark.parametrize(
    ("hazards", "pressure", "temperature", "expected", "absent"),
    [
        (
            ("oxidiser",),
            2e7,
            300.0,
            ["Oxidiser", "High pressure", "Pressure test"],
            ["Flammable", "Condensing air"],
        ),
        (
            ("flammable", "hydrogen"),
            1.2e5,
            20.0,
            ["Flammable", "Hydrogen", "Cold", "Condensing air"],
            ["Oxidiser"],
        ),
        (("toxic",), 5e4, 300.0, ["Toxic", "Below atmospheric pressure"], ["Pressure test", "Cold"]),
        ((), 1.0e5, 300.0, ["No particular caution"], ["Toxic"]),
    ],
)
def test_cautions_follow_fluid_and_states(
    hazards: tuple[str, ...], pressure: float, temperature: float, expected: list[str], absent: list[str]
) -> None:
    import dataclasses

    made: MadeSolution = two_stages()
    made.basis = dataclasses.replace(made.basis, hazards=hazards)
    made.result["surroundings"]["p"] = 1.005e5
    for state in made.result["states"]:
        state |= {"p": pressure, "T": temperature}
    section = render_html(made).split('<section id="cautions"')[1].split("</section>")[0]
    for word in expected:
        assert f"{word}" in section, word
    for word in absent:
        assert f"<strong>{word}." not in section, word


def test_long_sums_can_break_before_their_signs() -> None:
    from pathcalc.report.maths import mathml_lines

    long = r"0.5 \times \left(" + " + ".join(f"{n}.12345" for n in range(1, 13)) + r" - (-3.5)\right)"
    parts = str(mathml_lines(long)).split("<wbr>")
    assert len(parts) == 13
    assert all(ElementTree.fromstring(p) is not None for p in parts)
    assert "".join("".join(ElementTree.fromstring(p).itertext()) for p in parts).count("+") == 11
    assert '<mo form="prefix">−</mo><mn>3.5</mn>' in parts[-1]
    assert "<wbr>" not in str(mathml_lines("a + b"))
