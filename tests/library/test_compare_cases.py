"""The comparison of two cases as Python sees it."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from library_cases import GAS, REAL, SITE, UNSOLVED

import pathcalc
from pathcalc.library.compare import (
    Comparison,
    compare_cases,
    compare_snapshots,
    snapshot_of_case,
    snapshot_of_results,
)


@pytest.fixture
def compared(tmp_path: Path) -> Any:
    (tmp_path / "shared").mkdir()
    (tmp_path / "shared" / "site.yaml").write_text(SITE)

    def call(old: str, new: str, **more: Any) -> Comparison:
        cases = [pathcalc.loads(text, name=name, root=tmp_path) for name, text in (("a", old), ("b", new))]
        return compare_cases(cases[0], cases[1], **more)

    return call


def test_a_case_does_not_differ_from_itself(compared: Any) -> None:
    same = compared(REAL, REAL, exact=True)
    assert same.same
    assert same.results == ()


def test_an_input_that_changed(compared: Any) -> None:
    """Mass flow 0.2 to 0.3 kg/s: totals grow by half, specific results stay."""
    found = compared(GAS, GAS.replace("0.2 kg/s", "0.3 kg/s"))
    (change,) = found.inputs
    assert (change.address, change.kind) == ("amount", "changed")
    assert (change.old["written"], change.new["value"], change.new["unit"]) == ("0.2 kg/s", 0.3, "kg/s")
    by = {row.address: row for row in found.results}
    assert by["totals.heat"].relative == pytest.approx(0.5)
    assert by["totals.heat"].unit == "W"
    assert "heater.heat" not in by
    assert by["heater.total.heat"].relative == pytest.approx(0.5)


def test_another_way_to_write_a_value_is_no_change_of_results(compared: Any) -> None:
    found = compared(GAS, GAS.replace("290 K", "16.85 degC"))
    assert [(c.address, c.kind) for c in found.inputs] == [("start.T", "rewritten")]
    assert found.results == ()
    assert not found.same


def test_a_limit_that_changes_side(compared: Any) -> None:
    found = compared(GAS, GAS.replace("{T: 320 K}", "{T: 335 K}"))
    assert [(row.quantity, row.old, row.new, row.unit) for row in found.limits] == [("valve.T", "met", "missed", "K")]


def test_a_limit_that_comes_and_one_that_goes(compared: Any) -> None:
    found = compared(GAS, GAS.replace("totals.heat, max: 50 kW", "heater.T, max: 330 K"))
    assert {(row.quantity, row.old, row.new) for row in found.limits} == {
        ("heater.T", None, "met"),
        ("totals.heat", "met", None),
    }


def test_two_limits_on_one_quantity_are_told_apart(compared: Any) -> None:
    more = GAS + "  - {quantity: valve.T, max: 321 K}\n"
    found = compared(more, more.replace("max: 321 K", "max: 319 K"))
    assert [(row.quantity, row.old, row.new) for row in found.limits] == [("valve.T (2)", "met", "missed")]


def test_a_leg_with_another_name_is_the_same_leg(compared: Any) -> None:
    found = compared(GAS, GAS.replace("heater", "warmer"))
    assert found.renamed == {"heater": "warmer"}
    assert found.results == ()
    assert found.inputs == ()


def test_a_leg_that_is_added(compared: Any) -> None:
    new = GAS.replace("limits:", "  - {name: cooler, path: workless, to: {T: 300 K}}\nlimits:")
    found = compared(GAS, new)
    added = {row.address for row in found.results if row.where == "new"}
    assert {"cooler.T", "cooler.heat"} <= added
    assert {c.address: c.kind for c in found.inputs}["cooler.to.T"] == "added"


def test_a_side_without_a_solution(compared: Any) -> None:
    found = compared(GAS, UNSOLVED)
    assert found.new.results is None
    assert "valve" in found.new.trouble
    assert not found.same
    assert [c.address for c in found.inputs] == ["valve.to.p"]


def test_warnings_that_come(compared: Any) -> None:
    found = compared(REAL, REAL.replace("320 K", "130 K"))  # nitrogen is critical at 126.2 K and 34 bar
    assert found.warnings_gone == ()
    assert ("near-critical", "heater") in found.warnings_new


def test_results_without_inputs(compared: Any, tmp_path: Path) -> None:
    """What `solve --json` prints has no inputs: that is said, and the results are compared."""
    case = pathcalc.loads(GAS, root=tmp_path)
    side = snapshot_of_results(pathcalc.solve(case).to_dict())
    found = compare_snapshots(side, snapshot_of_case(case))
    assert found.same
    assert found.to_dict()["inputs_known"] is False


def test_all_of_it_is_json(compared: Any) -> None:
    found = compared(GAS, GAS.replace("heater", "warmer").replace("320 K", "340 K")).to_dict()
    assert json.loads(json.dumps(found, allow_nan=False)) == found


def test_exact_tells_the_last_digit(compared: Any) -> None:
    new = GAS.replace("290 K", "290.00000000000006 K")
    assert compared(GAS, new).results == ()
    assert {row.address for row in compared(GAS, new, exact=True).results} >= {"start.T"}
