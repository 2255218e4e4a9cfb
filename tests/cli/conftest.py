"""The command line as a user runs it: real processes."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Mapping
from pathlib import Path

import pytest
from command_line import GOOD, INVALID, MISSED, QUICK, UNSOLVED, Run, environment


@pytest.fixture
def run(tmp_path: Path) -> Run:
    """Run ``python -m pathcalc`` in an empty folder."""

    def call(
        *args: str | Path,
        stdin: str | bytes | None = None,
        cwd: Path = tmp_path,
        env: Mapping[str, str] | None = None,
    ) -> subprocess.CompletedProcess[str]:
        data = stdin.encode() if isinstance(stdin, str) else stdin
        done = subprocess.run(
            [sys.executable, "-m", "pathcalc", *map(str, args)],
            input=data or b"",
            capture_output=True,
            cwd=cwd,
            env=environment(**(env or {})),
            timeout=120,
            check=False,
        )
        out, err = done.stdout.decode(), done.stderr.decode()
        assert "Traceback" not in err, err
        return subprocess.CompletedProcess(done.args, done.returncode, out, err)

    return call


@pytest.fixture
def cases(tmp_path: Path) -> Path:
    """A folder with a case of every kind of outcome."""
    for name, text in {
        "good": GOOD, "missed": MISSED, "invalid": INVALID, "unsolved": UNSOLVED, "quick": QUICK,
    }.items():  # fmt: skip
        (tmp_path / f"{name}.yaml").write_text(text)
    (tmp_path / "not-a-case.yaml").write_text("other: 1\n")
    return tmp_path
