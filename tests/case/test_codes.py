"""Every code that the rooms emit is in the table with a sentence, and every code of the table is emitted."""

from __future__ import annotations

import ast
import re
from pathlib import Path

import pathcalc.case
import pathcalc.quantities
from pathcalc.case.codes import CODES
from pathcalc.case.translate import _TRANSLATED

ROOMS = [Path(p) for room in (pathcalc.case, pathcalc.quantities) for p in room.__path__]
LEGS = Path(pathcalc.case.__path__[0]).parent / "legs"
# which argument of each call is the code
TRANSLATED = {code for code, _ in _TRANSLATED.values()}
CALLS = {"add": 2, "fail": 2, "_refuse": 2, "Finding": 4, "Problem": 0}


def codes_in(file: Path, calls: dict[str, int] = CALLS) -> set[str]:
    found = set()
    for node in ast.walk(ast.parse(file.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Call):
            name = getattr(node.func, "attr", getattr(node.func, "id", ""))
            code = node.args[calls[name]] if name in calls and len(node.args) > calls[name] else None
            if isinstance(code, ast.Constant):
                found.add(code.value)
    return found


def test_every_emitted_code_is_in_the_table() -> None:
    emitted = TRANSLATED.union(*(codes_in(f) for room in ROOMS for f in room.glob("*.py")))
    emitted = emitted.union(*(codes_in(f, {"Problem": 0}) for f in LEGS.glob("*.py")))
    assert emitted == CODES.keys()


def test_each_code_has_one_sentence() -> None:
    for sentence in CODES.values():
        assert re.fullmatch(r"[A-Z][^.]+\.", sentence)
