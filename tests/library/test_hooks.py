"""The hooks for commits are what they should be, and their commands do what they say."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import yaml
from library_cases import GAS, ROOT, Here, library

HOOKS: list[dict[str, Any]] = yaml.safe_load((ROOT / ".pre-commit-hooks.yaml").read_text(encoding="utf-8"))


def test_there_are_two() -> None:
    assert [hook["id"] for hook in HOOKS] == ["pathcalc-check", "pathcalc-regress"]
    for hook in HOOKS:
        assert {"id", "name", "entry", "language"} <= hook.keys()


def test_their_commands_pass_and_fail(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS)
    here("regress", ".", "--accept", "--reason", "x", cwd=tmp_path, code=0)
    lines = [[*hook["entry"].split()[1:], *hook["args"]] for hook in HOOKS]
    assert [here(*line, cwd=tmp_path).returncode for line in lines] == [0, 0]
    (tmp_path / "shared" / "site.yaml").write_text("surroundings: {T: 30 degC}\n")
    assert [here(*line, cwd=tmp_path).returncode for line in lines] == [0, 1]
    (tmp_path / "shared" / "site.yaml").write_text("surroundings: {T: 30 C}\n")
    assert [here(*line, cwd=tmp_path).returncode for line in lines] == [3, 3]
