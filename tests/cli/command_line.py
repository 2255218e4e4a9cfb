"""Cases for the command line, and the surroundings its processes run in."""

from __future__ import annotations

import os
import subprocess
from collections.abc import Callable
from pathlib import Path
from typing import TypeAlias

ROOT = Path(__file__).parents[2]
Run: TypeAlias = Callable[..., subprocess.CompletedProcess[str]]

GOOD = """\
pathcalc: 1
title: Nitrogen, warmed and let down
fluid: {substance: nitrogen, equation: peng-robinson}
boundary: flow
amount: 0.2 kg/s
start: {T: 290 K, p: 40 bar}
legs:
  - name: heater
    path: workless
    to: {T: 320 K}
  - name: valve
    path: throttling
    to: {p: 5 bar}
limits:
  - {quantity: valve.T, min: 300 K, max: 330 K}
  - {quantity: totals.heat, max: 50 kW}
"""
MISSED = GOOD.replace("max: 330 K", "max: 305 K")
INVALID = GOOD.replace("290 K", "290 C")
UNSOLVED = GOOD.replace("{T: 320 K}", "{T: 20 K}")
QUICK = GOOD.replace("peng-robinson", "ideal-gas")


def environment(**more: str) -> dict[str, str]:
    """Surroundings of a process without what would change its output."""
    kept = {k: v for k, v in os.environ.items() if k not in ("NO_COLOR", "COLUMNS", "PYTHONHASHSEED", "TERM")}
    return {**kept, **more}
