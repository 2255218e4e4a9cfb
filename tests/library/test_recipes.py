"""What README.md shows of libraries is understood by the program."""

from __future__ import annotations

import re
import shlex
import textwrap
from pathlib import Path
from typing import Any

import click
import yaml
from library_cases import GAS, ROOT, Here, library

README = (ROOT / "README.md").read_text(encoding="utf-8")


def test_the_workflow() -> None:
    """YAML of the usual form; every pathcalc line in it parses."""
    from pathcalc.cli.group import cli

    block = README.split("<!-- recipe: workflow -->\n", 1)[1]
    text = textwrap.dedent(re.split(r"\n(?=\S)", block)[0])
    steps: list[dict[str, Any]] = yaml.safe_load(text)["jobs"]["cases"]["steps"]
    lines = [step["run"] for step in steps if step.get("run", "").startswith("pathcalc ")]
    assert len(lines) == 3
    for line in lines:
        words = shlex.split(line.partition(">>")[0])[1:]
        command = cli.get_command(click.Context(cli), words[0])
        assert command is not None
        command.make_context(words[0], words[1:])


def test_the_settings(tmp_path: Path, here: Here) -> None:
    block = README[README.index("    library: 1\n") :]
    library(tmp_path, a=GAS)
    (tmp_path / "pathcalc-library.yaml").write_text(textwrap.dedent(block[: block.index("\n\n")] + "\n"))
    here("regress", ".", "--accept", "--reason", "x", cwd=tmp_path, code=0)
    assert "1 passed" in here("regress", ".", cwd=tmp_path, code=0).stderr


def test_the_tolerances_of_a_case(tmp_path: Path, here: Here) -> None:
    (line,) = re.findall(r"`(record: \{tolerances:.+?\]\})`", README)
    library(tmp_path, a=f"{GAS}{line}\n")
    assert "1 case valid" in here("check", ".", cwd=tmp_path, code=0).stderr


def test_a_new_case_leads_to_a_schema_that_it_fits(tmp_path: Path, here: Here) -> None:
    import json

    import jsonschema

    (tmp_path / ".git").mkdir()
    (tmp_path / "deep").mkdir()
    here("new", "first", cwd=tmp_path, code=0)
    here("new", "second", "--like", "cycle", cwd=tmp_path / "deep", code=0)
    here("new", "third", "--no-schema", cwd=tmp_path / "deep", code=0)
    heads = {p.stem: p.read_text().splitlines()[0] for p in tmp_path.rglob("*.yaml")}
    assert heads["first"] == "# yaml-language-server: $schema=pathcalc-case.schema.json"
    assert heads["second"] == "# yaml-language-server: $schema=../pathcalc-case.schema.json"
    assert "schema" not in heads["third"]
    assert len(list(tmp_path.rglob("*.schema.json"))) == 1
    schema = json.loads((tmp_path / "pathcalc-case.schema.json").read_text())
    jsonschema.validate(yaml.safe_load((tmp_path / "first.yaml").read_text()), schema, jsonschema.Draft7Validator)
    assert "2 cases valid" not in here("check", ".", cwd=tmp_path, code=0).stderr


def test_shells_complete_cases(tmp_path: Path, monkeypatch: Any) -> None:
    from click.shell_completion import ShellComplete

    from pathcalc.cli.group import COMPLETE_VARIABLE, PROGRAM, cli

    library(tmp_path / "cases", booster=GAS, letdown=GAS)
    monkeypatch.chdir(tmp_path)
    complete = ShellComplete(cli, {}, PROGRAM, COMPLETE_VARIABLE)
    assert [c.value for c in complete.get_completions(["regress", "cases"], "b")] == ["booster"]
    assert {c.value for c in complete.get_completions(["regress", "cases", "--accept"], "")} >= {"booster", "letdown"}
    assert "where-used" in {c.value for c in complete.get_completions([], "wh")}
