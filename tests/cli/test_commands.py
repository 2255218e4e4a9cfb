"""explain, substances, new, completion, and how light the start is."""

from __future__ import annotations

import importlib
import json
import shutil
import subprocess
import sys
from pathlib import Path

import click
import pytest
from command_line import Run, environment

from pathcalc.cli.group import COMMANDS, cli
from pathcalc.cli.new import FOLDER, TEMPLATES

HEAVY = {"numpy", "scipy", "pydantic", "pydantic_core", "rich", "jinja2", "yaml"}


@pytest.mark.parametrize(
    "args", [["--help"], ["--version"], ["solve", "--help"], ["new", "--help"], ["completion", "zsh"]]
)
def test_help_imports_nothing_heavy(args: list[str]) -> None:
    code = (
        "import sys\nfrom pathcalc.cli.run import run\n"
        f"code = run({args!r})\nprint(code, *sys.modules, file=sys.stderr)\n"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True, timeout=60)
    code_, *modules = done.stderr.split()
    assert code_ == "0"
    assert not HEAVY & set(modules)


def test_commands_are_those_of_their_modules() -> None:
    for name, text in COMMANDS.items():
        command = importlib.import_module(f"pathcalc.cli.{name.replace('-', '_')}").command
        assert isinstance(command, click.Command)
        assert command.name == name
        assert command.get_short_help_str(80) == text
    assert cli.list_commands(click.Context(cli)) == list(COMMANDS)


def test_console_script_and_module_say_the_same(run: Run) -> None:
    script = shutil.which("pathcalc", path=str(Path(sys.executable).parent))
    assert script, "install the package into this environment"
    done = subprocess.run([script, "--version"], capture_output=True, text=True, check=True, timeout=60)
    assert done.stdout == run("--version").stdout


def test_explain_shows_formula_numbers_result(run: Run, cases: Path) -> None:
    done = run("explain", "good.yaml", "heater.heat")
    assert done.returncode == 0
    first, _, rest = done.stdout.partition("\n")
    assert first.startswith("heater.heat = ")
    assert "(SI: " in first
    assert "1. " in rest
    assert "= " in rest
    assert "\\" not in done.stdout
    assert "$" not in done.stdout


@pytest.mark.parametrize(
    "address", ["start.cp", "start.x", "start.phase", "valve.delta.T", "heater.entropy_generated", "totals.heat"]
)
def test_explain_has_an_answer_for_every_result(run: Run, cases: Path, address: str) -> None:
    done = run("explain", "quick.yaml", address)
    assert done.returncode == 0, done.stderr
    assert done.stdout.startswith(f"{address} = ")
    assert len(done.stdout.splitlines()) >= 3


def test_explain_of_a_case_without_solution(run: Run, cases: Path) -> None:
    done = run("explain", "unsolved.yaml", "valve.T")
    assert done.returncode == 4
    assert done.stderr.startswith("unsolved.yaml:8:5: error: heater: ")


def test_substances_list_and_card(run: Run) -> None:
    from pathcalc.substances import names

    listed = run("substances").stdout
    assert all(f"\n{name} " in listed for name in names())
    card = run("substances", "N2").stdout
    for text in ("nitrogen, N2, CAS 7727-37-9", "asphyxiant", "126.192 K", "[span2000]", "J. Phys. Chem. Ref. Data 29"):
        assert text in card
    data = json.loads(run("substances", "R134a", "--json").stdout)
    assert data["name"] == "R-134a"
    assert data["constants"]["T_c"]["unit"] == "K"
    assert "peng-robinson" in data["equations"]


def test_substances_shows_a_card_of_the_user(run: Run, tmp_path: Path) -> None:
    (tmp_path / "gas.yaml").write_text(
        "substance: trial gas\nformula: X\nhazards: [toxic]\n"
        "constants: {molar_mass: {value: 0.03, unit: kg/mol, source: lab}}\n"
        "ideal_gas: [{name: lab, form: constant, T_min: 250, T_max: 400, source: lab, cp_over_R: 3.5}]\n"
        "sources: {lab: a notebook}\n"
    )
    done = run("substances", "gas.yaml")
    assert done.returncode == 0, done.stderr
    assert "trial gas, X" in done.stdout
    assert "peng-robinson: cannot be used; " in done.stdout
    assert "\n  ideal-gas\n" in done.stdout


def test_templates_are_the_files() -> None:
    assert {path.stem for path in FOLDER.glob("*.yaml")} == set(TEMPLATES)


@pytest.mark.parametrize("name", sorted(TEMPLATES))
def test_every_template_checks_and_solves(run: Run, tmp_path: Path, name: str) -> None:
    made = run("new", "mine", "--like", name)
    assert made.returncode == 0
    assert (tmp_path / "mine.yaml").read_text().count("#") >= 3
    assert run("check", "mine.yaml").returncode == 0
    done = run("solve", "mine.yaml", "--report", "html,md")
    assert done.returncode == 0, done.stderr
    assert (tmp_path / "reports" / "mine.html").is_file()


def test_new_never_writes_over(run: Run, tmp_path: Path) -> None:
    (tmp_path / "mine.yaml").write_text("mine")
    done = run("new", "mine.yaml")
    assert done.returncode == 2
    assert "mine.yaml is there already" in done.stderr
    assert (tmp_path / "mine.yaml").read_text() == "mine"
    assert run("new", "gone/mine").returncode == 2
    assert "did you mean 'cycle'?" in run("new", "other", "--like", "cycles").stderr
    assert [path.name for path in tmp_path.iterdir()] == ["mine.yaml"]


@pytest.mark.parametrize("shell", ["bash", "zsh", "fish"])
def test_completion_script_names_the_program(run: Run, shell: str) -> None:
    done = run("completion", shell)
    assert done.returncode == 0
    assert f"_PATHCALC_COMPLETE={shell}_complete" in done.stdout
    program = shutil.which(shell)
    if program is not None:
        flag = "--no-execute" if shell == "fish" else "-n"
        subprocess.run([program, flag], input=done.stdout, text=True, check=True, timeout=30)


@pytest.mark.parametrize(
    ("words", "offered"),
    [
        ("pathcalc so", "solve"),
        ("pathcalc new x --like cy", "cycle"),
        ("pathcalc substances nitr", "nitrogen"),
        ("pathcalc explain good.yaml valve.T", "valve.T"),
    ],
)
def test_completion_offers(cases: Path, words: str, offered: str) -> None:
    count = str(len(words.split()) - 1)
    env = environment(_PATHCALC_COMPLETE="bash_complete", COMP_WORDS=words, COMP_CWORD=count)
    done = subprocess.run(
        [sys.executable, "-m", "pathcalc"], cwd=cases, env=env, capture_output=True, text=True, check=False, timeout=60
    )
    assert offered in [line.partition(",")[2] for line in done.stdout.splitlines()]


def test_substances_tells_of_the_reference_equation(run: Run) -> None:
    card = run("substances", "water").stdout
    for text in ("Reference equation: IAPWS-95", "why: ", "2 non-analytic", "uncertainty of density", "melting line: "):
        assert text in card
    data = json.loads(run("substances", "R134a", "--json").stdout)["reference"]
    assert [len(table["rows"]) for table in data["terms"]] == [8, 13]
    assert data["valid"]["T_max"] == 455.0
