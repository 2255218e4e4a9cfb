"""Every example case: well formed, solved, checked, and within its limits unless it says that it is not."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

import pathcalc

FOLDER = Path(__file__).resolve().parents[2] / "cases"
NAMES = sorted(p.stem for p in FOLDER.glob("*.yaml"))
FAILS_ON_PURPOSE = {"letdown-unheated": {"letdown valve.T"}}

# what a warning of an example is explained by: words that its assumptions must hold
EXPLAINED = {
    "dense-cubic": "densit",
    "two-phase": "equilibrium",
    "comparison-without-shift": "shift",
    "near-triple-point": "triple point",
}

Solved = Callable[[str], Any]


def test_library_covers_the_tasks() -> None:
    assert len(NAMES) >= 31
    kinds, boundaries, equations = set(), set(), set()
    for name in NAMES:
        case = pathcalc.load(FOLDER / f"{name}.yaml")
        kinds |= {leg.path for leg in case.legs}
        boundaries.add(case.boundary)
        equations.add(case.fluid.equation)
    assert boundaries == {"flow", "closed"}
    assert kinds == {
        "isothermal", "isobaric", "isochoric", "adiabatic", "throttling", "free-expansion", "polytropic",
        "workless", "saturation", "separation", "mixing",
    }  # fmt: skip
    assert equations == {
        "ideal-gas", "van-der-waals", "redlich-kwong", "soave", "peng-robinson", "virial", "reference",
    }  # fmt: skip


def test_record_numbers_are_unique() -> None:
    numbers = [pathcalc.load(FOLDER / f"{name}.yaml").record.number for name in NAMES]
    assert len(set(numbers)) == len(numbers)


@pytest.mark.parametrize("name", NAMES)
class TestExample:
    def test_form(self, name: str) -> None:
        """First key, record, site basis, and no trace of anything but the case itself."""
        text = (FOLDER / f"{name}.yaml").read_text(encoding="utf-8")
        assert text.startswith("pathcalc: 1\n")
        assert text.endswith("\n")
        assert max(map(len, text.splitlines())) <= 120
        case = pathcalc.load(FOLDER / f"{name}.yaml")
        assert case.id == f"cases/{name}"
        assert case.title
        record = case.record
        assert record.number
        assert record.revision
        assert record.date
        assert record.purpose
        assert record.assumptions
        assert record.project == "Vellisey gas works (an invented plant)"
        assert record.sources
        assert "site" in record.sources
        assert case.amount is not None
        assert case.report.diagrams
        assert case.limits

    def test_sources_are_used_and_inputs_have_one(self, name: str) -> None:
        """Every source of the case is named somewhere; start, amount and limits each name one."""
        case = pathcalc.load(FOLDER / f"{name}.yaml")
        text = case.text + "".join(t for _, t in case.includes)
        for source in case.record.sources or {}:
            assert f"source: {source}" in text, source
        assert case.amount is not None
        assert case.amount.source
        assert all(q.source for q in case.start.values() if not isinstance(q, str))
        assert all(limit.source for limit in case.limits)

    def test_solves_with_all_checks_passed(self, name: str, solved: Solved) -> None:
        solution = solved(name)
        failed = [c for c in solution.checks if not c["passed"]]
        assert failed == []
        assert solution.checks

    def test_two_routes_agree(self, name: str, solved: Solved) -> None:
        """Closure and error estimate of every leg."""
        for leg in solved(name).legs.values():
            assert leg.maxwell.closure < 1e-9, leg.name
            assert leg.maxwell.error < 1e-8, leg.name

    def test_limits(self, name: str, solved: Solved) -> None:
        solution = solved(name)
        missed = {row["quantity"] for row in solution.limits if not row["passed"]}
        assert missed == FAILS_ON_PURPOSE.get(name, set())
        assert solution.passed is (name not in FAILS_ON_PURPOSE)

    def test_failing_case_says_so(self, name: str) -> None:
        title = pathcalc.load(FOLDER / f"{name}.yaml").title
        assert ("fails its limit" in title) is (name in FAILS_ON_PURPOSE)

    def test_warnings_are_explained(self, name: str, solved: Solved) -> None:
        solution = solved(name)
        assumptions = " ".join(solution.case.record.assumptions)
        for warning in solution.warnings:
            assert warning["code"] in EXPLAINED, warning
            assert EXPLAINED[warning["code"]] in assumptions, warning

    def test_cycle_sums_to_nothing(self, name: str, solved: Solved) -> None:
        """Round a cycle the changes of every state function add up to zero, and heat and work cancel."""
        solution = solved(name)
        if not solution.case.cycle:
            assert solution.cycle is None
            return
        for key in ("T", "p", "v", "u", "h", "s"):
            changes = [leg.delta[key] for leg in solution.legs.values()]
            assert abs(sum(changes)) <= 1e-11 * sum(map(abs, changes)), key
        heat = sum(leg.heat for leg in solution.legs.values())
        work = sum(leg.work for leg in solution.legs.values())
        scale = sum(abs(leg.heat) + abs(leg.work) for leg in solution.legs.values())
        assert abs(heat + work) <= 1e-11 * scale

    def test_comparison_has_values(self, name: str, solved: Solved) -> None:
        """Every equation that an example compares with has a solution for every quantity compared."""
        solution = solved(name)
        assert [row["equation"] for row in solution.comparison] == solution.case.report.compare_with
        for row in solution.comparison:
            assert row["quantities"]
            assert None not in row["quantities"].values()
