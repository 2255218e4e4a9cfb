"""Stored results: one quantity a line, the same bytes, and no damaged file taken for a good one."""

from __future__ import annotations

import json
import os
from pathlib import Path
from typing import Any

import pytest
from library_cases import GAS, REAL, library

from pathcalc.library.job import Job, work
from pathcalc.library.results_file import ResultsError, canonical, parse_results, read_results


@pytest.fixture
def stored(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> str:
    monkeypatch.chdir(library(tmp_path, real=REAL))
    text = work(Job("real.yaml", reason="first")).text
    assert text is not None
    return text


def test_the_object_is_that_of_solve(stored: str, tmp_path: Path) -> None:
    """The keys and their order are those of the results format; what it came from follows."""
    import pathcalc

    found = parse_results(stored.encode())
    accepted = found.pop("accepted")
    solved = pathcalc.solve(pathcalc.load("real.yaml")).to_dict()
    assert json.dumps(found) == json.dumps(solved)
    assert list(accepted) == ["reason", "files", "cards", "inputs"]
    assert list(accepted["files"]) == ["real.yaml", "shared/site.yaml"]
    assert list(accepted["cards"]) == ["built-in:nitrogen.yaml", "built-in:reference/nitrogen.yaml"]
    assert accepted["inputs"]["start.T"] == {"written": "290 K", "value": 290.0, "unit": "K"}


def test_a_line_holds_one_quantity(stored: str) -> None:
    """No line has two numbers, but for the statements (checks, limits, inputs), which stand on one line each."""
    lines = stored.splitlines()
    for line in lines:
        body = line.strip().rstrip(",")
        if body.startswith('{"') or body.split(": ", 1)[-1].startswith('{"'):
            continue
        assert body.count('": ') <= 1, line
    assert '      "T": 290.0,' in lines
    assert sum('"quantity": "valve.T"' in line for line in lines) == 1


def test_every_digit_is_kept_and_the_bytes_are_the_same(stored: str) -> None:
    found = parse_results(stored.encode())
    assert canonical(found) == stored
    again = work(Job("real.yaml", reason="first")).text
    assert again == stored


def test_no_clock_no_host_no_absolute_path(stored: str, tmp_path: Path) -> None:
    import platform

    assert str(tmp_path) not in stored
    assert platform.node() not in stored


DAMAGED = {
    "empty": (b"", "is empty"),
    "cut": (b'{"pathcalc": 1, "ca', "is not JSON, line 1"),
    "bytes": (b"\xff\xfe", "is not UTF-8 at byte 0"),
    "list": (b"[1]", "is not a results file"),
    "other": (b'{"a": 1}', "is not a results file"),
    "newer": (b'{"pathcalc": 2}', "of version 2"),
    "lacking": (b'{"pathcalc": 1}', "lacks the key 'case'"),
    "nan": (b'{"pathcalc": NaN}', "holds NaN"),
    "double": (b'{"pathcalc": 1, "pathcalc": 1}', "twice"),
    "deep": (b"[" * 100_000, "nested too deep"),
    "merge": (b'{\n<<<<<<< HEAD\n"pathcalc": 1\n', "unfinished merge, line 2"),
}


@pytest.mark.parametrize("name", DAMAGED)
def test_damaged_files_say_how(name: str) -> None:
    data, text = DAMAGED[name]
    with pytest.raises(ResultsError, match=text):
        parse_results(data)


def _without(key: str) -> Any:
    return lambda found: found.pop(key)


HURT = {
    "states": lambda f: f.update(states=[]),
    "a state's number": lambda f: f["states"][0].update(T="warm"),
    "a state": lambda f: f["states"].append(3),
    "a leg": lambda f: f["legs"][0].pop("maxwell"),
    "a limit": lambda f: f["limits"][0].update(passed="yes"),
    "a check": lambda f: f["checks"].append({}),
    "an infinite number": lambda f: f["states"][0].update(T=1e999),
    "a boolean for a number": lambda f: f["amount"].update(value=True),
    "an input": lambda f: f["accepted"]["inputs"].update(x=1),
    "a digest": lambda f: f["accepted"]["files"].update(x=1),
    "totals": _without("totals"),
}


@pytest.mark.parametrize("name", HURT)
def test_a_file_of_another_shape_is_damaged(name: str, stored: str) -> None:
    found = json.loads(stored)
    HURT[name](found)
    with pytest.raises(ResultsError):
        parse_results(json.dumps(found).encode())


def test_what_is_no_regular_file(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe.results.json")
    with pytest.raises(ResultsError, match="not a regular file"):
        read_results(tmp_path / "pipe.results.json")
    (tmp_path / "endless").symlink_to("/dev/zero")
    with pytest.raises(ResultsError, match="not a regular file"):
        read_results(tmp_path / "endless")
    with pytest.raises(ResultsError, match="cannot be read"):
        read_results(tmp_path)


def test_a_title_of_any_characters(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(library(tmp_path, odd=GAS.replace("Air warmed", 'Lüftung "x" 🜁 </script>')))
    text = work(Job("odd.yaml", reason="é\u2028")).text
    assert text is not None
    assert parse_results(text.encode())["case"]["title"].startswith('Lüftung "x" 🜁')
