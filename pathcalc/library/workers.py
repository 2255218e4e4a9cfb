"""Worker processes: hand out jobs, kill what takes too long, try once more alone what brought its worker down."""

from __future__ import annotations

import contextlib
import json
import os
import queue
import signal
import subprocess
import sys
import tempfile
import threading
import time
from collections import deque
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field, replace
from typing import Any

from pathcalc.errors import Finding, PathcalcError
from pathcalc.library.job import Job
from pathcalc.library.outcome import Outcome

START_LIMIT = 120.0
"""Seconds a worker may take to start."""
FAILED_STARTS = 3
_CODE = "import json, sys; sys.path[:] = json.loads(sys.argv.pop()); from pathcalc.library.worker import main; main()"
ONE_THREAD = ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS", "VECLIB_MAXIMUM_THREADS")


class WorkersError(PathcalcError):
    """Worker processes cannot be started."""


@dataclass
class Watch:
    """Who is told of the run while it lasts."""

    done: Callable[[int, int], None] = lambda done, total: None
    note: Callable[[str], None] = lambda text: None
    memory: list[float] = field(default_factory=list)
    """Most memory the answering worker had held, MB, an entry an answer."""
    processor: list[float] = field(default_factory=list)
    """Processor time of every answer, s."""


class Worker:
    """One worker process; what it says arrives in the queue as ``(worker, message)``, None when it has ended."""

    def __init__(self, said: queue.Queue[tuple[Worker, dict[str, Any] | None]]) -> None:
        self.job: int | None = None
        self.ready = False
        self.deadline = time.monotonic() + START_LIMIT
        self.over_time = False
        self._errors = tempfile.TemporaryFile()  # noqa: SIM115 (lives as long as the process does)
        path = json.dumps([os.path.abspath(p) if not p or os.path.exists(p) else p for p in sys.path])
        environment = {**os.environ, **{name: os.environ.get(name, "1") for name in ONE_THREAD}}
        self.process = subprocess.Popen(
            [sys.executable, "-P", "-X", "faulthandler", "-c", _CODE, path],
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=self._errors,
            env=environment,
        )
        self._thread = threading.Thread(target=self._listen, args=(said,), daemon=True)
        self._thread.start()

    def _listen(self, said: queue.Queue[tuple[Worker, dict[str, Any] | None]]) -> None:
        assert self.process.stdout is not None
        with contextlib.suppress(ValueError, OSError):
            for line in self.process.stdout:
                said.put((self, json.loads(line)))
        self.process.wait()
        said.put((self, None))

    def give(self, number: int, job: Job, time_limit: float) -> None:
        """Give it a job; a worker that has just ended is found out by what it says last."""
        self.job, self.deadline = number, time.monotonic() + time_limit
        assert self.process.stdin is not None
        with contextlib.suppress(OSError):
            self.process.stdin.write(json.dumps(job.to_dict()).encode() + b"\n")
            self.process.stdin.flush()

    def kill(self) -> None:
        """End it at once."""
        with contextlib.suppress(OSError):
            self.process.kill()

    def close(self) -> None:
        """End it and take back all that it held."""
        self.kill()
        self._thread.join(timeout=10.0)
        for stream in (self.process.stdin, self.process.stdout, self._errors):
            with contextlib.suppress(OSError, ValueError):
                if stream is not None:
                    stream.close()

    def last_words(self) -> str:
        """What a worker that is gone said of its end."""
        code = self.process.returncode
        if code is not None and code < 0:
            with contextlib.suppress(ValueError):
                return f"ended by {signal.Signals(-code).name}"
            return f"ended by signal {-code}"
        return f"ended with exit code {code}"

    def errors(self) -> str:
        """The end of what it wrote to standard error."""
        self._errors.seek(0, os.SEEK_END)
        self._errors.seek(max(0, self._errors.tell() - 4000))
        return self._errors.read().decode("utf-8", "backslashreplace")


def run_jobs(jobs: Sequence[Job], workers: int, time_limit: float, watch: Watch | None = None) -> list[Outcome]:
    """Outcomes of all jobs, in their order. A job that takes longer than ``time_limit`` (s) is ended.

    A job whose worker ends is tried once more when all others are done, by a worker that has nothing else to do.
    Raises WorkersError where workers cannot be started.
    """
    run = _Run(jobs, time_limit, watch or Watch())
    run.watch.done(0, len(jobs))
    try:
        run.go(range(len(jobs)), max(1, min(workers, len(jobs))))
        for number in run.crashed:
            run.last_try = True
            run.go([number], 1)
    finally:
        run.close()
    return [run.outcomes[number] for number in range(len(jobs))]


class SteadyWorker:
    """One worker process that is kept for many jobs, one after the other."""

    def __init__(self) -> None:
        self._run = _Run([], 0.0, Watch())

    def work(self, job: Job, time_limit: float) -> Outcome | str:
        """The outcome of a job, or how its worker ended."""
        run = self._run
        run.jobs, run.time_limit, run.crashed = [job], time_limit, []
        run.go([0], 1)
        return run.first_crash[0] if run.crashed else run.outcomes[0]

    def close(self) -> None:
        """End the process."""
        self._run.close()


class _Run:
    def __init__(self, jobs: Sequence[Job], time_limit: float, watch: Watch) -> None:
        self.jobs, self.time_limit, self.watch = jobs, time_limit, watch
        self.outcomes: dict[int, Outcome] = {}
        self.crashed: list[int] = []
        self.first_crash: dict[int, str] = {}
        self.last_try = False
        self.said: queue.Queue[tuple[Worker, dict[str, Any] | None]] = queue.Queue()
        self.workers: list[Worker] = []
        self.failed_starts = 0

    def close(self) -> None:
        for worker in self.workers:
            worker.kill()
        for worker in self.workers:
            worker.close()
        self.workers.clear()

    def go(self, numbers: Sequence[int], workers: int) -> None:
        """Work through some of the jobs."""
        todo = deque(numbers)
        left = len(todo)
        if self.last_try:
            self.close()
        while left:
            wanted = min(workers, left)
            while len(self.workers) < wanted:
                self.workers.append(self._start())
            for worker in self.workers:
                if worker.ready and worker.job is None and todo:
                    number = todo.popleft()
                    worker.give(number, self.jobs[number], self.time_limit)
            left -= self._next()

    def _start(self) -> Worker:
        try:
            return Worker(self.said)
        except OSError as error:
            raise WorkersError(f"no worker process can be started: {error.strerror or error}") from None

    def _next(self) -> int:
        """Wait for something to happen; the number of jobs that are settled by it (0 or 1)."""
        now = time.monotonic()
        busy = [w for w in self.workers if w.job is not None or not w.ready]
        wait = min((w.deadline for w in busy), default=now + 1.0) - now
        try:
            worker, message = self.said.get(timeout=max(0.0, min(wait, 3600.0)))
        except queue.Empty:
            for late in busy:
                if late.deadline <= time.monotonic():
                    late.over_time = True
                    late.kill()
                    late.deadline += 60.0
            return 0
        if worker not in self.workers:
            return 0
        if message is None:
            return self._ended(worker)
        if "ready" in message:
            worker.ready, worker.deadline, self.failed_starts = True, float("inf"), 0
            return 0
        number, worker.job = worker.job, None
        worker.deadline = float("inf")
        if number is None or worker.over_time:
            return 0
        self.watch.memory.append(message["memory"])
        self.watch.processor.append(message["processor"])
        self._settle(number, Outcome.from_dict(message["outcome"]))
        return 1

    def _ended(self, worker: Worker) -> int:
        self.workers.remove(worker)
        words, errors, number = worker.last_words(), worker.errors(), worker.job
        worker.close()
        if number is None:
            if not worker.ready:
                self.failed_starts += 1
                if self.failed_starts >= FAILED_STARTS:
                    last = errors.strip().splitlines()[-1:] or ["no further text"]
                    raise WorkersError(f"worker processes do not start: {words}: {last[0]}")
            return 0
        file = self.jobs[number].file
        if worker.over_time:
            text = f"took longer than {self.time_limit:g} s and was ended; --time-limit or time_limit gives it more"
            self._settle(number, Outcome(file, "over time", findings=(Finding(file, 1, 1, text, "over-time"),)))
            return 1
        if not self.last_try:
            self.crashed.append(number)
            self.first_crash[number] = words
            self.watch.note(f"{file}: its worker was {words}; the case is tried once more, alone, at the end")
            return 1
        text = f"brought down its worker twice, the second time alone: {self.first_crash[number]}, then {words}"
        finding = Finding(file, 1, 1, text, "crashed")
        self._settle(number, Outcome(file, "crashed", findings=(finding,), detail=errors))
        return 1

    def _settle(self, number: int, outcome: Outcome) -> None:
        if self.last_try and outcome.status != "crashed":
            text = f"solved on the second try, alone; at first its worker was {self.first_crash[number]}"
            outcome = replace(outcome, notes=(*outcome.notes, text))
        self.outcomes[number] = outcome
        self.watch.done(len(self.outcomes), len(self.jobs))
