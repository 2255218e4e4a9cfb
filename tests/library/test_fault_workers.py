"""Workers that are killed, hang or outlive the run: real processes. Nothing is lost, and each is told."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import threading
import time
from pathlib import Path
from typing import Any

import pytest
from library_cases import GAS, REAL, alive, children, command, environment, library, slow

from pathcalc.library import workers
from pathcalc.library.job import Job
from pathcalc.library.outcome import Outcome
from pathcalc.library.workers import Watch, Worker, WorkersError, run_jobs

linux = pytest.mark.skipif(not sys.platform.startswith("linux"), reason="looks into /proc")


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(library(tmp_path, a=GAS, b=slow(60), c=REAL, d=GAS))
    return tmp_path


def killing(monkeypatch: pytest.MonkeyPatch, file: str, times: int) -> list[int]:
    """Kill the worker that is given a case a moment after, so many times; the pids of the killed."""
    killed: list[int] = []
    give = Worker.give

    def give_and_kill(self: Worker, number: int, job: Job, time_limit: float) -> None:
        give(self, number, job, time_limit)
        if job.file == file and len(killed) < times:
            killed.append(self.process.pid)
            threading.Timer(0.05, os.kill, (self.process.pid, signal.SIGKILL)).start()

    monkeypatch.setattr(Worker, "give", give_and_kill)
    return killed


def solved(names: str, time_limit: float = 100.0, count: int = 2) -> tuple[list[Outcome], list[str], list[Any]]:
    notes: list[str] = []
    done: list[Any] = []
    watch = Watch(done=lambda *numbers: done.append(numbers), note=notes.append)
    jobs = [Job(f"{name}.yaml", stored=False) for name in names]
    return run_jobs(jobs, count, time_limit, watch), notes, done


def test_a_worker_killed_mid_case(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Its case is tried again at the end; all results are there, in order."""
    killed = killing(monkeypatch, "b.yaml", 1)
    outcomes, notes, done = solved("abcd")
    assert len(killed) == 1
    assert [(o.file, o.status) for o in outcomes] == [(f"{n}.yaml", "passed") for n in "abcd"]
    assert notes == ["b.yaml: its worker was ended by SIGKILL; the case is tried once more, alone, at the end"]
    assert outcomes[1].notes == ("solved on the second try, alone; at first its worker was ended by SIGKILL",)
    assert done[-1] == (4, 4)


def test_a_case_that_kills_every_worker(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    killing(monkeypatch, "b.yaml", 2)
    outcomes, _, _ = solved("abc", count=1)
    assert [o.status for o in outcomes] == ["passed", "crashed", "passed"]
    assert outcomes[1].code == 5
    assert "brought down its worker twice, the second time alone" in outcomes[1].findings[0].message


def test_a_case_that_hangs(folder: Path) -> None:
    (folder / "b.yaml").write_text(slow(1000))
    began = time.monotonic()
    outcomes, _, _ = solved("abcd", time_limit=4.0)
    assert [o.status for o in outcomes] == ["passed", "over time", "passed", "passed"]
    assert outcomes[1].findings[0].message.startswith("took longer than 4 s and was ended")
    assert time.monotonic() - began < 60.0


def test_workers_that_do_not_start(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(workers, "_CODE", "import sys; sys.exit('no memory')")
    with pytest.raises(WorkersError, match="do not start: ended with exit code 1: no memory"):
        solved("a")


def started(folder: Path, *arguments: str) -> subprocess.Popen[bytes]:
    """A run whose only worker is at work on a case that never ends."""
    (folder / "b.yaml").write_text(slow(1000))
    process = subprocess.Popen(
        command("regress", ".", "b", "--jobs", "1", *arguments),
        cwd=folder,
        env=environment(),
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        start_new_session=True,
    )
    deadline = time.monotonic() + 60.0
    while time.monotonic() < deadline:
        busy = [pid for pid in children(process.pid) if _seconds(pid) > 1.5]
        if busy:
            return process
        time.sleep(0.05)
    raise AssertionError("no worker came to work")


def _seconds(pid: int) -> float:
    """Processor time of a process."""
    try:
        words = Path(f"/proc/{pid}/stat").read_text().rpartition(")")[2].split()
    except OSError:
        return 0.0
    return (int(words[11]) + int(words[12])) / os.sysconf("SC_CLK_TCK")


def gone(pids: list[int]) -> bool:
    deadline = time.monotonic() + 20.0
    while any(alive(pid) for pid in pids) and time.monotonic() < deadline:
        time.sleep(0.05)
    return not any(alive(pid) for pid in pids)


@linux
def test_an_interrupt_while_solving(folder: Path) -> None:
    """Ctrl-C reaches the whole group of processes: one line, exit code 130, no worker left, nothing written."""
    process = started(folder, "--accept", "--reason", "x")
    pids = children(process.pid)
    os.killpg(process.pid, signal.SIGINT)
    out, err = process.communicate(timeout=60)
    assert (process.returncode, out, err.decode().strip()) == (130, b"", "error: interrupted")
    assert gone(pids)
    assert not list(folder.glob("*.results.json"))
    assert not list(folder.glob(".*"))


@linux
def test_workers_end_with_the_run_that_is_killed(folder: Path) -> None:
    process = started(folder)
    pids = children(process.pid)
    assert pids
    process.kill()
    process.communicate(timeout=60)
    assert gone(pids)
