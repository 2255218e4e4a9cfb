"""What goes wrong while results are stored: real processes. Every file is whole, and what it was before or is now."""

from __future__ import annotations

import os
import resource
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from library_cases import GAS, REAL, Here, command, environment, library, run

from pathcalc.library.accept import only_run
from pathcalc.library.results_file import read_results

ACCEPT = ("regress", ".", "--accept", "--reason", "again", "--jobs", "1")


@pytest.fixture
def stored(tmp_path: Path, here: Here) -> Path:
    """Three cases with their results, all of which differ by now."""
    library(tmp_path, a=GAS, b=REAL, c=GAS)
    here("regress", ".", "--accept", "--reason", "first", cwd=tmp_path, code=0)
    for name in "abc":
        file = tmp_path / f"{name}.yaml"
        file.write_text(file.read_text().replace("320 K", "322 K"))
    return tmp_path


def temperatures(folder: Path) -> dict[str, float]:
    """Temperature of the heater in every stored result; each file is read in full."""
    return {p.name[0]: read_results(p)["states"][1]["T"] for p in sorted(folder.glob("*.results.json"))}


def at_the_second_file(folder: Path, sent: str) -> subprocess.CompletedProcess[str]:
    """Accept in a process that gets a signal while it writes its second file."""
    code = (
        "import os, signal, sys\n"
        "real, calls = os.fsync, []\n"
        "def fsync(handle):\n"
        "    calls.append(handle)\n"
        f"    if len(calls) == 2: os.kill(os.getpid(), signal.{sent})\n"
        "    real(handle)\n"
        "os.fsync = fsync\n"
        "from pathcalc.cli import main\n"
        "main(sys.argv[1:])\n"
    )
    return subprocess.run(
        [sys.executable, "-c", code, *ACCEPT],
        capture_output=True, text=True, cwd=folder, env=environment(), timeout=120, check=False,
    )  # fmt: skip


def test_an_interrupt_mid_write(stored: Path) -> None:
    done = at_the_second_file(stored, "SIGINT")
    assert done.returncode == 130
    assert "stored before the interrupt: a.results.json; all others are as they were" in done.stderr
    assert temperatures(stored) == {"a": 322.0, "b": 320.0, "c": 320.0}
    assert not list(stored.glob(".*"))


def test_a_kill_mid_write(stored: Path) -> None:
    """Half a file is left under a name of its own, counts for nothing, and is cleared away by the next to accept."""
    done = at_the_second_file(stored, "SIGKILL")
    assert done.returncode == -9
    assert temperatures(stored) == {"a": 322.0, "b": 320.0, "c": 320.0}
    assert len(list(stored.glob(".b.results.json.*.part"))) == 1
    run(*ACCEPT, cwd=stored, code=0)
    assert temperatures(stored) == {"a": 322.0, "b": 322.0, "c": 322.0}
    assert not list(stored.glob(".*"))


def limited(size: int) -> Callable[[], None]:
    def limit() -> None:
        resource.setrlimit(resource.RLIMIT_FSIZE, (size, size))

    return limit


def test_no_room_for_a_file(stored: Path) -> None:
    """A limit on the size of files stands for a full disk; each case is told, and is as it was."""
    done = subprocess.run(
        command(*ACCEPT), capture_output=True, text=True, cwd=stored, env=environment(), timeout=120, check=False,
        preexec_fn=limited(3000),
    )  # fmt: skip
    assert done.returncode == 2, done.stderr
    assert "a.yaml:1:1: error: a.results.json cannot be written: File too large; it is as it was" in done.stdout
    assert temperatures(stored) == {"a": 320.0, "b": 320.0, "c": 320.0}
    assert not list(stored.glob(".*"))
    assert "3 not written" in done.stderr


@pytest.fixture
def mounted(tmp_path: Path) -> Iterator[Callable[[str], Path]]:
    """A small file system of its own, where this process may mount one."""
    place = tmp_path / "mounted"
    place.mkdir()

    def mount(options: str) -> Path:
        done = subprocess.run(
            ["mount", "-t", "tmpfs", "-o", options, "tmpfs", str(place)], capture_output=True, check=False
        )
        if done.returncode != 0:
            pytest.skip("no file system can be mounted here; the limit on the size of files is tried in its stead")
        return place

    if sys.platform != "linux" or os.geteuid() != 0:
        pytest.skip("only root may mount a file system; the limit on the size of files is tried in its stead")
    yield mount
    subprocess.run(["umount", str(place)], capture_output=True, check=False)


def test_a_full_disk(mounted: Callable[[str], Path]) -> None:
    """Room for the cases and one stored result of about 12 kB, not for two."""
    folder = library(mounted("size=28k"), a=GAS, b=GAS)
    done = run(*ACCEPT, cwd=folder, code=2)
    assert "b.results.json cannot be written: No space left on device" in done.stdout
    assert temperatures(folder) == {"a": 320.0}
    assert not list(folder.glob(".*"))
    assert "cannot be written: No space left" in run(
        "regress", ".", "a", "--jobs", "1", "--junit", "out.xml", cwd=_filled(folder), code=2
    ).stderr  # fmt: skip
    assert not list(folder.glob("*.xml"))


def _filled(folder: Path) -> Path:
    """No room left at all."""
    handle = os.open(folder / "filler", os.O_CREAT | os.O_WRONLY)
    try:
        while True:
            os.write(handle, b"x" * 4096)
    except OSError:
        os.close(handle)
    return folder


def test_a_folder_that_may_only_be_read(mounted: Callable[[str], Path]) -> None:
    """A run reads and passes; accepting says why not."""
    folder = library(mounted("size=200k"), a=GAS, b=GAS)
    run("regress", ".", "a", "--accept", "--reason", "x", "--jobs", "1", cwd=folder, code=0)
    subprocess.run(["mount", "-o", "remount,ro", str(folder)], check=True)
    assert "1 passed" in run("regress", ".", "a", "--jobs", "1", cwd=folder, code=0).stderr
    done = run(*ACCEPT, cwd=folder, code=2)
    assert "b.yaml:1:1: error: b.results.json cannot be written: Read-only file system; it is as it was" in done.stdout


@pytest.mark.skipif(os.geteuid() == 0, reason="root may write everywhere; a read-only file system is tried instead")
def test_a_folder_without_permission_to_write(stored: Path) -> None:
    stored.chmod(0o555)
    try:
        done = run(*ACCEPT, cwd=stored, code=2)
    finally:
        stored.chmod(0o755)
    assert "cannot be written: Permission denied" in done.stdout
    assert temperatures(stored) == {"a": 320.0, "b": 320.0, "c": 320.0}


def test_two_runs_at_once(stored: Path, here: Here) -> None:
    """While one accepts, another may look on and may not accept."""
    with only_run(stored):
        done = run(*ACCEPT, cwd=stored, code=2)
        assert done.stderr.startswith("error: .: another run is accepting results in this folder; nothing was written")
        assert "3 differs" in here("regress", ".", cwd=stored, code=1).stderr
    assert temperatures(stored) == {"a": 320.0, "b": 320.0, "c": 320.0}
    both = [
        subprocess.Popen(
            command(*ACCEPT), cwd=stored, env=environment(), stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL
        )
        for _ in range(2)
    ]
    assert sorted(process.wait(timeout=120) for process in both) in ([0, 0], [0, 2])
    assert temperatures(stored) == {"a": 322.0, "b": 322.0, "c": 322.0}
    assert not list(stored.glob(".*"))


def test_a_folder_where_the_result_would_go(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS)
    (tmp_path / "a.results.json").mkdir()
    done = here("regress", ".", "--accept", "--reason", "x", cwd=tmp_path, code=2)
    assert "a.results.json cannot be written: a folder stands where the file would go" in done.stdout


def test_a_damaged_result_is_told_and_can_be_accepted_anew(stored: Path, here: Here) -> None:
    (stored / "a.results.json").write_bytes((stored / "a.results.json").read_bytes()[:5000])
    done = here("regress", ".", "a", cwd=stored, code=1)
    assert "a.results.json:1:1: error: is not JSON, line " in done.stdout
    assert "restore it from version control, or accept the result anew" in done.stdout
    here("regress", ".", "a", "--accept", "--reason", "was damaged", cwd=stored, code=0)
    assert temperatures(stored)["a"] == 322.0
