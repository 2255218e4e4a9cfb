"""Every file in rejected/ is refused with exactly the lines of the .txt beside it."""

from __future__ import annotations

from pathlib import Path

import pytest

from pathcalc.case import load
from pathcalc.case.codes import CODES
from pathcalc.errors import InvalidCaseError

HERE = Path(__file__).parent / "rejected"
FILES = sorted(HERE.glob("*.yaml"))


def test_there_are_examples() -> None:
    assert len(FILES) >= 70
    assert {f.stem for f in FILES} == {f.stem for f in HERE.glob("*.txt")}


@pytest.mark.parametrize("file", FILES, ids=lambda f: f.stem)
def test_rejected(file: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(HERE)
    expected = file.with_suffix(".txt").read_text(encoding="utf-8").splitlines()
    with pytest.raises(InvalidCaseError) as caught:
        load(file.name)
    found = [str(f).removeprefix(f"{file.name}:") for f in caught.value.findings]
    assert found == expected
    assert {f.code for f in caught.value.findings} <= CODES.keys()
