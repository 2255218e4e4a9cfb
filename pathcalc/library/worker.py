"""A worker process: takes jobs as lines of JSON, answers with outcomes, ends when nobody is there any more."""

from __future__ import annotations

import json
import os
import queue
import signal
import sys
import threading
import time
from typing import IO, Any

READY: dict[str, Any] = {"ready": True}


def main() -> None:
    """Serve the process that started this one, over its standard input and output."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)  # the starter is interrupted too, and ends us
    answers = os.fdopen(os.dup(1), "wb")
    os.dup2(2, 1)  # whatever prints must not come between the answers
    jobs: queue.Queue[dict[str, Any]] = queue.Queue()
    threading.Thread(target=_listen, args=(sys.stdin.buffer, jobs), daemon=True).start()
    from pathcalc.library.job import Job, work

    _import_what_solving_needs()
    _answer(answers, READY)
    while True:
        job = jobs.get()
        began = time.process_time()
        outcome = work(Job(**job))
        used = {"memory": _memory(), "processor": time.process_time() - began}
        _answer(answers, {"outcome": outcome.to_dict(), **used})


def _listen(source: IO[bytes], jobs: queue.Queue[dict[str, Any]]) -> None:
    """Take jobs; where the starter is gone, end at once, whatever is being worked on."""
    for line in source:
        jobs.put(json.loads(line))
    os._exit(0)


def _answer(answers: IO[bytes], message: dict[str, Any]) -> None:
    try:
        answers.write(json.dumps(message).encode() + b"\n")
        answers.flush()
    except BrokenPipeError:
        os._exit(0)


def _import_what_solving_needs() -> None:
    from importlib import import_module

    for name in ("case.loader", "path.solution", "path.checks", "path.warnings", "path.limits", "path.results"):
        import_module(f"pathcalc.{name}")
    from pathcalc.case.leg_registry import leg_models

    leg_models()


def _memory() -> float:
    """Most memory this process has held, MB; 0 where the system does not tell."""
    try:
        import resource
    except ImportError:
        return 0.0
    most = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    return most / (1e6 if sys.platform == "darwin" else 1e3)
