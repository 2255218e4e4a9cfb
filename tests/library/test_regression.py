"""One case against its stored result: what is told, what can have done it, and what the tolerances allow."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from library_cases import GAS, MISSED, REAL, library

from pathcalc.library.job import Job, work
from pathcalc.library.outcome import Outcome
from pathcalc.library.regression import NOTHING_KNOWN
from pathcalc.library.results_file import results_path
from pathcalc.library.settings import NAME

Held = Callable[..., Outcome]


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(library(tmp_path, gas=GAS, real=REAL, missed=MISSED))
    for name in ("gas", "real", "missed"):
        store(name)
    return tmp_path


def store(name: str) -> None:
    text = work(Job(f"{name}.yaml", reason="first")).text
    assert text is not None
    results_path(Path(f"{name}.yaml")).write_text(text)


def held(name: str, old: str = "", new: str = "", settings: str | None = None) -> Outcome:
    """The outcome of a case after a change of its text."""
    file = Path(f"{name}.yaml")
    text = file.read_text()
    assert old in text
    file.write_text(text.replace(old, new) if old else text)
    return work(Job(file.name, settings=settings))


def edit(name: str, change: Callable[[Any], Any]) -> None:
    """Change a stored result."""
    place = results_path(Path(f"{name}.yaml"))
    found = json.loads(place.read_text())
    change(found)
    place.write_text(json.dumps(found))


def test_as_stored(folder: Path) -> None:
    found = held("real")
    assert (found.status, found.findings, found.misses, found.changes) == ("passed", (), (), ())


def test_a_miss_tells_quantity_stored_now_size_and_cause(folder: Path) -> None:
    found = held("gas", "320 K", "325 K")
    assert (found.status, found.code) == ("differs", 1)
    miss = next(m for m in found.misses if m.address == "heater.T")
    assert (miss.stored, miss.now, miss.unit) == (320.0, 325.0, "K")
    assert miss.allowed == pytest.approx(1e-9 * 320.0)
    assert miss.tolerances == pytest.approx(5.0 / (1e-9 * 320.0))
    assert miss.causes == ("heater.to.T 320 K -> 325 K",)
    finding = next(f for f in found.findings if "heater.T:" in f.message)
    assert (finding.file, finding.line) == ("gas.yaml", 9)
    text = "heater.T: stored 320 K, now 325 K, 1.6e7 tolerances of 3.2e-07 K; changed: heater.to.T 320 K -> 325 K"
    assert finding.message == text


def test_what_lies_before_a_change_is_untouched_by_it(folder: Path) -> None:
    """A change of the last leg is no cause for the first: there none is known."""
    edit("real", lambda f: f["states"][1].update(T=320.5))
    found = held("real", "{p: 5 bar}", "{p: 6 bar}")
    by = {m.address: m.causes for m in found.misses}
    assert by["heater.T"] == (NOTHING_KNOWN,)
    assert by["valve.p"] == ("valve.to.p 5 bar (500000.0 Pa) -> 6 bar (600000.0 Pa)",)


def test_a_change_of_an_included_file_is_found_out(folder: Path) -> None:
    site = folder / "shared" / "site.yaml"
    site.write_text(site.read_text().replace("12 degC", "20 degC"))
    found = held("gas")
    assert found.status == "differs"
    assert {m.causes for m in found.misses} == {("surroundings.T 12 degC (285.15 K) -> 20 degC (293.15 K)",)}
    assert "start.exergy" in {m.address for m in found.misses}


def test_a_change_of_software_is_named(folder: Path) -> None:
    def other(found: Any) -> None:
        found["software"]["numpy"] = "1.0.0"
        found["states"][0]["h"] += 1.0

    edit("gas", other)
    found = held("gas")
    (miss,) = found.misses
    assert miss.causes[0].startswith("numpy 1.0.0 -> ")


def test_a_changed_card_is_named(folder: Path) -> None:
    def other(found: Any) -> None:
        found["accepted"]["cards"]["built-in:nitrogen.yaml"] = "0" * 64
        found["states"][0]["cp"] *= 1.001

    edit("real", other)
    (miss,) = held("real").misses
    assert miss.causes == ("built-in card nitrogen.yaml has changed",)


def test_a_limit_stored_as_missed_is_no_news(folder: Path) -> None:
    found = held("missed")
    assert (found.status, found.code, found.stored_limits_missed) == ("passed", 0, ("valve.T",))
    (finding,) = found.findings
    assert finding.severity == "warning"
    assert finding.message == "limit missed: valve.T = 320 K, not at most 305 K, as accepted"


def test_a_limit_that_is_missed_now_is(folder: Path) -> None:
    found = held("gas", "max: 330 K", "max: 319 K")
    assert (found.status, found.code) == ("limit missed", 1)
    (finding,) = found.findings
    assert (finding.code, finding.severity, finding.line) == ("limit-missed", "error", 16)


def test_a_leg_more_is_one_miss_not_a_flood(folder: Path) -> None:
    found = held("gas", "limits:", "  - {name: cooler, path: workless, to: {T: 300 K}}\nlimits:")
    absent = [m.address for m in found.misses if m.stored == "absent"]
    assert absent == ["cooler"]


def test_another_phase_or_fluid_is_a_miss(folder: Path) -> None:
    edit("real", lambda f: f["states"][0].update(phase="liquid"))
    (miss,) = held("real").misses
    assert (miss.address, miss.stored, miss.now, miss.tolerances) == ("start.phase", "liquid", "supercritical", None)
    assert {m.address for m in held("gas", "substance: air", "substance: argon").misses} >= {"fluid.substance"}


def test_a_value_that_is_lost_is_a_miss(folder: Path) -> None:
    edit("real", lambda f: f["states"][0].update(x=0.5))
    (miss,) = held("real").misses
    assert (miss.address, miss.stored, miss.now) == ("start.x", 0.5, None)


def test_a_warning_that_comes_is_a_miss(folder: Path) -> None:
    edit("real", lambda f: f["warnings"].append({"code": "near-critical", "at": "heater", "text": "x"}))
    (miss,) = held("real").misses
    assert (miss.address, miss.stored, miss.now) == ("warning near-critical at heater", "present", "absent")


def test_a_check_that_is_no_longer_made_is_a_miss(folder: Path) -> None:
    row = {"name": "balance of spin", "at": "heater", "passed": True, "value": 0.0, "tolerance": 1.0}
    edit("real", lambda f: f["checks"].append(row))
    assert [m.address for m in held("real").misses] == ["check balance of spin at heater"]


def test_rounding_is_allowed_and_little_more(folder: Path) -> None:
    """A part in 1e10 passes, a part in 1e8 of an energy does not; a zero may be as large as rounding leaves it."""

    def scaled(factor: float) -> Callable[[Any], Any]:
        return lambda f: f["states"][0].update(h=f["states"][0]["h"] * factor)

    edit("real", scaled(1.0 + 1e-10))
    assert held("real").status == "passed"
    edit("real", lambda f: f["legs"][1].update(heat=1e-7))  # J/kg beside R T0/M of about 85 kJ/kg
    assert held("real").status == "passed"
    edit("real", lambda f: f["states"][0].update(T=f["states"][0]["T"] * (1 + 1e-8)))
    assert held("real").status == "differs"


def test_a_case_may_allow_more_with_a_reason(folder: Path) -> None:
    edit("real", lambda f: f["states"][1].update(T=320.5, cp=f["states"][1]["cp"] * 1.001))
    assert {m.address for m in held("real").misses} == {"heater.T", "heater.cp"}
    rules = (
        "record:\n  tolerances:\n"
        "    - {quantity: heater.T, absolute: 1 K, reason: thermometer}\n"
        "    - {kind: heat-capacity, relative: 1e-2, reason: old card}\n"
        "    - {quantity: nobody.T, relative: 0.1, reason: a slip}\n"
    )
    found = held("real", "boundary: flow\n", f"boundary: flow\n{rules}")
    assert found.status == "passed"
    assert [n for n in found.notes if "nobody.T" in n]


def test_an_absolute_tolerance_speaks_of_its_own_kind(folder: Path) -> None:
    """1 K for everything of the heater is nothing for its pressure."""
    edit("real", lambda f: f["states"][1].update(T=320.5, p=f["states"][1]["p"] + 1.0))
    rule = "record:\n  tolerances: [{quantity: 'heater.*', absolute: 1 K, reason: thermometer}]\n"
    assert [m.address for m in held("real", "boundary: flow\n", f"boundary: flow\n{rule}").misses] == ["heater.p"]


def test_the_library_may_allow_more_and_a_case_overrides_it(folder: Path) -> None:
    (folder / NAME).write_text(
        "library: 1\ntolerances:\n"
        "  - {kind: temperature, relative: 0.01, reason: trial}\n"
        "  - {kind: pressure, cases: 'other/*', relative: 0.5, reason: elsewhere}\n"
    )
    edit("real", lambda f: f["states"][1].update(T=320.5))
    assert held("real", settings=NAME).status == "passed"
    rule = "record:\n  tolerances: [{quantity: heater.T, relative: 1e-9, reason: measured anew}]\n"
    found = held("real", "boundary: flow\n", f"boundary: flow\n{rule}", settings=NAME)
    assert [(m.address, m.reason) for m in found.misses] == [("heater.T", "measured anew")]
    edit("gas", lambda f: f["states"][1].update(p=f["states"][1]["p"] * 1.1))
    assert [m.address for m in held("gas", settings=NAME).misses] == ["heater.p"]


def test_no_stored_result_and_a_damaged_one(folder: Path) -> None:
    results_path(Path("gas.yaml")).unlink()
    found = held("gas")
    assert (found.status, found.code) == ("no stored result", 1)
    results_path(Path("gas.yaml")).write_text('{"pathcalc": 1,')
    found = held("gas")
    assert (found.status, found.code) == ("stored result damaged", 1)
    assert found.findings[0].file == "gas.results.json"
    assert "is not JSON" in found.findings[0].message


def test_results_that_were_never_accepted_serve_and_say_so(folder: Path) -> None:
    edit("gas", lambda f: f.pop("accepted"))
    found = held("gas")
    assert found.status == "passed"
    assert any("accept it" in note for note in found.notes)


def test_an_integral_may_be_off_by_the_error_it_states(folder: Path) -> None:
    def other(found: Any) -> None:
        leg = found["legs"][0]
        leg["maxwell"]["error"] = 1e-7
        leg["heat"] *= 1.0 + 5e-8

    edit("real", other)
    assert held("real").status == "passed"


class TestAccepting:
    def test_a_failed_check_is_refused(self, folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
        from pathcalc.path.solution import Solution

        original = Solution.to_dict

        def failing(self: Solution) -> dict[str, Any]:
            found = original(self)
            found["checks"][0].update(passed=False, value=1.0)
            return found

        monkeypatch.setattr(Solution, "to_dict", failing)
        found = work(Job("gas.yaml", reason="never mind"))
        assert (found.status, found.text, found.code) == ("refused", None, 1)
        assert found.findings[0].code == "check-failed"

    def test_what_is_stored_already_is_left_alone(self, folder: Path) -> None:
        found = work(Job("real.yaml", reason="again"))
        assert (found.status, found.text) == ("passed", None)
        assert "is stored already as it is now" in found.notes

    def test_a_comment_in_the_case_is_reason_enough_to_renew(self, folder: Path) -> None:
        """The digest of the file is another one, so that --changed would solve it for ever."""
        Path("real.yaml").write_text(REAL + "# reviewed\n")
        found = work(Job("real.yaml", reason="reviewed"))
        assert found.status == "accepted"
        assert found.text is not None
        assert json.loads(found.text)["accepted"]["reason"] == "reviewed"
