"""What makes a report a record: conclusions, open assumptions, revisions, changes, links, streams, sources."""

from __future__ import annotations

import re
from pathlib import Path
from typing import Any

import pytest

import pathcalc
from pathcalc.report import render_html, render_markdown

ROOT = Path(__file__).resolve().parents[2]
TEXT = """
pathcalc: 1
title: Flash of propane
record:
  number: R-1
  revision: B
  unconfirmed: [The inlet pressure is a guess until the pipework is measured.]
  conclusions: ["The drum will do <as it stands>."]
  revisions:
    - {revision: A, date: 2026-01-05, text: First issue.}
    - {revision: B, text: Colder inlet.}
fluid: {substance: propane, equation: reference}
boundary: flow
amount: {value: 2 kg/s, source: sheet}
start: {T: 30 degC, p: 20 bar}
legs:
  - {name: valve, path: throttling, to: {p: 4 bar}}
  - {name: drum, path: separation, keep: vapour}
  - {name: heater, path: isobaric, to: {superheat: 10 K}}
limits:
  - {quantity: valve.x, min: 0.1}
units: {T: degC}
"""


def text_of(**changed: str) -> str:
    text = TEXT.replace("source: sheet", "note: by meter")
    for old, new in changed.items():
        assert old.replace("_", " ") in text
        text = text.replace(old.replace("_", " "), new)
    return text


@pytest.fixture(scope="module")
def solution() -> Any:
    return pathcalc.solve(pathcalc.loads(text_of(), name="flash"))


def test_author_has_the_word_beside_the_figures(solution: Any) -> None:
    html, (text, _) = render_html(solution), render_markdown(solution)
    assert "The drum will do &lt;as it stands&gt;." in html
    assert "Over the whole path the fluid takes in heat of" in text
    assert "Unconfirmed" in html
    assert text.index("guess until the pipework") < text.index("Purpose and scope"), "open points stand up front"
    assert re.search(r"\| A \| 2026-01-05 \| First issue\. \|", text)
    assert re.search(r"\| B \| – \| Colder inlet\. \|", text)


def test_blank_where_the_author_says_nothing() -> None:
    bare = re.sub(r"record:\n(  .*\n)+", "", text_of())
    html = render_html(pathcalc.solve(pathcalc.loads(bare)))
    assert "The case states no conclusions of the author." in html
    assert "Unconfirmed" not in html
    assert 'id="revisions"' not in html


def test_unsourced_inputs_are_counted_and_listed(solution: Any) -> None:
    text = render_markdown(solution)[0]
    count = re.search(r"(\d+) inputs: (\d+) with a source, (\d+) without", text)
    assert count
    listed = re.search(r"No source is given for these, in the order of the file: ([^.]+(?:\.[^.]+)*?)\.\n", text)
    assert listed
    assert len(listed[1].split(", ")) == int(count[3])
    assert "start.T" in listed[1]


def test_streams_that_leave_are_shown_with_their_state(solution: Any) -> None:
    text = render_markdown(solution)[0]
    row = next(line for line in text.splitlines() if line.startswith("| drum | leaves |"))
    amount = float(row.split("|")[3])
    assert amount == pytest.approx(2.0 * (1.0 - solution.states["valve"].x), abs=5e-6)


def test_every_link_of_a_result_leads_to_its_derivation(solution: Any, browser: Any, tmp_path: Path) -> None:
    path = tmp_path / "r.html"
    path.write_text(render_html(solution), encoding="utf-8")
    tab = browser.new_page()
    tab.goto(path.as_uri())
    links = tab.evaluate("[...document.querySelectorAll('a.why')].map(a => a.getAttribute('href').slice(1))")
    missing = tab.evaluate(
        "[...document.querySelectorAll('a.why')].filter(a => !document.getElementById(a.hash.slice(1))).length"
    )
    tab.close()
    assert len(links) > 40
    assert missing == 0
    assert {"why-3-heat", "why-1-entropy-generated", "why-state-2", "why-totals-heat"} <= set(links)


def test_result_line_names_the_figures_first(solution: Any) -> None:
    text = render_markdown(solution)[0]
    line = next(line for line in text.splitlines() if line.startswith("- **Result:**"))
    heat = float(re.search(r"heat ([−\d.]+)", line)[1].replace("−", "-"))  # type: ignore[index]
    assert heat == pytest.approx(solution.totals.heat / 1e3, abs=1e-3)


@pytest.fixture(scope="module")
def since(tmp_path_factory: pytest.TempPathFactory) -> str:
    """``solve --since``: the report of a colder inlet, held against the revision before."""
    from pathcalc.cli.run import run

    folder = tmp_path_factory.mktemp("since")
    (folder / "old.yaml").write_text(text_of().replace("revision: B", "revision: A", 1), encoding="utf-8")
    (folder / "new.yaml").write_text(text_of().replace("T: 30 degC", "T: 25 degC"), encoding="utf-8")
    arguments = ["solve", str(folder / "new.yaml"), "--since", str(folder / "old.yaml"), "--report", "md,html"]
    assert run([*arguments, "-o", str(folder), "--quiet"]) == 0
    return (folder / "new.md").read_text(encoding="utf-8")


def test_inputs_that_changed(since: str) -> None:
    assert "Changes since revision A" in since
    assert re.search(r"\| `start\.T` \| changed \| `30 degC` \| `25 degC` \|", since)


def test_results_that_changed(since: str) -> None:
    row = next(line for line in since.splitlines() if line.startswith("| `valve.x` |"))
    before, now = (float(cell) for cell in row.split("|")[3:5])
    assert before > now > 0.1
    share = float(row.split("|")[5].replace("−", "-").replace("%", ""))
    assert share == pytest.approx(100.0 * (now / before - 1.0), abs=0.01)


@pytest.mark.parametrize(
    ("arguments", "said"),
    [(["--since", "gone.yaml", "--report", "md"], "gone.yaml"), (["--since", "x.yaml"], "--report")],
)
def test_wrong_use_of_since(
    arguments: list[str], said: str, tmp_path: Path, capsys: Any, monkeypatch: pytest.MonkeyPatch
) -> None:
    from pathcalc.cli.run import run

    monkeypatch.chdir(tmp_path)
    (tmp_path / "new.yaml").write_text(text_of(), encoding="utf-8")
    assert run(["solve", "new.yaml", "-q", *arguments]) == 2
    assert said in capsys.readouterr().err
    assert [p.name for p in tmp_path.iterdir()] == ["new.yaml"]
