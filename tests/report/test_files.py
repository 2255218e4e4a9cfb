"""Reports are written whole or not at all."""

from __future__ import annotations

import os
import shutil
import stat
import tempfile
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from builders import two_stages

from pathcalc.errors import UsageError
from pathcalc.report import files, write_reports


def test_writes_all_formats(tmp_path: Path) -> None:
    folder = tmp_path / "new" / "reports"
    written = write_reports(two_stages(), {"html", "md"}, folder, "booster")
    assert sorted(p.name for p in written) == [
        "booster-T-s.svg",
        "booster-exergy.svg",
        "booster-heat-work.svg",
        "booster-p-h.svg",
        "booster-p-v.svg",
        "booster.html",
        "booster.md",
    ]
    assert sorted(p.name for p in folder.iterdir()) == sorted(p.name for p in written)
    text = (folder / "booster.md").read_text(encoding="utf-8")
    assert "](booster-T-s.svg)" in text
    old = os.umask(0)
    os.umask(old)
    assert stat.S_IMODE(written[0].stat().st_mode) == 0o666 & ~old


def test_failure_leaves_the_old_report_and_nothing_else(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    target = tmp_path / "a.html"
    target.write_text("old")
    calls: list[int] = []
    real = os.fsync

    def full(descriptor: int) -> None:
        calls.append(descriptor)
        if len(calls) == 2:
            raise OSError(28, "No space left on device")
        real(descriptor)

    monkeypatch.setattr(os, "fsync", full)
    with pytest.raises(OSError, match="No space left"):
        files.write_all(tmp_path, {"a.html": b"new", "b.html": b"new"})
    assert [p.name for p in tmp_path.iterdir()] == ["a.html"]
    assert target.read_text() == "old"


def test_folder_in_the_way(tmp_path: Path) -> None:
    (tmp_path / "r.html").mkdir()
    with pytest.raises(OSError, match=r"r\.html"):
        write_reports(two_stages(), {"html"}, tmp_path, "r")
    assert [p.name for p in tmp_path.iterdir()] == ["r.html"]


def test_place_that_cannot_be_a_folder(tmp_path: Path) -> None:
    """A file where the folder should be (a read-only folder does not stop a privileged user)."""
    blocked = tmp_path / "file"
    blocked.write_text("x")
    with pytest.raises(OSError, match="file"):
        write_reports(two_stages(), {"html"}, blocked / "sub", "r")
    assert [p.name for p in tmp_path.iterdir()] == ["file"]


@pytest.fixture
def read_only() -> Iterator[Path]:
    """A folder that may not be written, even by a test run of a privileged user."""
    folder = Path(tempfile.mkdtemp(dir="/tmp"))
    folder.chmod(0o555)
    was = os.geteuid()
    if was == 0:
        os.seteuid(65534)
    try:
        yield folder
    finally:
        os.seteuid(was)
        folder.chmod(0o755)
        shutil.rmtree(folder)


def test_read_only_folder(read_only: Path) -> None:
    with pytest.raises(PermissionError, match="Permission denied"):
        files.write_all(read_only, {"r.html": b"text"})
    assert list(read_only.iterdir()) == []


@pytest.mark.parametrize(
    ("formats", "stem"),
    [({"html", "docx"}, "r"), ({"html"}, "a/b"), ({"html"}, ".."), ({"html"}, ""), ({"md"}, "a\\b")],
)
def test_wrong_calls(tmp_path: Path, formats: set[str], stem: str) -> None:
    with pytest.raises(UsageError):
        write_reports(two_stages(), formats, tmp_path, stem)
    assert list(tmp_path.iterdir()) == []


def test_package_import_is_light() -> None:
    import subprocess
    import sys

    code = (
        "import sys, pathcalc.report; "
        "heavy = {'jinja2', 'latex2mathml', 'scipy'} & set(sys.modules); "
        "sys.exit(str(heavy) if heavy else 0)"
    )
    done: Any = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
