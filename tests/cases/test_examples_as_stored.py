"""The examples are a library like any other: held against their stored results, by the command itself."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from pathcalc.library.results_file import read_results

ROOT = Path(__file__).resolve().parents[2]
CASES = sorted((ROOT / "cases").glob("*.yaml"))
MISSED_AS_STORED = {"letdown-unheated.yaml"}


def regress(*arguments: str) -> Any:
    done = subprocess.run(
        [sys.executable, "-m", "pathcalc", "regress", "cases", "--format", "json", *arguments],
        capture_output=True,
        cwd=ROOT,
        timeout=300,
        check=False,
    )
    assert done.returncode == 0, done.stdout.decode() + done.stderr.decode()
    return json.loads(done.stdout)


def test_every_example_is_as_stored() -> None:
    found = regress("--jobs", "2")
    assert len(found["cases"]) == len(CASES) >= 16
    assert {row["status"] for row in found["cases"]} == {"passed"}
    missed = {
        Path(row["file"]).name for row in found["cases"] if any(f["code"] == "limit-missed" for f in row["findings"])
    }
    assert missed == MISSED_AS_STORED


@pytest.mark.parametrize("case", CASES, ids=lambda c: c.stem)
def test_stored_results_are_of_the_files_as_they_are(case: Path) -> None:
    """So that `--changed` may leave an example out; no check failed, and the reason is there."""
    from pathcalc.library.digests import changes, software

    stored = read_results(case.with_name(f"{case.stem}.results.json"))
    accepted = stored["accepted"]
    assert accepted["reason"]
    assert all(row["passed"] for row in stored["checks"])
    assert changes(accepted, software(), case.parent) == []
    assert stored["case"]["id"] == f"cases/{case.stem}"
