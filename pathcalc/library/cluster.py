"""The same run on a dask cluster that is there already: cases travel with all they need, results come back in order.

No common file system is needed. A worker that is lost costs nothing: the scheduler hands its cases to others, a case
that brought its worker down is tried once more alone, and where no worker is left the rest is solved here.
"""

from __future__ import annotations

import contextlib
import os
import tempfile
import threading
import time
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from importlib import import_module
from pathlib import Path
from typing import Any

from pathcalc.errors import Finding, PathcalcError, UsageError
from pathcalc.library.job import Job, work
from pathcalc.library.outcome import Outcome
from pathcalc.library.workers import SteadyWorker, Watch, run_jobs

CONNECT_LIMIT = 15.0
NO_WORKERS_LIMIT = 30.0
"""Seconds without any worker after which the rest is solved here."""


@dataclass(frozen=True)
class Parcel:
    """A case with all files it needs, by path under the root; ``root`` and ``settings`` are paths under it, too."""

    job: Job
    case: str
    root: str
    settings: str | None
    files: dict[str, bytes]
    time_limit: float


def run_on_cluster(
    jobs: Sequence[Job], address: str, time_limit: float, top: Path, watch: Watch, limit: float = NO_WORKERS_LIMIT
) -> list[Outcome]:
    """Outcomes of all jobs in their order, as :func:`pathcalc.library.workers.run_jobs` gives them.

    Raises UsageError where the extra is not installed, nobody answers at the address, or its workers have another
    version of this program.
    """
    with _client(address) as client:
        _check_versions(client, watch)
        run = _ClusterRun(client, jobs, time_limit, top, watch, limit)
        try:
            run.go()
        finally:
            run.cancel()
    return run.in_order()


@contextlib.contextmanager
def _client(address: str) -> Iterator[Any]:
    try:
        library: Any = import_module("distributed")
    except ImportError:
        text = "--scheduler needs the extra dask: pip install 'pathcalc[dask]'"
        raise UsageError(text) from None
    import logging

    logging.getLogger("distributed").setLevel(logging.CRITICAL)
    try:
        client: Any = library.Client(address, timeout=CONNECT_LIMIT)
    except (OSError, ValueError, TimeoutError) as error:
        text = " ".join(str(error).split())
        raise UsageError(f"no scheduler answers at {address}: {text}") from None
    try:
        yield client
    finally:
        with contextlib.suppress(Exception):
            client.close(timeout=5)


def _check_versions(client: Any, watch: Watch) -> None:
    """All workers must have this version of the program; other libraries of theirs are told."""
    from pathcalc.library.digests import software

    began = time.monotonic()
    while not client.scheduler_info(n_workers=-1)["workers"]:
        if time.monotonic() - began > NO_WORKERS_LIMIT:
            raise UsageError("the scheduler has no workers")
        time.sleep(0.2)
    here = dict(software())
    try:
        there = client.run(remote_software)
    except Exception as error:
        text = " ".join(str(error).split())[:200]
        raise UsageError(f"the workers of the cluster cannot run this program: {text}") from None
    for worker, found in sorted(there.items()):
        if found["pathcalc"] != here["pathcalc"]:
            text = f"worker {worker} has pathcalc {found['pathcalc']}, and here is {here['pathcalc']}"
            raise UsageError(f"{text}; install the same version")
    others = {f"{name} {found[name]}" for found in there.values() for name in found if found[name] != here.get(name)}
    if others:
        watch.note(f"workers of the cluster have {', '.join(sorted(others))}, unlike here")


def remote_software() -> dict[str, str]:
    """Versions on a worker."""
    from pathcalc.library.digests import software

    return dict(software())


class _ClusterRun:
    def __init__(
        self, client: Any, jobs: Sequence[Job], time_limit: float, top: Path, watch: Watch, limit: float
    ) -> None:
        self.client, self.jobs, self.time_limit, self.top, self.watch = client, jobs, time_limit, top, watch
        self.limit = limit
        self.outcomes: dict[int, Outcome] = {}
        self.futures: dict[Any, int] = {}
        self.crashed: dict[int, str] = {}
        self.last_try = False

    def go(self) -> None:
        parcels: dict[int, Parcel] = {}
        for number, job in enumerate(self.jobs):
            parcel = pack(job, self.time_limit, self.top)
            if parcel is None:
                self._settle(number, work(job))
            else:
                parcels[number] = parcel
        self._submit(parcels)
        here = self._collect()
        first = dict(self.crashed)
        self.last_try = True
        for number in sorted(first):
            if not here:
                self._submit({number: parcels[number]})
                here = self._collect()
            elif number not in here:
                here.append(number)
        self._solve_here(sorted(here))

    def _submit(self, parcels: dict[int, Parcel]) -> None:
        for number, parcel in parcels.items():
            future = self.client.submit(
                solve_parcel, parcel, pure=False, retries=0, key=f"case-{number}-{os.urandom(6).hex()}"
            )
            self.futures[future] = number

    def _collect(self) -> list[int]:
        """Take what is done until all is; the numbers of those that the cluster will never do."""
        library: Any = import_module("distributed")
        idle_since: float | None = None
        while self.futures:
            try:
                done = library.wait(list(self.futures), timeout=1.0, return_when="FIRST_COMPLETED").done
            except (TimeoutError, OSError):
                done = set()
            for future in sorted(done, key=lambda f: self.futures[f]):
                self._take(future, self.futures.pop(future))
            if done:
                idle_since = None
                continue
            if self._workers():
                idle_since = None
            elif idle_since is None:
                idle_since = time.monotonic()
            elif time.monotonic() - idle_since > self.limit:
                left = sorted(self.futures.values())
                self.cancel()
                return left
        return [] if self._connected() else sorted(n for n in range(len(self.jobs)) if n not in self.outcomes)

    def _workers(self) -> int:
        if not self._connected():
            return 0
        with contextlib.suppress(Exception):
            return len(self.client.scheduler_info(n_workers=-1)["workers"])
        return 0

    def _connected(self) -> bool:
        return bool(self.client.status == "running")

    def _take(self, future: Any, number: int) -> None:
        try:
            answer: Any = future.result(timeout=30)
        except Exception as error:
            name = type(error).__name__
            if not self._connected() or name in ("CancelledError", "FutureCancelledError", "CommClosedError"):
                return  # solved here at the end
            answer = "lost with every worker that took it" if name == "KilledWorker" else f"ended by {name}: {error}"
        if isinstance(answer, dict):
            self._settle(number, Outcome.from_dict(answer))
            return
        file = self.jobs[number].file
        if not self.last_try:
            self.crashed[number] = answer
            self.watch.note(f"{file}: its worker was {answer}; the case is tried once more, alone, at the end")
            return
        text = f"brought down its worker twice, the second time alone: {self.crashed[number]}, then {answer}"
        self._settle(number, Outcome(file, "crashed", findings=(Finding(file, 1, 1, text, "crashed"),)))

    def _solve_here(self, numbers: list[int]) -> None:
        todo = [n for n in numbers if n not in self.outcomes]
        if not todo:
            return
        self.watch.note(f"the cluster is gone; {len(todo)} cases are solved here")
        done = run_jobs([self.jobs[n] for n in todo], 1, self.time_limit)
        for number, outcome in zip(todo, done, strict=True):
            self._settle(number, outcome)

    def _settle(self, number: int, outcome: Outcome) -> None:
        if self.last_try and number in self.crashed and outcome.status != "crashed":
            text = f"solved on the second try, alone; at first its worker was {self.crashed[number]}"
            outcome = replace(outcome, notes=(*outcome.notes, text))
        self.outcomes[number] = outcome
        self.watch.done(len(self.outcomes), len(self.jobs))

    def cancel(self) -> None:
        """Take back what is not done."""
        with contextlib.suppress(Exception):
            self.client.cancel(list(self.futures))
        self.futures.clear()

    def in_order(self) -> list[Outcome]:
        """Outcomes in the order of the jobs."""
        return [self.outcomes[number] for number in range(len(self.jobs))]


def pack(job: Job, time_limit: float, top: Path) -> Parcel | None:
    """A case with all it needs; None for one that is not valid, which needs no cluster to say so."""
    from pathcalc.case.files import find_root
    from pathcalc.case.loader import load
    from pathcalc.library.results_file import ResultsError, read_bytes, results_path

    file = Path(job.file)
    try:
        case = load(file, root=job.root)
    except PathcalcError:
        return None
    folder = file.parent.resolve()
    root = Path(job.root).resolve() if job.root is not None else find_root(folder)
    top = top.resolve()

    def inside(place: Path) -> str | None:
        path = Path(os.path.relpath(place, top)).as_posix()
        return None if path.startswith("../") else path

    files: dict[str, bytes] = {}
    contents = {folder / file.name: case.text.encode()}
    contents |= {Path(os.path.normpath(folder / name)): text.encode() for name, text in case.includes}
    place = results_path(folder / file.name)
    with contextlib.suppress(FileNotFoundError, ResultsError):
        contents[place] = read_bytes(place)
    if job.settings is not None:
        contents[Path(job.settings).resolve()] = Path(job.settings).read_bytes()
    for path, data in contents.items():
        name = inside(path)
        if name is None:
            return None
        files[name] = data
    under = inside(root)
    if under is None or (place.exists() and inside(place) not in files):
        return None
    settings = None if job.settings is None else inside(Path(job.settings).resolve())
    return Parcel(job, inside(folder / file.name) or "", under, settings, files, time_limit)


_local = threading.local()


def solve_parcel(parcel: Parcel) -> dict[str, Any] | str:
    """On a worker of the cluster: lay the files out, solve the case in a process of its own, tell the outcome.

    The process is kept for the next case; the answer is a text where it ended.
    """
    if not hasattr(_local, "steady"):
        _local.steady = SteadyWorker()
    with tempfile.TemporaryDirectory(prefix="pathcalc-") as folder:
        base = Path(folder).resolve()
        for name, data in parcel.files.items():
            place = base / name
            if not Path(os.path.normpath(place)).is_relative_to(base):
                raise ValueError(f"a file of the case would lie outside its folder: {name}")
            place.parent.mkdir(parents=True, exist_ok=True)
            place.write_bytes(data)
        job = Job(
            str(base / parcel.case),
            root=os.path.normpath(base / parcel.root),
            settings=None if parcel.settings is None else str(base / parcel.settings),
            reason=parcel.job.reason,
            stored=parcel.job.stored,
        )
        answer = _local.steady.work(job, parcel.time_limit)
    return answer if isinstance(answer, str) else _as_seen_from_home(answer, base, parcel).to_dict()


def _as_seen_from_home(outcome: Outcome, base: Path, parcel: Parcel) -> Outcome:
    """With the paths that the user knows."""
    case_folder = (base / parcel.case).parent
    home = os.path.dirname(parcel.job.file)

    def known(file: str) -> str:
        path = os.path.abspath(file)
        if not Path(path).is_relative_to(base):
            return file
        return Path(os.path.normpath(os.path.join(home, os.path.relpath(path, case_folder)))).as_posix()

    def clean(text: str) -> str:
        return text.replace(f"{base.as_posix()}/", "")

    findings = tuple(replace(f, file=known(f.file), message=clean(f.message)) for f in outcome.findings)
    return replace(outcome, file=parcel.job.file, findings=findings, detail=clean(outcome.detail))
