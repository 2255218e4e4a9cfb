"""The same run on a dask cluster of real processes, one of which is killed on the way."""

from __future__ import annotations

import json
import subprocess
import sys
import threading
import time
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from library_cases import GAS, INVALID, MISSED, REAL, UNSOLVED, Here, environment, library, slow

from pathcalc.errors import UsageError
from pathcalc.library.cluster import pack, run_on_cluster, solve_parcel
from pathcalc.library.job import Job
from pathcalc.library.workers import Watch


def dask(*arguments: str, folder: Path) -> subprocess.Popen[bytes]:
    settings = {"DASK_DISTRIBUTED__LOGGING__DISTRIBUTED": "critical"}
    return subprocess.Popen(
        [sys.executable, "-m", "dask", *arguments],
        cwd=folder,
        env=environment(**settings),
        stdout=subprocess.DEVNULL,
        stderr=subprocess.DEVNULL,
    )


class Cluster:
    """A scheduler and workers, each a process of its own, in a folder that has none of the cases."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        file = folder / "scheduler.json"
        self.scheduler = dask(
            "scheduler",
            "--host",
            "127.0.0.1",
            "--port",
            "0",
            "--no-dashboard",
            "--scheduler-file",
            str(file),
            folder=folder,
        )
        deadline = time.monotonic() + 60.0
        while not file.exists() or not file.read_text():
            assert time.monotonic() < deadline
            time.sleep(0.05)
        self.address = json.loads(file.read_text())["address"]
        self.workers = [self.add() for _ in range(2)]

    def add(self) -> subprocess.Popen[bytes]:
        return dask("worker", self.address, "--nthreads", "1", "--no-nanny", "--no-dashboard", folder=self.folder)

    def close(self) -> None:
        for process in (*self.workers, self.scheduler):
            process.kill()
        for process in (*self.workers, self.scheduler):
            process.wait(timeout=30)


@pytest.fixture(scope="module")
def cluster(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Cluster]:
    found = Cluster(tmp_path_factory.mktemp("cluster"))
    yield found
    found.close()


@pytest.fixture
def folder(tmp_path: Path, here: Here) -> Path:
    library(tmp_path, a=GAS, b=REAL, missed=MISSED, invalid=INVALID, unsolved=UNSOLVED)
    here("regress", ".", "--accept", "--reason", "x", cwd=tmp_path)
    (tmp_path / "b.yaml").write_text(REAL.replace("320 K", "321 K"))
    (tmp_path / "pathcalc-library.yaml").write_text(
        "library: 1\ntolerances: [{kind: pressure, relative: 0.1, reason: x}]\n"
    )
    return tmp_path


@pytest.mark.filterwarnings("ignore")
def test_the_same_results_in_the_same_order(cluster: Cluster, folder: Path, here: Here) -> None:
    """To the last byte, though the workers see none of the files; accepting is done here."""
    local = here("regress", ".", "--format", "json", cwd=folder, code=4)
    done = here("regress", ".", "--format", "json", "--scheduler", cluster.address, cwd=folder, code=4)
    assert done.stdout == local.stdout
    assert json.loads(done.stdout)["counts"]["differs"] == 1
    here(
        "regress",
        ".",
        "b",
        "--accept",
        "--reason",
        "on the cluster",
        "--scheduler",
        cluster.address,
        cwd=folder,
        code=0,
    )
    assert json.loads((folder / "b.results.json").read_text())["accepted"]["reason"] == "on the cluster"


@pytest.mark.filterwarnings("ignore")
def test_a_worker_that_is_lost_mid_run(cluster: Cluster, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    names = [f"c{i}" for i in range(6)]
    monkeypatch.chdir(library(tmp_path, **dict.fromkeys(names, slow(40))))
    jobs = [Job(f"{name}.yaml", stored=False) for name in names]

    def after_the_first(done: int, total: int) -> None:
        if done == 1:
            threading.Thread(target=cluster.workers[0].kill).start()

    outcomes = run_on_cluster(jobs, cluster.address, 100.0, tmp_path, Watch(done=after_the_first))
    assert [(o.file, o.status) for o in outcomes] == [(f"{name}.yaml", "passed") for name in names]
    assert cluster.workers[0].wait(timeout=30) == -9


def test_nobody_at_the_address(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("pathcalc.library.cluster.CONNECT_LIMIT", 0.5)
    monkeypatch.chdir(library(tmp_path, a=GAS))
    with pytest.raises(UsageError, match="no scheduler answers at"):
        run_on_cluster([Job("a.yaml")], "tcp://127.0.0.1:1", 10.0, tmp_path, Watch())


def test_a_parcel_holds_all_that_a_case_needs(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """And nothing of it may lie outside of its own folder."""
    monkeypatch.chdir(folder)
    parcel = pack(Job("a.yaml", settings=str(folder / "pathcalc-library.yaml")), 30.0, folder)
    assert parcel is not None
    assert set(parcel.files) == {"a.yaml", "shared/site.yaml", "a.results.json", "pathcalc-library.yaml"}
    assert pack(Job("invalid.yaml"), 30.0, folder) is None
    outside: Any = parcel.__class__(**{**vars(parcel), "files": {"../x.yaml": b""}})
    with pytest.raises(ValueError, match="outside its folder"):
        solve_parcel(outside)
