"""Which files of a folder are cases."""

from __future__ import annotations

from pathlib import Path

import pytest

from pathcalc.case import find_cases
from pathcalc.errors import UsageError


def test_cases_of_a_folder(tmp_path: Path) -> None:
    (tmp_path / "b" / "deep").mkdir(parents=True)
    (tmp_path / ".hidden").mkdir()
    for name in ("z.yaml", "b/deep/a.yaml", "a.yaml"):
        (tmp_path / name).write_text("# a remark\npathcalc: 1\n")
    (tmp_path / ".hidden" / "c.yaml").write_text("pathcalc: 1\n")
    (tmp_path / "other.yaml").write_text("name: x\npathcalc: 1\n")
    (tmp_path / "list.yaml").write_text("- pathcalc\n")
    (tmp_path / "bad.yaml").write_text("{{{\t")
    (tmp_path / "bytes.yaml").write_bytes(b"\xff\xfe\x00")
    (tmp_path / "case.yml").write_text("pathcalc: 1\n")
    (tmp_path / "b" / "loop").symlink_to(tmp_path)
    found = [p.relative_to(tmp_path).as_posix() for p in find_cases(tmp_path)]
    assert found == ["a.yaml", "b/deep/a.yaml", "z.yaml"]


def test_a_file_is_itself(tmp_path: Path) -> None:
    file = tmp_path / "any.txt"
    file.write_text("")
    assert find_cases(file) == [file]
    with pytest.raises(UsageError, match="does not exist"):
        find_cases(tmp_path / "gone")


def test_a_case_with_a_fault_is_still_a_case(tmp_path: Path) -> None:
    (tmp_path / "a.yaml").write_text("pathcalc: 1\nstart: {T: [\n")
    (tmp_path / "b.yaml").write_bytes(b"# a remark\n---\n'pathcalc': 1\ntitle: \x00\n")
    (tmp_path / "c.yaml").write_text("name: \x01\npathcalc: 1\n")
    (tmp_path / "d.yaml").write_text("pathcalc: 1\n#" + "x" * 3_000_000)
    assert [p.name for p in find_cases(tmp_path)] == ["a.yaml", "b.yaml", "d.yaml"]
