"""The example cases and their solutions, each solved once a process."""

from __future__ import annotations

from collections.abc import Callable
from functools import cache
from pathlib import Path
from typing import Any

import pytest

import pathcalc

FOLDER = Path(__file__).resolve().parents[2] / "cases"


@cache
def _solved(name: str) -> Any:
    return pathcalc.solve(pathcalc.load(FOLDER / f"{name}.yaml"))


@pytest.fixture(scope="session")
def solved() -> Callable[[str], Any]:
    """The solution of an example by its name."""
    return _solved
