"""How a case stands, from its results."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from library_cases import GAS, MISSED, SITE

import pathcalc
from pathcalc.library.verdict import verdict_of


def results(folder: Path, text: str) -> dict[str, Any]:
    (folder / "shared").mkdir(exist_ok=True)
    (folder / "shared" / "site.yaml").write_text(SITE)
    found: dict[str, Any] = pathcalc.solve(pathcalc.loads(text, root=folder)).to_dict()
    return found


def test_all_met(tmp_path: Path) -> None:
    """Heat of 6 kW against 50 kW leaves much; 320 K against 330 K leaves 10 K, 10/330 of the bound."""
    found = verdict_of(results(tmp_path, GAS))
    assert (found.status, found.limits_met, found.limits, found.missed) == ("passed", 2, 2, ())
    assert found.checks_passed == found.checks > 0
    assert found.tightest is not None
    assert found.tightest.quantity == "valve.T"
    assert found.tightest.margin == pytest.approx(10.0)
    assert found.tightest.share == pytest.approx(10.0 / 330.0)
    assert found.tightest.unit == "K"


def test_a_missed_limit_is_the_tightest(tmp_path: Path) -> None:
    found = verdict_of(results(tmp_path, MISSED))
    assert (found.status, found.missed) == ("limit missed", ("valve.T",))
    assert found.tightest is not None
    assert found.tightest.margin == pytest.approx(-15.0)
    assert not found.tightest.passed


def test_a_failed_check_outweighs_a_limit(tmp_path: Path) -> None:
    solved = results(tmp_path, MISSED)
    solved["checks"][0]["passed"] = False
    found = verdict_of(solved)
    assert found.status == "check failed"
    assert found.failed == (f"{solved['checks'][0]['name']} at {solved['checks'][0]['at']}",)


def test_a_limit_without_a_value_ranks_first(tmp_path: Path) -> None:
    solved = results(tmp_path, GAS.replace("totals.heat, max: 50 kW", "valve.x, max: 1"))
    found = verdict_of(solved)
    assert found.tightest is not None
    assert (found.tightest.quantity, found.tightest.margin) == ("valve.x", None)


def test_no_limits(tmp_path: Path) -> None:
    solved = results(tmp_path, GAS[: GAS.index("limits:")])
    assert verdict_of(solved).tightest is None
    assert json.dumps(verdict_of(solved).to_dict())
