"""Where reports go, and that a place that cannot be written is refused before anything is left behind."""

from __future__ import annotations

from pathlib import Path

from command_line import GOOD, QUICK, Run


def test_reports_lie_where_the_summary_says(run: Run, cases: Path) -> None:
    done = run("solve", "good.yaml", "--report", "html,md")
    places = [line.removeprefix("Report: ") for line in done.stdout.splitlines() if line.startswith("Report: ")]
    assert places == ["reports/good.html", "reports/good.md"]
    assert done.stdout.endswith("Report: reports/good.md\n")
    assert "<html" in (cases / places[0]).read_text()[:200]
    assert (cases / places[1]).read_text().startswith("#")


def test_the_folders_of_the_id_are_kept(run: Run, tmp_path: Path) -> None:
    for folder in ("a", "b"):
        (tmp_path / "lib" / folder).mkdir(parents=True)
        (tmp_path / "lib" / folder / "same.yaml").write_text(QUICK)
    done = run("solve", "lib", "--root", "lib", "--report", "html", "-o", "out", "--json")
    assert done.returncode == 0
    assert sorted(p.relative_to(tmp_path).as_posix() for p in (tmp_path / "out").rglob("*") if p.is_file()) == [
        "out/a/same.html",
        "out/b/same.html",
        "out/index.html",
    ]
    assert "index: out/index.html" in done.stderr
    assert "report: out/a/same.html" in done.stderr
    assert "report:" not in done.stdout


def test_two_cases_of_one_id_do_not_overwrite_each_other(run: Run, tmp_path: Path) -> None:
    for folder in ("a", "b"):
        (tmp_path / folder).mkdir()
        (tmp_path / folder / "same.yaml").write_text(QUICK.replace("Nitrogen", folder))
    done = run("solve", "a/same.yaml", "b/same.yaml", "--report", "md")
    assert done.returncode == 2
    assert "b/same.yaml: has the id 'same' as a/same.yaml has" in done.stderr
    assert "a, warmed" in (tmp_path / "reports" / "same.md").read_text()


def test_output_alone_writes_both(run: Run, cases: Path) -> None:
    assert run("solve", "quick.yaml", "-o", "out").returncode == 0
    assert {p.suffix for p in (cases / "out").iterdir()} >= {".html", ".md"}


def test_a_folder_that_cannot_be_written_is_refused_before_solving(run: Run, cases: Path) -> None:
    done = run("solve", "good.yaml", "--report", "html", "-o", "quick.yaml/reports")
    assert done.returncode == 2
    assert "cannot write reports into quick.yaml/reports: quick.yaml is no folder" in done.stderr
    assert done.stdout == ""


def test_a_report_that_fails_leaves_nothing_half_written(run: Run, cases: Path) -> None:
    (cases / "out" / "good.md").mkdir(parents=True)
    done = run("solve", "good.yaml", "quick.yaml", "--report", "html,md", "-o", "out")
    assert done.returncode == 2
    assert "error: good.yaml: cannot write reports into out: a folder stands where the file would go" in done.stderr
    assert sorted(p.name for p in (cases / "out").iterdir() if p.name.startswith(("good.html", "."))) == []
    assert (cases / "out" / "quick.html").is_file()


def test_a_missed_limit_still_has_its_report(run: Run, cases: Path) -> None:
    assert run("solve", "missed.yaml", "--report", "md").returncode == 1
    assert (cases / "reports" / "missed.md").is_file()


def test_a_name_that_looks_like_an_option(run: Run, tmp_path: Path) -> None:
    (tmp_path / "-x.yaml").write_text(GOOD)
    assert run("check", "--", "-x.yaml").returncode == 0
