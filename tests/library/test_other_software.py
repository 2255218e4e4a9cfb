"""A stored result of another machine passes with the default tolerances.

PATHCALC_TEST_OTHER_PYTHON names a Python in an environment of its own, with other versions of numpy and scipy and this
package's other requirements: its results are held against those of this one. Where there is none, only rounding is
tried, every number moved by some last digits.
"""

from __future__ import annotations

import json
import os
import random
import subprocess
from pathlib import Path
from typing import Any

import pytest
from library_cases import ROOT, Here, environment

OTHER = os.environ.get("PATHCALC_TEST_OTHER_PYTHON", "")


def copied(folder: Path) -> Path:
    import shutil

    for name in ("cases", "shared"):
        shutil.copytree(ROOT / name, folder / name, ignore=shutil.ignore_patterns("reference"))
    (folder / ".git").mkdir()
    return folder


@pytest.mark.skipif(not OTHER, reason="PATHCALC_TEST_OTHER_PYTHON names no other environment")
def test_results_of_other_libraries(tmp_path: Path, here: Here) -> None:
    folder = copied(tmp_path)
    for file in folder.rglob("*.results.json"):
        file.unlink()
    subprocess.run(
        [OTHER, "-m", "pathcalc", "regress", "cases", "--accept", "--reason", "elsewhere", "--jobs", "2"],
        cwd=folder, env=environment(), check=True, capture_output=True, timeout=300,
    )  # fmt: skip
    found = json.loads(here("regress", "cases", "--format", "json", cwd=folder, code=0).stdout)
    assert {row["status"] for row in found["cases"]} == {"passed"}
    changed = {change.split()[0] for row in found["cases"] for change in row["changes"]}
    assert changed == {"numpy", "scipy"}


def shaken(value: Any, chance: random.Random) -> Any:
    """Every number moved by up to four units of its last place."""
    if isinstance(value, dict):
        return {k: v if k in ("accepted", "case") else shaken(v, chance) for k, v in value.items()}
    if isinstance(value, list):
        return [shaken(item, chance) for item in value]
    return value * (1.0 + chance.randint(-4, 4) * 2.2e-16) if isinstance(value, float) else value


def test_rounding_of_another_machine(tmp_path: Path, here: Here) -> None:
    folder = copied(tmp_path)
    chance = random.Random(1)
    names = ["nitrogen-booster", "steam-power-cycle", "air-store-least-work"]
    for name in names:
        place = folder / "cases" / f"{name}.results.json"
        place.write_text(json.dumps(shaken(json.loads(place.read_text()), chance)))
    here("regress", "cases", *names, cwd=folder, code=0)
