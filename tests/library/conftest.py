"""The command line run in this process: the same code but for the worker processes, and a tenth of the time."""

from __future__ import annotations

import subprocess
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import pytest
from library_cases import Here


@pytest.fixture
def here(monkeypatch: pytest.MonkeyPatch, capfd: pytest.CaptureFixture[str]) -> Here:
    """Run ``pathcalc`` in this process, in a folder; jobs are worked on one after the other."""
    from pathcalc.cli.run import run
    from pathcalc.library.job import Job, work
    from pathcalc.library.outcome import Outcome

    def run_jobs(jobs: Sequence[Job], *rest: Any) -> list[Outcome]:
        return [Outcome.from_dict(work(job).to_dict()) for job in jobs]

    monkeypatch.setattr("pathcalc.library.run.run_jobs", run_jobs)

    def call(*args: str | Path, cwd: Path, code: int | None = None) -> subprocess.CompletedProcess[str]:
        monkeypatch.chdir(cwd)
        capfd.readouterr()
        found = run([str(a) for a in args])
        out, err = capfd.readouterr()
        assert "Traceback" not in err, err
        if code is not None:
            assert found == code, (found, out, err)
        return subprocess.CompletedProcess(list(map(str, args)), found, out, err)

    return call
