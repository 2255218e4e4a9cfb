"""What goes to standard output: JSON by contract, the summary, and the same bytes every time."""

from __future__ import annotations

import json
import math
import os
import re
import signal
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest
from command_line import GOOD, ROOT, Run, environment

# order and names: the contract of the results object
TOP = [
    "pathcalc", "case", "software", "fluid", "boundary", "amount", "surroundings", "states", "legs", "totals",
    "cycle", "checks", "limits", "comparison", "warnings",
]  # fmt: skip
STATE = [
    "name", "T", "p", "v", "rho", "u", "h", "s", "a", "g", "cv", "cp", "sound_speed", "Z", "x", "phase",
    "expansivity", "compressibility", "joule_thomson", "fugacity_coefficient", "exergy",
]  # fmt: skip
LEG = [
    "name", "path", "from", "to", "delta", "heat", "work", "entropy_generated", "exergy_destroyed", "amount",
    "total", "maxwell", "pieces",
]  # fmt: skip
EXCHANGES = ["heat", "work", "entropy_generated", "exergy_destroyed"]
DELTA = ["T", "p", "v", "u", "h", "s", "a", "g"]
INNER = {
    "case": ["id", "title", "sha256"],
    "software": ["pathcalc", "numpy", "scipy"],
    "fluid": ["substance", "equation", "molar_mass", "datum", "sources"],
    "amount": ["value", "unit"],
    "surroundings": ["T", "p"],
    "totals": [*EXCHANGES, "delta"],
}


def _refuse(constant: str) -> Any:
    raise AssertionError(f"{constant} is no JSON")


def test_json_has_the_keys_of_the_contract_in_order(run: Run, cases: Path) -> None:
    done = run("solve", "--json", "good.yaml")
    result = json.loads(done.stdout, parse_constant=_refuse)
    assert list(result) == TOP
    for key, names in INNER.items():
        assert list(result[key]) == names
    assert [state["name"] for state in result["states"]] == ["start", "heater", "valve"]
    for state in result["states"]:
        assert list(state) == STATE
    for leg in result["legs"]:
        assert list(leg) == LEG
        assert list(leg["delta"]) == DELTA
        assert list(leg["total"]) == EXCHANGES
        assert list(leg["maxwell"]) == ["ds", "du", "dh", "error", "closure"]
        assert [list(piece) for piece in leg["pieces"]] == [["phase", "ds", "dh"]] * len(leg["pieces"])
    assert [list(row) for row in result["limits"]] == [["quantity", "value", "min", "max", "passed", "margin"]] * 2
    assert {tuple(row) for row in result["checks"]} == {("name", "at", "passed", "value", "tolerance")}
    assert result["states"][0]["T"] == 290.0
    assert result["states"][2]["p"] == 5e5
    assert result["cycle"] is None


def test_json_floats_are_the_shortest_that_round_trip(run: Run, cases: Path) -> None:
    text = run("solve", "--json", "good.yaml").stdout
    numbers = re.findall(r"-?\d+\.\d+(?:e[-+]?\d+)?|-?\d+e[-+]?\d+", text.split('"states"')[1].split('"warnings"')[0])
    floats = [number for number in numbers if re.fullmatch(r"-?\d+\.\d+(e[-+]\d+)?|-?\d+e[-+]\d+", number)]
    assert len(floats) > 50
    assert all(repr(float(number)) == number for number in floats)
    assert all(math.isfinite(float(number)) for number in floats)


def test_totals_are_null_without_an_amount(run: Run) -> None:
    text = GOOD.replace("amount: 0.2 kg/s\n", "").replace("  - {quantity: totals.heat, max: 50 kW}\n", "")
    result = json.loads(run("solve", "--json", "-", stdin=text).stdout)
    assert result["amount"] == {"value": None, "unit": "kg/s"}
    assert result["totals"]["work"] is None
    assert result["legs"][0]["total"]["heat"] is None
    assert result["case"]["id"] == "stdin"


def test_a_folder_or_several_paths_give_a_list(run: Run, cases: Path) -> None:
    (cases / "one").mkdir()
    (cases / "one" / "a.yaml").write_text(GOOD)
    assert [r["case"]["id"] for r in json.loads(run("solve", "--json", "one", "--root", ".").stdout)] == ["one/a"]
    both = json.loads(run("solve", "--json", "quick.yaml", "unsolved.yaml", "quick.yaml").stdout)
    assert [r["case"]["id"] for r in both] == ["quick"]
    assert json.loads(run("solve", "--json", "invalid.yaml", "unsolved.yaml").stdout) == []


def test_standard_input_gives_what_the_file_gives(run: Run, cases: Path) -> None:
    from_file = json.loads(run("solve", "--json", "good.yaml").stdout)
    from_pipe = json.loads(run("solve", "--json", "-", stdin=GOOD).stdout)
    assert from_pipe["case"].pop("id") == "stdin"
    assert from_file["case"].pop("id") == "good"
    assert from_file == from_pipe


def test_standard_input_that_is_no_text(run: Run) -> None:
    done = run("check", "-", stdin=b"pathcalc: 1\ntitle: caf\xe9\n")
    assert done.returncode == 3
    assert "(encoding)" in done.stdout


def test_same_bytes_whatever_the_folder_and_the_hash_seed(run: Run, cases: Path, tmp_path: Path) -> None:
    outputs, pages = set(), set()
    for seed, cwd in (("1", cases), ("77", ROOT)):
        out = tmp_path / f"reports-{seed}"
        env = {"PYTHONHASHSEED": seed, "TZ": f"UTC-{seed[0]}"}
        path = os.path.relpath(cases / "good.yaml", cwd)
        done = run("solve", "--json", "--report", "html,md", "-o", out, path, cwd=cwd, env=env)
        assert done.returncode == 0, done.stderr
        outputs.add(done.stdout)
        pages.add(tuple(sorted((p.name, p.read_bytes()) for p in out.rglob("*") if p.is_file())))
    assert len(outputs) == len(pages) == 1
    assert str(cases) not in outputs.pop()


def test_summary_holds_what_a_person_looks_for(run: Run, cases: Path) -> None:
    out = run("solve", "good.yaml").stdout
    for text in ("Nitrogen, warmed and let down", "States", "Legs", "Δg", "closure", "exergy destr.", "totals"):
        assert text in out
    assert re.search(r"^heater\s+workless\s+\d", out, re.MULTILINE)
    assert re.search(r"^valve\.T .* pass$", out, re.MULTILINE)
    assert re.search(r"^Checks: all \d+ passed$", out, re.MULTILINE)
    assert "Checks\n" not in out
    assert "path independence" in run("solve", "--verbose", "good.yaml").stdout


def test_quiet_keeps_to_errors(run: Run, cases: Path) -> None:
    assert run("--quiet", "check", "good.yaml").stderr == ""
    done = run("solve", "-q", "missed.yaml", "good.yaml")
    assert done.stdout == ""
    assert done.stderr.count("\n") == 1


def _on_a_terminal(cases: Path, *args: str, **more: str) -> bytes:
    """What a command writes to a terminal."""
    pty = pytest.importorskip("pty", reason="no pseudo-terminals on this system")
    main, side = pty.openpty()
    child = subprocess.Popen(
        [sys.executable, "-m", "pathcalc", *args],
        cwd=cases, stdin=subprocess.DEVNULL, stdout=side, stderr=side, env=environment(TERM="xterm") | more,
    )  # fmt: skip
    os.close(side)
    chunks = []
    while True:
        try:
            chunk = os.read(main, 65536)
        except OSError:
            break
        if not chunk:
            break
        chunks.append(chunk)
    os.close(main)
    assert child.wait(60) == 0
    return b"".join(chunks)


@pytest.mark.parametrize(("more", "colour"), [({}, True), ({"NO_COLOR": "1"}, False), ({"TERM": "dumb"}, False)])
def test_colour_only_on_a_terminal_that_wants_it(cases: Path, more: dict[str, str], colour: bool) -> None:
    assert (b"\x1b[" in _on_a_terminal(cases, "solve", "good.yaml", **more)) is colour


def test_a_narrow_terminal_cuts_no_digit_off(run: Run, cases: Path) -> None:
    shown = _on_a_terminal(cases, "solve", "good.yaml", COLUMNS="40", NO_COLOR="1").decode()
    assert "…" not in shown
    wide = run("solve", "good.yaml").stdout
    numbers = re.findall(r"-?\d+\.\d+", wide)
    assert len(numbers) > 40
    assert set(numbers) <= set(re.findall(r"-?\d+\.\d+", shown))


def test_no_escape_codes_in_a_pipe(run: Run, cases: Path) -> None:
    done = run("solve", "missed.yaml", env={"TERM": "xterm", "FORCE_COLOR": "1"})
    assert "\x1b" not in done.stdout + done.stderr


@pytest.mark.skipif(sys.platform == "win32", reason="no such pipes on Windows")
@pytest.mark.parametrize("args", [("schema",), ("solve", "--json", "good.yaml", "quick.yaml"), ("solve", "good.yaml")])
def test_a_reader_that_goes_away_is_no_error(cases: Path, args: tuple[str, ...]) -> None:
    reading, writing = os.pipe()
    os.close(reading)
    done = subprocess.run(
        [sys.executable, "-m", "pathcalc", *args],
        cwd=cases, stdin=subprocess.DEVNULL, stdout=writing, stderr=subprocess.PIPE, env=environment(), timeout=60,
        check=False,
    )  # fmt: skip
    os.close(writing)
    assert (done.returncode, done.stderr) == (141, b"")


@pytest.mark.skipif(sys.platform == "win32", reason="signals differ on Windows")
def test_an_interrupt_ends_with_130(cases: Path) -> None:
    code = (  # a process started in the background would ignore the signal
        "import signal; signal.signal(signal.SIGINT, signal.default_int_handler)\n"
        "from pathcalc.cli import main; main(['check', '-'])\n"
    )
    with subprocess.Popen(
        [sys.executable, "-c", code],
        cwd=cases, stdin=subprocess.PIPE, stdout=subprocess.PIPE, stderr=subprocess.PIPE, env=environment(),
    ) as child:  # fmt: skip
        assert child.stderr is not None
        _wait_until_it_reads(child.pid)
        child.send_signal(signal.SIGINT)
        try:
            assert child.wait(30) == 130
        finally:
            child.kill()
        said = child.stderr.read()
    assert b"Traceback" not in said
    assert b"interrupted" in said


def _wait_until_it_reads(pid: int) -> None:
    """Until the process sleeps in a read of its standard input, or two seconds where that cannot be seen."""
    import time

    place = Path(f"/proc/{pid}/wchan")
    for _ in range(100):
        time.sleep(0.1)
        try:
            if "pipe" in place.read_text():
                return
        except OSError:
            time.sleep(1.9)
            return


def test_findings_as_json_and_annotations(run: Run, cases: Path) -> None:
    rows = json.loads(run("check", "--format", "json", "invalid.yaml", "good.yaml").stdout)
    assert [list(row) for row in rows] == [["file", "line", "column", "severity", "message", "code"]]
    assert (rows[0]["file"], rows[0]["line"], rows[0]["column"]) == ("invalid.yaml", 6, 12)
    assert run("check", "--format", "json", "good.yaml").stdout == "[]\n"
    line = run("check", "--format", "github", "invalid.yaml").stdout
    assert re.fullmatch(r"::error file=invalid\.yaml,line=6,col=12,title=[a-z-]+::.+\n", line)


def test_schema_is_the_schema_and_accepts_a_case(run: Run) -> None:
    import jsonschema
    import yaml

    schema = json.loads(run("schema").stdout)
    jsonschema.Draft7Validator.check_schema(schema)
    validator = jsonschema.Draft7Validator(schema)
    assert validator.is_valid(yaml.safe_load(GOOD))
    assert not validator.is_valid(yaml.safe_load(GOOD.replace("limits:", "limit:")))
