"""Reports in the words of another catalogue, and what is wrong with a file that is none."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from pseudo import left_over, of_others, pseudo_texts, readable, toml_of, write_pseudo

import pathcalc
from pathcalc.errors import InvalidWordsError, UsageError
from pathcalc.report import render_html, render_markdown, write_reports
from pathcalc.words import catalogue, english, using

ROOT = Path(__file__).parents[2]
CASES = (
    "nitrogen-booster",
    "low-pressure-virial",
    "propane-cylinder-in-the-sun",
    "carbon-dioxide-flash-drum",
    "ethylene-equation-choice",
    "cylinder-against-atmosphere",
)
NO_LANGUAGE = {
    *("Pa", "kPa", "bar", "MPa", "psia", "kJ", "MJ", "Btu", "kg", "lb", "mol", "kmol", "kW", "hp", "min", "ft", "in"),
    *("ds", "du", "dh", "gen", "sat", "res", "rev", "ext", "rho", "CO"),
}
"""Units, symbols and their indices, element symbols."""


@pytest.fixture(scope="module")
def pseudo(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return write_pseudo(tmp_path_factory.mktemp("words") / "strange.toml")


@pytest.mark.parametrize("name", CASES)
def test_no_english_is_left(name: str, pseudo: Path) -> None:
    path = ROOT / "cases" / f"{name}.yaml"
    solution = pathcalc.solve(pathcalc.load(path))
    before = json.dumps(solution.to_dict())
    page = render_html(solution, words=pseudo)
    assert '<html lang="art-x-strange">' in page
    assert left_over(page, of_others(solution, path)) <= NO_LANGUAGE
    with using(pseudo):
        assert json.dumps(solution.to_dict()) == before
        assert json.dumps(pathcalc.solve(solution.case).to_dict()) == before
    assert solution.report("html") == render_html(solution)
    assert '<html lang="en">' in render_html(solution)


def test_the_test_sees_english(pseudo: Path) -> None:
    """One text left English is found, so that the test above can fail."""
    path = ROOT / "cases" / "low-pressure-virial.yaml"
    solution = pathcalc.solve(pathcalc.load(path))
    texts = pseudo_texts()
    others = of_others(solution, path)
    for key in ("results.decimals", "step.route1", "check.first-law"):
        partly = write(pseudo.with_name("partly.toml"), {k: text for k, text in texts.items() if k != key})
        page = render_html(solution, words=partly)
        assert not left_over(page, others) <= NO_LANGUAGE, key
    assert "Route" in readable(render_html(solution))


def write(path: Path, texts: dict[str, str]) -> Path:
    path.write_text(toml_of(texts), encoding="utf-8")
    return path


def test_both_formats_and_files(pseudo: Path, tmp_path: Path) -> None:
    solution = pathcalc.solve(pathcalc.load(ROOT / "cases" / "low-pressure-virial.yaml"))
    title = pseudo_texts()["results.title"]
    assert f". {title}" in render_markdown(solution, words=pseudo)[0]
    assert f". {title}" in solution.report("md", words=pseudo)
    written = write_reports(solution, {"html", "md"}, tmp_path / "out", "v", words=catalogue(pseudo))
    texts = {path.suffix: path.read_text(encoding="utf-8") for path in written if path.suffix != ".svg"}
    assert title in texts[".html"]
    assert title in texts[".md"]


def test_missing_texts_are_english(tmp_path: Path) -> None:
    words = catalogue(write(tmp_path / "de.toml", {"results.title": "Ergebnisse", "doc.lang": "de"}))
    assert words.missing == len(english().texts) - 2
    assert words.texts["results.title"] == "Ergebnisse"
    assert words.texts["limits.title"] == "Limits"


FAULTS = {
    "[results]\ntitel = 'Ergebnisse'\n": (2, 1, "no text of the reports has the key 'results.titel'; did you mean"),
    "[results]\n\n  title = 3\n": (3, 3, "results.title is no text"),
    "[results]\ntitle = ''\n": (2, 1, "results.title is empty"),
    "[basis]\ncount = '{n} Angaben'\n": (2, 1, "basis.count lacks {sourced}, {unsourced}"),
    "[results]\ntitle = 'Ergebnisse {n}'\n": (2, 1, "results.title has, unlike the English text, {n}"),
    "[verdict]\n'limits.met' = '{n.__class__}'\n": (2, 1, "verdict.limits.met: only a name may stand in braces"),
    "[verdict]\n'limits.met' = '{n:>9999999}'\n": (2, 1, "verdict.limits.met: only a name"),
    "[results]\ntitle = 'offen {'\n": (2, 1, "results.title: "),
    "[results]\ntitle = Ergebnisse\n": (2, 9, "invalid value"),
    "results.title = 'Ergebnisse'\nresults.x = 'y'\n": (2, 1, "no text of the reports has the key 'results.x'"),
    "other = 'y'\n": (1, 1, "no text of the reports has the key 'other'"),
}


@pytest.mark.parametrize("text", FAULTS)
def test_faults_have_their_place(text: str, tmp_path: Path) -> None:
    file = tmp_path / "de.toml"
    file.write_text(text, encoding="utf-8")
    line, column, what = FAULTS[text]
    with pytest.raises(InvalidWordsError) as caught:
        catalogue(file)
    assert str(caught.value).startswith(f"{file}:{line}:{column}: error: {what}")


def test_files_that_are_no_text(tmp_path: Path) -> None:
    with pytest.raises(UsageError, match="cannot be read"):
        catalogue(tmp_path / "none.toml")
    with pytest.raises(UsageError, match="cannot be read"):
        catalogue(tmp_path)
    (tmp_path / "latin.toml").write_bytes(b"[a]\nb = '\xe4'\n")
    with pytest.raises(UsageError, match="UTF-8"):
        catalogue(tmp_path / "latin.toml")
    (tmp_path / "long.toml").write_bytes(b"#" * 1_000_001)
    with pytest.raises(UsageError, match="too large"):
        catalogue(tmp_path / "long.toml")


def test_words_do_not_get_into_formulas_or_markup(tmp_path: Path) -> None:
    """Signs of LaTeX and HTML in a catalogue stay text."""
    texts = {"maths.integration-error": r"\frac{{1}}{{0}} $ <b>", "results.title": "<script>alert(1)</script>"}
    solution = pathcalc.solve(pathcalc.load(ROOT / "cases" / "low-pressure-virial.yaml"))
    page = render_html(solution, words=write(tmp_path / "odd.toml", texts))
    assert "<script>" not in page
    assert 'class="latex"' not in page
    assert "<b>" not in page.partition("Route 1")[2].partition("Route 2")[0]
