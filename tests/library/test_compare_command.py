"""``pathcalc compare``: cases, results files, folders and revisions; text, JSON, Markdown."""

from __future__ import annotations

import subprocess
from pathlib import Path

import pytest
from library_cases import GAS, INVALID, REAL, UNSOLVED, Here, as_json, environment, library


def git(folder: Path, *arguments: str) -> None:
    identity = {f"GIT_{who}_{what}": "x@example.org" for who in ("AUTHOR", "COMMITTER") for what in ("NAME", "EMAIL")}
    subprocess.run(
        ["git", "-C", str(folder), *arguments], check=True, capture_output=True, env=environment(**identity), timeout=60
    )


@pytest.fixture
def checkout(tmp_path: Path) -> Path:
    """A checkout with two revisions: 320 K first, then 325 K and another site basis."""
    library(tmp_path / "cases", a=GAS, b=REAL)
    git(tmp_path, "init", "-q")
    git(tmp_path, "add", "-A")
    git(tmp_path, "commit", "-qm", "first")
    for name in "ab":
        file = tmp_path / "cases" / f"{name}.yaml"
        file.write_text(file.read_text().replace("320 K", "325 K"))
    site = tmp_path / "cases" / "shared" / "site.yaml"
    site.write_text(site.read_text().replace("12 degC", "15 degC"))
    git(tmp_path, "commit", "-qam", "second")
    return tmp_path


def test_two_files_as_text(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS, b=GAS.replace("320 K", "335 K"))
    done = here("compare", "a.yaml", "b.yaml", cwd=tmp_path, code=0)
    lines = [" ".join(line.split()) for line in done.stdout.splitlines()]
    assert "heater.to.T 320 K 335 K 320 K 335 K" in lines
    assert "valve.T met missed 320 K 335 K" in lines
    assert "heater.T K 320 335 +4.69%" in lines


def test_nothing_differs(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS, b=GAS)
    assert here("compare", "a.yaml", "b.yaml", cwd=tmp_path, code=0).stdout == "a.yaml and b.yaml: nothing differs\n"


def test_a_case_and_its_stored_result(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS)
    here("regress", ".", "--accept", "--reason", "x", cwd=tmp_path, code=0)
    (tmp_path / "a.yaml").write_text(GAS.replace("0.2 kg/s", "0.4 kg/s"))
    found = as_json(here("compare", "a.results.json", "a.yaml", "--format", "json", cwd=tmp_path, code=0))
    assert [row["address"] for row in found["inputs"]] == ["amount"]
    assert {"totals.heat", "amount"} <= {row["address"] for row in found["results"]}


def test_revisions(checkout: Path, here: Here) -> None:
    """The included file is that of the revision as well: two inputs differ."""
    done = here("compare", "HEAD~1:cases/a.yaml", "cases/a.yaml", "--format", "json", cwd=checkout, code=0)
    found = as_json(done)
    assert [row["address"] for row in found["inputs"]] == ["surroundings.T", "heater.to.T"]
    assert found["old"]["label"] == "HEAD~1:cases/a.yaml"
    done = here("compare", "HEAD~1:a.yaml", "HEAD:a.yaml", "--format", "json", cwd=checkout / "cases", code=0)
    assert [row["address"] for row in as_json(done)["inputs"]] == ["surroundings.T", "heater.to.T"]
    assert here("compare", "HEAD:cases", "cases", cwd=checkout, code=0).stdout == "2 cases without a difference\n"


def test_folders(checkout: Path, here: Here) -> None:
    (checkout / "cases" / "c.yaml").write_text(GAS)
    (checkout / "cases" / "b.yaml").unlink()
    found = as_json(here("compare", "HEAD~1:cases", "cases", "--format", "json", cwd=checkout, code=0))
    assert [(row["name"], row["only"]) for row in found] == [("a", None), ("b", "old"), ("c", "new")]
    text = here("compare", "HEAD~1:cases", "cases", "--format", "markdown", cwd=checkout, code=0).stdout
    assert text.startswith("## Cases compared: `HEAD~1:cases` with `cases`\n\n1 differ, 2 on one side only\n")
    assert "| heater.to.T | 320 K | 325 K | 320 K | 325 K |" in text
    assert "- `b`: only in `HEAD~1:cases`" in text


@pytest.mark.parametrize(
    ("old", "said"),
    [
        ("HEAD~9:cases/a.yaml", "no revision 'HEAD~9' in this checkout"),
        ("HEAD:cases/z.yaml", "there is no cases/z.yaml in revision HEAD"),
        ("--output=x:cases/a.yaml", "neither a file nor a revision"),
        ("HEAD:../../etc/passwd", "there is no ../../etc/passwd"),
        ("nowhere.yaml", "nowhere.yaml does not exist"),
        ("cases", "cases is a folder and cases/a.yaml is not"),
    ],
)
def test_what_is_not_there(old: str, said: str, checkout: Path, here: Here) -> None:
    options = ["--"] if old.startswith("-") else []
    assert said in here("compare", *options, old, "cases/a.yaml", cwd=checkout, code=2).stderr


def test_a_revision_outside_of_a_checkout(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS)
    assert "not a git repository" in here("compare", "HEAD:a.yaml", "a.yaml", cwd=tmp_path, code=2).stderr


def test_links_in_a_revision_stay_inside(checkout: Path, here: Here) -> None:
    (checkout / "cases" / "in.yaml").symlink_to("a.yaml")
    (checkout / "cases" / "out.yaml").symlink_to("/etc/hostname")
    (checkout / "cases" / "up.yaml").symlink_to("../../../etc/hostname")
    git(checkout, "add", "-A")
    git(checkout, "commit", "-qm", "links")
    assert "nothing differs" in here("compare", "HEAD:cases/in.yaml", "cases/a.yaml", cwd=checkout, code=0).stdout
    for name in ("out", "up"):
        done = here("compare", f"HEAD:cases/{name}.yaml", "cases/a.yaml", cwd=checkout, code=2)
        assert "not a file that can be read" in done.stderr


def test_bad_sides(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS, invalid=INVALID, unsolved=UNSOLVED)
    (tmp_path / "bad.results.json").write_text("{")
    done = here("compare", "invalid.yaml", "a.yaml", cwd=tmp_path, code=3)
    assert "invalid.yaml:7:12: error: " in done.stderr
    assert "new has no solution: valve: " in here("compare", "a.yaml", "unsolved.yaml", cwd=tmp_path, code=4).stdout
    done = here("compare", "bad.results.json", "a.yaml", cwd=tmp_path, code=2)
    assert "bad.results.json:1:1: error: is not JSON" in done.stderr


def test_markdown_shows_what_is_written_as_it_is(tmp_path: Path, here: Here) -> None:
    title = "Air | <b>warm</b> `x` *y* [z](javascript:1)"
    library(tmp_path, a=GAS, b=GAS.replace("title: Air warmed, then let down", f"title: '{title}'"))
    text = here("compare", "a.yaml", "b.yaml", "--format", "markdown", cwd=tmp_path, code=0).stdout
    assert "\n### Air \\| \\<b\\>warm\\</b\\> \\`x\\` \\*y\\* \\[z\\](javascript:1)\n" in text
