"""Reports of several cases from the command line: index, PDF, templates, the same bytes wherever they are made."""

from __future__ import annotations

import os
import shutil
from pathlib import Path

import pytest
from command_line import INVALID, MISSED, QUICK, UNSOLVED, Run

NO_BROWSER = {"PATHCALC_BROWSER": "/no/such/browser"}


def library(folder: Path) -> Path:
    """A library with a case called as the index would be, and one of every bad outcome."""
    for name, text in {"index": QUICK, "sub/missed": MISSED, "sub/bad": INVALID, "unsolved": UNSOLVED}.items():
        path = folder / f"{name}.yaml"
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text)
    return folder


def written(folder: Path) -> dict[str, bytes]:
    return {p.relative_to(folder).as_posix(): p.read_bytes() for p in folder.rglob("*") if p.is_file()}


def test_index_leads_to_every_report_and_the_same_bytes_come_everywhere(run: Run, tmp_path: Path) -> None:
    """Another folder, named another way, another locale, zone and order of hashing: HTML, Markdown, SVG, indexes."""
    one, two = library(tmp_path / "one" / "lib"), library(tmp_path / "two" / "deeper" / "cases")
    first = run("solve", "lib", "--root", "lib", "--report", "html,md", "-o", "out", cwd=one.parent)
    elsewhere = {"LC_ALL": "de_DE.UTF-8", "LANG": "C", "TZ": "Asia/Tokyo", "PYTHONHASHSEED": "5"}
    second = run("solve", two, "--root", two, "--report", "html,md", "-o", tmp_path / "o2", env=elsewhere)
    assert first.returncode == second.returncode == 4
    assert "index: out/library-index.html\nindex: out/library-index.md\n" in first.stderr
    files = written(one.parent / "out")
    assert files == written(tmp_path / "o2")
    assert {"index.html", "index.md", "library-index.html", "library-index.md", "sub/missed.html"} <= set(files)
    assert any(name.endswith(".svg") for name in files)
    assert "<h1>Nitrogen, warmed and let down</h1>" in files["index.html"].decode()
    page = files["library-index.html"].decode()
    rows = page.split("<tbody>")[1]
    places = [rows.index(word) for word in (">no solution<", ">invalid<", ">limit missed<", ">no limits stated<")
              if word in rows]  # fmt: skip
    assert len(places) >= 3
    assert places == sorted(places)
    for link in ("index.html", "index.md", "sub/missed.html", "sub/missed.md"):
        assert f'<a href="{link}"' in page
    assert "bad.yaml:6:12: unit &#39;C&#39; is not known" in page
    assert str(tmp_path) not in page


def test_one_file_has_no_index_and_a_folder_of_one_has(run: Run, tmp_path: Path) -> None:
    (tmp_path / "lib").mkdir()
    (tmp_path / "lib" / "quick.yaml").write_text(QUICK)
    assert run("solve", "lib/quick.yaml", "--root", "lib", "--report", "md", "-o", "a").returncode == 0
    assert not (tmp_path / "a" / "index.md").exists()
    assert run("solve", "lib", "--root", "lib", "--report", "md", "-o", "b").returncode == 0
    assert (tmp_path / "b" / "index.md").is_file()
    assert not (tmp_path / "b" / "index.html").exists()


def test_index_that_cannot_be_written(run: Run, tmp_path: Path) -> None:
    (tmp_path / "lib").mkdir()
    (tmp_path / "lib" / "quick.yaml").write_text(QUICK)
    (tmp_path / "out" / "index.md").mkdir(parents=True)
    done = run("solve", "lib", "--root", "lib", "--report", "md", "-o", "out")
    assert done.returncode == 2
    assert "error: cannot write the index into out: " in done.stderr
    assert (tmp_path / "out" / "quick.md").is_file()


def test_no_browser_is_told_before_anything_is_solved(run: Run, cases: Path) -> None:
    done = run("solve", "good.yaml", "--report", "html,pdf", "-o", "out", env=NO_BROWSER)
    assert done.returncode == 2
    assert done.stdout == ""
    assert done.stderr.startswith("error: PATHCALC_BROWSER names '/no/such/browser'")
    assert not (cases / "out").exists()


def test_browser_that_fails_leaves_the_results_and_no_report(run: Run, cases: Path) -> None:
    false = shutil.which("false")
    assert false
    done = run("solve", "quick.yaml", "--report", "html,pdf", "-o", "out", env={"PATHCALC_BROWSER": false})
    assert done.returncode == 2
    assert f"error: quick.yaml: the browser {false} wrote no PDF (exit code 1)" in done.stderr
    assert "Nitrogen" in done.stdout
    assert not (cases / "out").exists()


def test_pdf_beside_the_page(run: Run, cases: Path) -> None:
    named = os.environ.get("PATHCALC_TEST_BROWSER")
    env = {"PATHCALC_BROWSER": named} if named else {}
    done = run("solve", "quick.yaml", "--report", "html,pdf", "--paper", "letter", "-o", "out", env=env)
    assert done.returncode == 0, done.stderr
    assert done.stdout.endswith("Report: out/quick.html\nReport: out/quick.pdf\n")
    data = (cases / "out" / "quick.pdf").read_bytes()
    assert data.startswith(b"%PDF-")
    assert b"/MediaBox [0 0 612 792]" in data


@pytest.mark.parametrize(
    ("template", "message"),
    [
        ("{% extends 'pathcalc/base.html.j2' %}\n{% block header %}{{ doc.nothing }}{% endblock %}", ":2: "),
        ("\n\n{% block %}", ":3: "),
    ],
)
def test_mistake_in_a_template(run: Run, cases: Path, template: str, message: str) -> None:
    (cases / "house").mkdir()
    (cases / "house" / "base.html.j2").write_text(template)
    done = run("solve", "quick.yaml", "--report", "html", "--template", "house", "-o", "out")
    assert done.returncode == 2
    assert f"house/base.html.j2{message}" in done.stderr
    assert not (cases / "out").exists()


def test_template_without_a_report_or_a_folder(run: Run, cases: Path) -> None:
    done = run("solve", "quick.yaml", "--template", ".")
    assert done.returncode == 2
    assert "add --report or -o" in done.stderr
    done = run("solve", "quick.yaml", "--report", "html", "--template", "nowhere")
    assert done.returncode == 2
    assert "--template nowhere is no folder" in done.stderr
