"""Small cases for libraries, and the surroundings their processes run in."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any, TypeAlias

ROOT = Path(__file__).parents[2]
Here: TypeAlias = Callable[..., subprocess.CompletedProcess[str]]
"""The command line run in this process; see the fixture ``here``."""

GAS = """\
pathcalc: 1
title: Air warmed, then let down
include: shared/site.yaml
fluid: {substance: air, equation: ideal-gas}
boundary: flow
amount: 0.2 kg/s
start: {T: 290 K, p: 40 bar}
legs:
  - name: heater
    path: workless
    to: {T: 320 K}
  - name: valve          # a comment that must live on
    path: throttling
    to: {p: 5 bar}
limits:
  - {quantity: valve.T, min: 300 K, max: 330 K}
  - {quantity: totals.heat, max: 50 kW}
"""
SITE = "surroundings: {T: 12 degC, p: 1.013 bar}\nunits: {T: degC, p: bar}\n"
MISSED = GAS.replace("max: 330 K", "max: 305 K")
INVALID = GAS.replace("290 K", "290 C")
UNSOLVED = GAS.replace("{p: 5 bar}", "{p: 50 bar}")
REAL = GAS.replace("substance: air, equation: ideal-gas", "substance: nitrogen, equation: peng-robinson")


def library(folder: Path, **cases: str) -> Path:
    """A folder with a site basis and the cases given by name."""
    (folder / "shared").mkdir(parents=True, exist_ok=True)
    (folder / "shared" / "site.yaml").write_text(SITE)
    for name, text in cases.items():
        (folder / f"{name}.yaml").write_text(text)
    return folder


def environment(**more: str) -> dict[str, str]:
    """Surroundings of a process without what would change its output, and with this package first."""
    dropped = ("NO_COLOR", "COLUMNS", "PYTHONHASHSEED", "TERM", "GITHUB_ACTIONS")
    kept = {k: v for k, v in os.environ.items() if k not in dropped and not k.startswith("PYTEST")}
    path = os.pathsep.join([str(ROOT), *filter(None, [kept.get("PYTHONPATH")])])
    return {**kept, "PYTHONPATH": path, **more}


def command(*args: str | Path) -> list[str]:
    """The command line of a process."""
    return [sys.executable, "-m", "pathcalc", *map(str, args)]


def run(*args: str | Path, cwd: Path, code: int | None = None, **env: str) -> subprocess.CompletedProcess[str]:
    """Run ``pathcalc`` as a process; no traceback, and the exit code if one is given."""
    done = subprocess.run(
        command(*args), capture_output=True, cwd=cwd, env=environment(**env), timeout=120, check=False
    )
    out, err = (data.decode("utf-8", "backslashreplace") for data in (done.stdout, done.stderr))
    assert "Traceback" not in err, err
    if code is not None:
        assert done.returncode == code, (done.returncode, out, err)
    return subprocess.CompletedProcess(done.args, done.returncode, out, err)


def accept(folder: Path, *cases: str, reason: str = "first results") -> subprocess.CompletedProcess[str]:
    """Accept the results of a folder."""
    return run("regress", ".", "--accept", *cases, "--reason", reason, "--jobs", "1", cwd=folder)


def as_json(done: subprocess.CompletedProcess[str]) -> Any:
    """Standard output read as JSON."""
    return json.loads(done.stdout)


def status_of(done: subprocess.CompletedProcess[str]) -> dict[str, str]:
    """Status of every case of a run with ``--format json``, by the name of its file."""
    return {Path(row["file"]).name: row["status"] for row in as_json(done)["cases"]}


def slow(steps: int) -> str:
    """A case that takes a second for every hundred steps or so."""
    head = REAL[: REAL.index("legs:")].replace("include: shared/site.yaml\n", "")
    leg = "{name: step, path: throttling, to: {p: {ratio: 0.999}}}"
    return f"{head}legs:\n  - repeat: {steps}\n    legs:\n      - {leg}\n"


def children(pid: int) -> list[int]:
    """Processes that a process has started."""
    found = []
    for task in Path(f"/proc/{pid}/task").glob("*/children"):
        try:
            found += [int(word) for word in task.read_text().split()]
        except OSError:
            continue
    return found


def alive(pid: int) -> bool:
    """Is a process there and not only waiting to be collected."""
    try:
        return Path(f"/proc/{pid}/stat").read_text().rpartition(")")[2].split()[0] != "Z"
    except OSError:
        return False
