"""``pathcalc regress``: what it says, what it writes, and how it ends."""

from __future__ import annotations

import json
import os
import xml.etree.ElementTree as ET
from pathlib import Path

import pytest
from library_cases import GAS, INVALID, MISSED, REAL, UNSOLVED, Here, as_json, library, run, status_of

from pathcalc.library.settings import NAME


def digests(folder: Path) -> dict[str, bytes]:
    return {p.relative_to(folder).as_posix(): p.read_bytes() for p in sorted(folder.rglob("*")) if p.is_file()}


@pytest.fixture
def mixed(tmp_path: Path) -> Path:
    """A library with every outcome that a file alone can have."""
    library(tmp_path, good=GAS, real=REAL, missed=MISSED, invalid=INVALID, unsolved=UNSOLVED)
    (tmp_path / "deep").mkdir()
    (tmp_path / "deep" / "er.yaml").write_text(GAS.replace("include: shared/site.yaml\n", ""))
    return tmp_path


def test_from_nothing_to_a_library(mixed: Path, here: Here) -> None:
    """Missing results fail, nothing is written; what may be accepted is, the rest is refused; then all is told."""
    before = digests(mixed)
    done = here("regress", ".", "--format", "json", cwd=mixed, code=4)
    assert status_of(done) == {
        "er.yaml": "no stored result", "good.yaml": "no stored result", "invalid.yaml": "invalid",
        "missed.yaml": "no stored result", "real.yaml": "no stored result", "unsolved.yaml": "no solution",
    }  # fmt: skip
    assert [Path(row["file"]).name for row in as_json(done)["cases"]] == sorted(status_of(done), key=_order)
    assert digests(mixed) == before

    done = here("regress", ".", "--accept", "--reason", "first\nresults", cwd=mixed)
    assert done.returncode == 4
    assert "invalid.yaml:7:12: error: " in done.stdout
    assert "unsolved.yaml:12:5: error: valve: " in done.stdout
    assert "4 accepted" in done.stderr
    stored = json.loads((mixed / "good.results.json").read_text())
    assert stored["accepted"]["reason"] == "first results"
    assert not (mixed / "invalid.results.json").exists()
    assert not list(mixed.rglob("*.part"))

    before = digests(mixed)
    done = here("regress", ".", "--jobs", "2", cwd=mixed, code=4)
    assert "4 passed" in done.stderr
    assert "missed.yaml:16:5: warning: limit missed: valve.T = 320 K, not at most 305 K, as accepted" in done.stdout
    table = done.stdout[done.stdout.index("What needs a look first") :].splitlines()
    order = [line.split()[0] for line in table[3:] if line]
    assert order == ["invalid.yaml", "unsolved.yaml", "missed.yaml", "deep/er.yaml", "good.yaml", "real.yaml"]
    assert digests(mixed) == before


def _order(name: str) -> tuple[bool, str]:
    return name != "er.yaml", name


def test_accepting_touches_only_what_is_named(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS, b=GAS)
    assert here("regress", ".", "--accept", "--reason", "first", cwd=tmp_path).returncode == 0
    for name in "ab":
        file = tmp_path / f"{name}.yaml"
        file.write_text(file.read_text().replace("320 K", "322 K"))
    before = digests(tmp_path)
    done = here("regress", ".", "--accept", "b.yaml", "--reason", "warmer", cwd=tmp_path, code=0)
    assert "stored: b.results.json" in done.stderr
    after = digests(tmp_path)
    assert {name for name in after if after[name] != before.get(name)} == {"b.results.json"}
    assert status_of(here("regress", ".", "--format", "json", cwd=tmp_path, code=1)) == {
        "a.yaml": "differs",
        "b.yaml": "passed",
    }


def test_wrong_usage_writes_nothing(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS)
    before = digests(tmp_path)
    for arguments, text in (
        (("--accept",), "--accept needs --reason TEXT"),
        (("--accept", "--reason", "  "), "--accept needs --reason TEXT"),
        (("--reason", "x"), "--reason goes with --accept"),
        (("aa", "--accept", "--reason", "x"), "no case 'aa' in .; did you mean 'a'?"),
        (("--accept", "--changed", "--reason", "x"), "leave --changed out"),
        (("--jobs", "0"), "--jobs"),
        (("--junit", "."), "name a file"),
    ):
        assert text in here("regress", ".", *arguments, cwd=tmp_path, code=2).stderr
    assert "does not exist" in here("regress", "nowhere", cwd=tmp_path, code=2).stderr
    (tmp_path / "empty").mkdir()
    assert "no case in this folder" in here("regress", "empty", cwd=tmp_path, code=2).stderr
    assert digests(tmp_path) == before


def test_changed_solves_what_changed_and_no_more(tmp_path: Path, here: Here) -> None:
    """A case, an included file, a stored result: each change is found by its digest."""
    library(tmp_path, a=GAS, b=REAL, c=GAS.replace("include: shared/site.yaml\n", ""))
    here("regress", ".", "--accept", "--reason", "first", cwd=tmp_path)

    def changed() -> dict[str, str]:
        return status_of(here("regress", ".", "--changed", "--format", "json", cwd=tmp_path))

    assert set(changed().values()) == {"unchanged"}
    (tmp_path / "a.yaml").write_text(GAS + "# a comment\n")
    assert changed() == {"a.yaml": "passed", "b.yaml": "unchanged", "c.yaml": "unchanged"}
    site = tmp_path / "shared" / "site.yaml"
    site.write_text(site.read_text().replace("12 degC", "13 degC"))
    assert changed() == {"a.yaml": "differs", "b.yaml": "differs", "c.yaml": "unchanged"}
    stored = tmp_path / "c.results.json"
    stored.write_text(stored.read_text().replace('"scipy": "', '"scipy": "0.'))
    assert changed()["c.yaml"] == "passed"
    stored.unlink()
    assert changed()["c.yaml"] == "no stored result"


def test_the_same_run_gives_the_same_bytes(mixed: Path, here: Here) -> None:
    """Whatever the number of workers, in processes of their own or in this one."""
    first = run("regress", ".", "--jobs", "1", "--format", "json", cwd=mixed).stdout
    assert run("regress", ".", "--jobs", "2", "--format", "json", cwd=mixed).stdout == first
    assert here("regress", ".", "--format", "json", cwd=mixed).stdout == first
    assert str(mixed) not in first
    text = here("regress", ".", "--format", "github", cwd=mixed).stdout
    assert text.startswith("::error file=deep/er.yaml,line=1,col=1,title=no-stored-result::")


def test_junit(mixed: Path, here: Here) -> None:
    here("regress", ".", "--accept", "--reason", "first", cwd=mixed)
    (mixed / "good.results.json").unlink()
    here("regress", ".", "--junit", "out/tests.xml", cwd=mixed, code=4)
    suites = ET.parse(mixed / "out" / "tests.xml").getroot()
    assert (suites.get("tests"), suites.get("failures"), suites.get("errors")) == ("6", "1", "2")
    cases = {case.get("name"): case for case in suites.iter("testcase")}
    assert cases["invalid.yaml"].find("error").get("type") == "invalid"  # type: ignore[union-attr]
    assert (cases["invalid.yaml"].get("file"), cases["invalid.yaml"].get("line")) == ("invalid.yaml", "7")
    assert "there is no stored result" in (cases["good.yaml"].find("failure").get("message") or "")  # type: ignore[union-attr]
    assert cases["er.yaml"].get("classname") == "deep"
    assert not list(cases["real.yaml"])
    text = (mixed / "out" / "tests.xml").read_text()
    assert "time" not in text.replace("testsuite", "")
    assert "hostname" not in text


def test_a_result_without_its_case_fails(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS, b=GAS)
    here("regress", ".", "--accept", "--reason", "first", cwd=tmp_path)
    (tmp_path / "b.yaml").rename(tmp_path / "c.txt")
    (tmp_path / "other.results.json").write_text("{}")
    here("solve", "a.yaml", "--json", cwd=tmp_path)
    done = here("regress", ".", cwd=tmp_path, code=1)
    assert "b.results.json:1:1: error: a stored result without its case: there is no b.yaml" in done.stdout
    (tmp_path / "b.yaml").write_text("<<<<<<< HEAD\n" + GAS)
    assert "b.yaml does not begin with the key pathcalc" in here("regress", ".", cwd=tmp_path, code=1).stdout


def test_settings_that_are_wrong_stop_the_run(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS)
    here("regress", ".", "--accept", "--reason", "first", cwd=tmp_path)
    (tmp_path / NAME).write_text(
        "library: 1\ntolerances:\n  - {kind: speeds, relative: 1e-3, reason: x}\n"
        "  - {kind: speed, relative: 1e-3}\ntime_limit: 5\nowner: x\n"
    )
    done = here("regress", ".", cwd=tmp_path, code=3)
    assert done.stderr.splitlines() == [
        f"{NAME}:3:12: error: unknown name 'speeds'; did you mean speed? (unknown-name)",
        f"{NAME}:4:5: error: `tolerances` needs the key 'reason' (missing-key)",
        f"{NAME}:5:13: error: 5 has no unit; write a time such as 2 h (missing-unit)",
        f"{NAME}:6:1: error: unknown key 'owner' in the settings file; known: library, title, tolerances, time_limit, "
        "jobs (unknown-key)",
    ]


def test_one_file_and_the_settings_above_it(mixed: Path, here: Here) -> None:
    """A case by itself; the settings lie above its folder, as far as the checkout goes."""
    os.mkdir(mixed / ".git")
    (mixed / NAME).write_text("library: 1\ntolerances:\n  - {kind: temperature, absolute: 5 K, reason: x}\n")
    here("regress", "deep/er.yaml", "--accept", "--reason", "x", cwd=mixed, code=0)
    stored = mixed / "deep" / "er.results.json"
    assert '"T": 320.0' in stored.read_text()
    stored.write_text(stored.read_text().replace('"T": 320.0', '"T": 321.0'))
    assert "1 passed" in here("regress", "deep/er.yaml", cwd=mixed, code=0).stderr
    (mixed / NAME).unlink()
    assert "1 differs" in here("regress", "deep/er.yaml", cwd=mixed, code=1).stderr
