"""Every exit code of the contract, for one case and for several."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from command_line import Run

FINDING = re.compile(r"^[^:\n]+:\d+:\d+: error: .+ \([a-z-]+\)$", re.MULTILINE)


def test_good_case(run: Run, cases: Path) -> None:
    done = run("solve", "good.yaml")
    assert done.returncode == 0
    assert done.stderr == ""
    assert "Limits: all 2 met" in done.stdout


def test_missed_limit_says_which(run: Run, cases: Path) -> None:
    done = run("solve", "missed.yaml")
    assert done.returncode == 1
    assert re.search(r"error: missed\.yaml: limit missed: valve\.T = 3\d\d\.\d+ K, not at most 305 K", done.stderr)
    assert "FAIL" in done.stdout
    assert "Limits: 1 of 2 missed" in done.stdout


@pytest.mark.parametrize(
    ("args", "said"),
    [
        ((), "Missing command"),
        (("solve",), "Missing argument"),
        (("solv", "good.yaml"), "Did you mean 'solve'?"),
        (("study", "good.yaml"), "No such command 'study'"),
        (("solve", "--jsn", "good.yaml"), "--json"),
        (("solve", "gone.yaml"), "gone.yaml does not exist"),
        (("solve", "--report", "hmtl", "good.yaml"), "did you mean 'html'?"),
        (("solve", "--report", ",", "good.yaml"), "names no format"),
        (("check", "empty"), "no case in this folder"),
        (("explain", "empty", "start.T"), "is a folder"),
        (("explain", "good.yaml", "valv.T"), "did you mean 'valve.T'?"),
        (("substances", "nitrogn"), "did you mean nitrogen"),
        (("completion", "tcsh"), "bash"),
    ],
)
def test_wrong_usage(run: Run, cases: Path, args: tuple[str, ...], said: str) -> None:
    (cases / "empty").mkdir()
    done = run(*args)
    assert done.returncode == 2
    assert said in done.stderr
    assert done.stderr.startswith("error: ")
    assert done.stdout == ""


@pytest.mark.parametrize("command", ["check", "solve"])
def test_invalid_case(run: Run, cases: Path, command: str) -> None:
    done = run(command, "invalid.yaml")
    assert done.returncode == 3
    lines = done.stdout if command == "check" else done.stderr
    other = done.stderr if command == "check" else done.stdout
    assert FINDING.search(lines)
    assert lines.startswith("invalid.yaml:6:12: error: ")
    assert "error" not in other


def test_no_solution_names_the_leg_and_its_place(run: Run, cases: Path) -> None:
    done = run("solve", "unsolved.yaml")
    assert done.returncode == 4
    assert done.stderr.startswith("unsolved.yaml:8:5: error: heater: ")
    assert FINDING.search(done.stderr)
    assert done.stdout == ""


def test_check_does_not_solve(run: Run, cases: Path) -> None:
    done = run("check", "unsolved.yaml")
    assert (done.returncode, done.stdout, done.stderr) == (0, "", "1 case valid\n")


@pytest.mark.parametrize(
    ("paths", "code"),
    [
        (("quick.yaml", "missed.yaml"), 1),
        (("missed.yaml", "gone.yaml", "quick.yaml"), 2),
        (("invalid.yaml", "missed.yaml", "quick.yaml"), 3),
        (("unsolved.yaml", "invalid.yaml", "quick.yaml"), 4),
        ((".",), 4),
    ],
)
def test_several_end_with_the_highest_code_and_all_are_tried(
    run: Run, cases: Path, paths: tuple[str, ...], code: int
) -> None:
    done = run("solve", "--json", *paths)
    assert done.returncode == code
    assert '"id": "quick"' in done.stdout


def test_check_of_a_folder(run: Run, cases: Path) -> None:
    done = run("check", ".")
    assert done.returncode == 3
    assert len(FINDING.findall(done.stdout)) == len(done.stdout.splitlines()) == 1
    assert done.stderr == "4 of 5 cases valid\n"


def test_internal_error_is_one_line_with_code_5(run: Run, cases: Path) -> None:
    (cases / "sitecustomize.py").write_text(
        "import pathcalc.path.solution as s\ndef solve(case):\n    raise KeyError('lost')\ns.solve = solve\n"
    )
    done = run("solve", "good.yaml", "quick.yaml", env={"PYTHONPATH": str(cases)})
    assert done.returncode == 5
    assert done.stdout == ""
    lines = [line for line in done.stderr.splitlines() if line.startswith("error: ")]
    assert len(lines) == 2
    assert all("internal error, KeyError: 'lost'; please report it with the case" in line for line in lines)


def test_internal_error_with_verbose_shows_where(cases: Path) -> None:
    import subprocess
    import sys

    code = (
        "import pathcalc.path.solution as s\n"
        "def solve(case): raise KeyError('lost')\n"
        "s.solve = solve\n"
        "from pathcalc.cli import main\n"
        "main(['solve', '--verbose', 'good.yaml'])\n"
    )
    done = subprocess.run(
        [sys.executable, "-c", code], cwd=cases, capture_output=True, text=True, check=False, timeout=60
    )
    assert done.returncode == 5
    assert "Traceback" in done.stderr
    assert "KeyError: 'lost'" in done.stderr
