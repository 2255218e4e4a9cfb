"""Loading a whole case: what comes out, where it stands, what is digested."""

from __future__ import annotations

import hashlib
import pickle
import subprocess
import sys
from pathlib import Path

import pytest

from pathcalc.case import load, loads
from pathcalc.case.nodes import Mark
from pathcalc.errors import InvalidCaseError, UsageError
from pathcalc.quantities import Quantity, Relative

ACCEPTED = sorted((Path(__file__).parent / "accepted").glob("*.yaml"))
WHOLE = Path(__file__).parent / "accepted" / "whole.yaml"

SMALL = """\
pathcalc: 1
title: Small
fluid: {substance: nitrogen, equation: soave}
boundary: flow
start: {T: 300 K, p: 1 bar}
legs:
  - {name: first, path: adiabatic, to: {p: 2 bar}}
"""


def findings(text: str) -> list[str]:
    with pytest.raises(InvalidCaseError) as caught:
        loads(text)
    return [str(f) for f in caught.value.findings]


@pytest.mark.parametrize("file", ACCEPTED, ids=lambda f: f.stem)
def test_accepted(file: Path) -> None:
    case = load(file)
    assert case.text == file.read_text(encoding="utf-8")
    assert len(case.legs) >= 1
    assert {"T", "p", "energy", "mass", "time", "volume", "amount"} == set(case.units)


def test_whole_case() -> None:
    case = load(WHOLE, root=WHOLE.parent)
    assert (case.id, case.title) == ("whole", "Nitrogen purge booster, two stages with an intercooler")
    assert case.record.date == "2026-03-02"
    assert case.record.purpose == ("Discharge temperatures, cooler duty and shaft power for the booster data sheet.")
    assert (case.fluid.substance, case.fluid.equation) == ("nitrogen", "peng-robinson")
    assert case.surroundings.p.value == 101300.0
    assert (case.surroundings.T_given, case.surroundings.p_given) == (True, True)
    assert case.amount is not None
    assert (case.amount.value, case.amount.dimension) == (0.35, "mass-flow")
    start = case.start["p"]
    assert isinstance(start, Quantity)
    assert (start.value, start.gauge) == (221300.0, True)
    first, cooler, second = case.legs
    assert [leg.name for leg in case.legs] == ["first stage", "intercooler", "second stage"]
    efficiency = first.efficiency  # type: ignore[attr-defined]
    assert (efficiency.value, efficiency.u, efficiency.source) == (0.76, 0.02, "vendor")
    assert cooler.pressure_drop.value == 15000.0  # type: ignore[attr-defined]
    ratio = second.to.given()["p"]  # type: ignore[attr-defined]
    assert isinstance(ratio, Relative)
    assert (ratio.kind, ratio.amount and ratio.amount.value) == ("ratio", 3.1)
    assert [limit.quantity for limit in case.limits] == ["first stage.T", "totals.work"]
    assert case.units["T"] == "degC"
    assert case.report.diagrams == ["T-s", "p-h", "p-v"]
    assert case.report.compare_with == ["ideal-gas", "soave"]


def test_places() -> None:
    case = loads(SMALL)
    assert case.positions["legs", 0, "to", "p"] == Mark("-", 7, 44)
    assert case.legs[0].origin == (7, 5)
    assert case.legs[0].origin_file == "-"
    p = case.legs[0].to.given()["p"]  # type: ignore[attr-defined]
    assert (p.line, p.column) == (7, 44)


def test_a_case_goes_to_another_process_and_back() -> None:
    case = load(WHOLE)
    back = pickle.loads(pickle.dumps(case))
    assert back == case
    assert back.legs[0].origin == case.legs[0].origin
    assert {type(leg.name) for leg in case.legs} == {str}


def test_an_unreadable_record_is_told_once() -> None:
    text = SMALL.replace("to: {p: 2 bar}", "to: {p: 2 bar}, source: sheet")
    assert findings(text + "record: {sources: [sheet]}\n") == [
        "-:8:19: error: `sources` holds keys and values, such as {key: value} (wrong-type)"
    ]


def test_defaults() -> None:
    case = loads(SMALL)
    assert (case.surroundings.T.value, case.surroundings.p.value) == (298.15, 101325.0)
    assert (case.surroundings.T_given, case.surroundings.p_given) == (False, False)
    assert case.amount is None
    assert case.cycle is False
    assert case.fluid.datum == "ideal-gas-298"
    assert case.fluid.heat_capacity is None


def test_digest_is_that_of_the_file_where_nothing_is_included() -> None:
    assert load(WHOLE).sha256 == hashlib.sha256(WHOLE.read_bytes()).hexdigest()


def test_texts_mean_what_they_say() -> None:
    """YAML 1.2, chapter 10: `no`, `on`, `010`, `1:30` are no truth values, octals or minutes."""
    text = SMALL + "record: {number: 010, revision: no, purpose: 1:30, author: on, date: 2026-03-02}\n"
    record = loads(text).record
    assert (record.number, record.revision, record.purpose, record.author) == ("010", "no", "1:30", "on")
    assert record.date == "2026-03-02"


@pytest.mark.parametrize(("written", "value"), [("true", True), ("False", False), ("TRUE", True)])
def test_cycle(written: str, value: bool) -> None:
    assert loads(SMALL + f"cycle: {written}\n").cycle is value


def test_quoted_true_is_a_text() -> None:
    assert findings(SMALL + "cycle: 'true'\n") == [
        "-:8:8: error: 'true' is no truth value; write true or false (bad-boolean)"
    ]


def test_user_keys_are_kept_and_not_read() -> None:
    text = SMALL.replace("to: {p: 2 bar}", "x-tag: K-101, to: {p: {value: 2 bar, x-by: me}, x-ok: [1, ~]}")
    case = loads(text + "x-own: {a: {b: c}}\n")
    assert dict(case.user) == {
        ("x-own",): {"a": {"b": "c"}},
        ("legs", 0, "x-tag"): "K-101",
        ("legs", 0, "to", "p", "x-by"): "me",
        ("legs", 0, "to", "x-ok"): ["1", None],
    }


def test_presets_of_units() -> None:
    assert loads(SMALL + "units: us\n").units["T"] == "degF"
    assert loads(SMALL + "units: si\n").units["p"] == "Pa"


@pytest.mark.parametrize("amount", ["20 kg/h", "3 kmol/h", "100 Nm3/h", "100 Sm3/h", "2 scf/min"])
def test_amounts_of_flow(amount: str) -> None:
    got = loads(SMALL + f"amount: {amount}\n").amount
    assert got is not None
    assert got.unit == amount.split()[1]
    assert got.dimension in ("mass-flow", "mole-flow")


CLOSED = [("2 kg", "mass"), ("3 mol", "mole"), ("9 Nm3", "mole"), ("2 m3", "volume")]


@pytest.mark.parametrize(("amount", "dimension"), CLOSED)
def test_amounts_of_a_closed_mass(amount: str, dimension: str) -> None:
    got = loads(SMALL.replace("flow", "closed") + f"amount: {amount}\n").amount
    assert got is not None
    assert got.dimension == dimension


def test_aliases_are_followed() -> None:
    case = loads(SMALL.replace("{p: 2 bar}", "&there {p: 2 bar}") + "  - {name: b, path: throttling, to: *there}\n")
    assert case.legs[1].to.given()["p"].value == 2e5  # type: ignore[attr-defined]


def test_findings_come_in_the_order_of_the_file() -> None:
    text = SMALL.replace("300 K", "300 k").replace("2 bar", "2 Bar") + "zoo: 1\n"
    assert [line.split(":")[1] for line in findings(text)] == ["5", "7", "8"]


def test_a_long_text_does_not_flood() -> None:
    (line,) = findings(SMALL.replace("300 K", "1 " + "x" * 100_000))
    assert len(line) < 500


def test_escapes_hide_no_control_characters() -> None:
    assert findings(SMALL.replace("Small", '"a\\0b"')) == [
        "-:2:8: error: control character U+0000 in a text; remove its escape (control-character)"
    ]


HOSTILE = {
    "brackets": "[" * 200_000,
    "braces": "{a: " * 100_000,
    "dashes": "- " * 100_000,
    "question marks": "? " * 50_000,
    "anchors": "a: &a " * 1000,
    "quotes": "'" * 99_999,
    "anchors alone": "&a " * 9999,
    "tag": "!!binary x",
    "directive": "%YAML 9.9\n---\na: 1",
    "surrogate": "\ud800",
    "nul": "a: b\x00",
    "next line": "\x85",
    "block": "--- >\n",
    "tabs": "key: |\n" + "\t" * 99,
    "alias": "*a",
    "long": "x" * 3_000_000,
    "one key": "a: 1\n" * 100_000,
    "many keys": "\n".join(f"k{i}: 1" for i in range(30_000)),
    "list as key": "pathcalc: 1\n? [a]\n: b",
    "many bad legs": SMALL + "  - {name: a, path: b}\n" * 2000,
}


@pytest.mark.parametrize("text", HOSTILE.values(), ids=HOSTILE)
def test_hostile_texts_are_findings(text: str) -> None:
    lines = findings(text)
    assert lines
    assert all(line.startswith("-:") for line in lines)


def test_what_is_not_there() -> None:
    with pytest.raises(UsageError, match="cannot be read"):
        load("there-is-no-such-file.yaml")
    with pytest.raises(UsageError, match="is a folder"):
        load(WHOLE.parent)
    with pytest.raises(UsageError, match="not under the root"):
        load(WHOLE, root=WHOLE.parent.parent / "rejected")


def test_only_light_modules_are_imported() -> None:
    code = (
        "import sys, pathcalc.case as c\n"
        f"c.load({str(WHOLE)!r})\n"
        "print(*sorted({'numpy', 'scipy', 'jinja2', 'rich'} & sys.modules.keys()))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == ""
