"""A generated library of 500 mixed cases: workers, time a case, memory, `--changed`. Printed; the ratios are asserted

only where the machine has nothing else to do (``PATHCALC_QUIET_MACHINE=1``).
"""

import os
import subprocess
import sys
import time

import pytest
from generated_library import write_library

COUNT = int(os.environ.get("PATHCALC_BENCHMARK_CASES", "500"))


@pytest.fixture(scope="module")
def library(tmp_path_factory):
    top = write_library(tmp_path_factory.mktemp("library"), COUNT)
    took, done = regress(top, "--accept", "--reason", "generated")
    print(f"\nfirst run over {COUNT} cases, accepted: {took:.1f} s; {done.stderr.splitlines()[-1]}")
    assert done.returncode == 0, done.stdout[-2000:]
    return top


def regress(top, *arguments):
    """Wall time of a run, s, and the run."""
    began = time.perf_counter()
    done = subprocess.run(
        [sys.executable, "-m", "pathcalc", "regress", ".", *arguments],
        cwd=top,
        capture_output=True,
        text=True,
        check=False,
    )
    return time.perf_counter() - began, done


def test_changed_on_an_untouched_library(library):
    took, done = min((regress(library, "--changed") for _ in range(3)), key=lambda pair: pair[0])
    print(f"\n--changed, nothing changed: {took:.2f} s")
    assert f"{COUNT} unchanged" in done.stderr


def test_two_workers_against_one(library, monkeypatch):
    """Time from the first job given to the last outcome, the start of the workers apart; memory of each worker."""
    from pathcalc.library.job import Job
    from pathcalc.library.workers import Watch, Worker, run_jobs

    monkeypatch.chdir(library)
    jobs = [Job(str(p.relative_to(library))) for p in sorted(library.rglob("*.yaml")) if p.parent.name != "shared"]
    took = {}
    for count in (1, 2):
        starts, busy = [], [0.0]
        give = Worker.give

        def noted(self, number, job, limit, give=give, starts=starts):
            starts.append(time.perf_counter())
            give(self, number, job, limit)

        monkeypatch.setattr(Worker, "give", noted)
        watch = Watch()
        began = time.process_time()
        outcomes = run_jobs(jobs, count, 100.0, watch)
        took[count] = time.perf_counter() - starts[0]
        busy[0] = time.process_time() - began
        monkeypatch.setattr(Worker, "give", give)
        assert all(o.status == "passed" for o in outcomes)
        work = sum(o.seconds for o in outcomes) / len(outcomes)
        processor = sum(watch.processor) / len(outcomes)
        memory = watch.memory
        print(f"\n{count} worker(s): {took[count]:.2f} s, {1e3 * took[count] / len(jobs):.1f} ms a case")
        print(f"in a worker {1e3 * work:.1f} ms a case, of the processor {1e3 * processor:.1f} ms")
        print(f"most memory of a worker after 50 cases {max(memory[:50]):.0f} MB, after all {max(memory):.0f} MB")
        print(f"the run itself {1e3 * busy[0] / len(jobs):.2f} ms of the processor a case")
    print(f"two workers are {took[1] / took[2]:.2f} times as fast as one")
    if os.environ.get("PATHCALC_QUIET_MACHINE"):
        assert took[1] / took[2] > 1.7
