"""What README.md tells people to type exists and is understood."""

from __future__ import annotations

import re
import shlex
import subprocess
from pathlib import Path

import click
import pytest
from command_line import ROOT

README = (ROOT / "README.md").read_text(encoding="utf-8")
BLOCKS = dict(re.findall(r"<!-- command: (\w+) -->\n```sh\n(.+?)\n```", README, re.DOTALL))


def test_there_are_two_commands_each_of_one_line() -> None:
    assert list(BLOCKS) == ["run", "test"]
    assert all("\n" not in line for line in BLOCKS.values())
    for line in BLOCKS.values():
        subprocess.run(["bash", "-n", "-c", line], check=True, timeout=30)


def test_the_example_is_there_and_its_report_is_where_readme_says() -> None:
    words = shlex.split(BLOCKS["run"])
    case = words[words.index("solve") + 1]
    assert (ROOT / case).is_file()
    folder = words[words.index("-o") + 1]
    assert f"`{folder}/{Path(case).with_suffix('.html').as_posix()}`" in README


def _lines() -> list[str]:
    inline = re.findall(r"`(pathcalc [a-z]+ [^`…]*)`", README)
    return [line for line in inline if "[" not in line and not re.search(r"\b[A-Z]{4,}\b", line)]


@pytest.mark.parametrize("line", _lines())
def test_command_lines_parse(line: str, monkeypatch: pytest.MonkeyPatch) -> None:
    from pathcalc.cli.group import cli

    monkeypatch.chdir(ROOT)
    words = shlex.split(line.partition(">")[0])[1:]
    command = cli.get_command(click.Context(cli), words[0])
    assert command is not None
    command.make_context(words[0], words[1:])
    for word in words:
        if "/" in word and word.endswith(".yaml"):
            assert Path(word).is_file()


def test_every_command_and_exit_code_is_told() -> None:
    from pathcalc.cli.group import COMMANDS

    for name in COMMANDS:
        assert f"| `pathcalc {name}" in README
    for code in range(6):
        assert f"\n| {code} |" in README


def test_the_case_in_readme_solves(tmp_path: Path) -> None:
    import pathcalc

    case, card = re.findall(r"```yaml\n(.+?)```", README, re.DOTALL)
    solution = pathcalc.solve(pathcalc.loads(case, root=tmp_path))
    assert solution.passed
    (tmp_path / "own.yaml").write_text(card, encoding="utf-8")
    text = case.replace("substance: argon", "card: own.yaml")
    assert text != case
    assert pathcalc.solve(pathcalc.loads(text, root=tmp_path)).states["valve"].T > 0.0


def test_the_python_in_readme_runs(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
    (code,) = re.findall(r"```python\n(.+?)```", README, re.DOTALL)
    names: dict[str, object] = {}
    exec(code, names)
    assert str(names["html"]).lstrip().lower().startswith("<!doctype html>")


def test_templates_in_developers_guide_exist() -> None:
    guide = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
    for path in re.findall(
        r"`((?:case|quantities|path|legs|equations|substances|report|cli|equilibrium)/[\w/]+\.py)", guide
    ):
        assert (ROOT / "pathcalc" / path).is_file(), path
