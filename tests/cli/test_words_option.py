"""``pathcalc solve --words``: reports in the words of another catalogue, results in English."""

from __future__ import annotations

from pathlib import Path

from command_line import Run


def test_reports_in_other_words(run: Run, cases: Path) -> None:
    (cases / "de.toml").write_text("[doc]\nlang = 'de'\n[results]\ntitle = 'Ergebnisse'\n", encoding="utf-8")
    done = run("solve", "good.yaml", "--json", "--report", "html,md", "--words", "de.toml")
    assert done.returncode == 0
    assert "texts are missing and stay English" in done.stderr
    assert done.stderr.count("\n") == 3
    page = (cases / "reports/good.html").read_text(encoding="utf-8")
    assert '<html lang="de">' in page
    assert "Ergebnisse" in page
    assert done.stdout == run("solve", "good.yaml", "--json").stdout


def test_a_catalogue_with_faults_is_refused(run: Run, cases: Path) -> None:
    (cases / "de.toml").write_text("[results]\ntitel = 'x'\ndecimals = '{n}'\n", encoding="utf-8")
    done = run("solve", "good.yaml", "--report", "html", "--words", "de.toml")
    assert done.returncode == 2
    assert done.stdout == ""
    assert [line.partition(" error")[0] for line in done.stderr.splitlines()] == ["de.toml:2:1:", "de.toml:3:1:"]
    assert not (cases / "reports").exists()


def test_words_without_a_report(run: Run, cases: Path) -> None:
    (cases / "de.toml").write_text("", encoding="utf-8")
    done = run("solve", "good.yaml", "--words", "de.toml")
    assert done.returncode == 2
    assert "--words is for reports" in done.stderr
