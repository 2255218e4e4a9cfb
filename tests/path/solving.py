"""Cases from a few words, and the published examples, for the tests of legs and paths."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from pathlib import Path
from typing import Any

import yaml

import pathcalc

REFERENCE = Path(__file__).parents[2] / "shared" / "reference"
R = 8.314462618
"""Molar gas constant, J/(mol K): CODATA 2018, Tiesinga et al., Rev. Mod. Phys. 93 (2021) 025010."""


def case_text(fluid: str, start: str, *legs: str, boundary: str = "flow", more: str = "") -> str:
    """Text of a case; each leg is the inside of a flow mapping such as ``name: a, path: isobaric, to: {…}``."""
    lines = [
        "pathcalc: 1",
        "title: a test",
        f"fluid: {{{fluid}}}",
        f"boundary: {boundary}",
        f"start: {{{start}}}",
    ]
    lines += ["legs:", *(f"  - {{{leg}}}" for leg in legs)]
    return "\n".join(lines) + "\n" + more


def solve(
    fluid: str,
    start: str,
    *legs: str,
    boundary: str = "flow",
    more: str = "",
    root: Path | None = None,
    lanes: Mapping[str, Any] | None = None,
) -> Any:
    """Solution of a case given in a few words."""
    text = case_text(fluid, start, *legs, boundary=boundary, more=more)
    return pathcalc.solve(pathcalc.loads(text, name="a-test", root=root), lanes)


@cache
def _examples() -> dict[str, Any]:
    text = (REFERENCE / "textbook_examples.yaml").read_text(encoding="utf-8")
    return {item["id"]: item for item in yaml.safe_load(text)["examples"]}


def example(number: str) -> dict[str, Any]:
    """A published worked example: ``input``, ``answer``, ``recomputed`` (citations in the file's header)."""
    found: dict[str, Any] = _examples()[number]
    return found


def failed_checks(solution: Any) -> list[dict[str, Any]]:
    """The self-checks of a solution that did not pass."""
    return [row for row in solution.checks if not row["passed"]]


def write_card(
    folder: Path,
    *,
    M: float,
    T_c: float = 400.0,
    p_c: float = 4e6,
    omega: float = 0.1,
    cp_over_R: str = "[3.5]",
) -> str:
    """A substance card of the user's own in ``folder``; the text for ``fluid`` that names it."""
    text = f"""substance: invented gas
formula: X
hazards: []
constants:
  molar_mass: {{value: {M!r}, unit: kg/mol, source: book}}
  T_c: {{value: {T_c!r}, unit: K, source: book}}
  p_c: {{value: {p_c!r}, unit: Pa, source: book}}
  acentric: {{value: {omega!r}, unit: 1, source: book}}
ideal_gas:
  - {{name: book, form: polynomial, T_min: 50, T_max: 3000, source: book, coefficients: {cp_over_R}}}
sources:
  book: the constants that the worked example states
"""
    (folder / "gas.yaml").write_text(text, encoding="utf-8")
    return "card: gas.yaml"
