"""``pathcalc new``: a commented case to start from."""

from __future__ import annotations

import difflib
import os
from pathlib import Path
from typing import TYPE_CHECKING

import click

from pathcalc.cli.group import COMMANDS
from pathcalc.cli.talk import Talk, loudness
from pathcalc.errors import UsageError

if TYPE_CHECKING:
    from click.shell_completion import CompletionItem

TEMPLATES = {
    "compression": "gas through two stages with an intercooler (steady flow)",
    "letdown": "a throttle after a heater (steady flow)",
    "storage": "a cylinder that warms up, and its pressure (fixed mass)",
    "heating": "a liquid boiled and superheated (steady flow)",
    "expansion": "a turbine with an efficiency (steady flow)",
    "cycle": "a cold-vapour refrigeration cycle (steady flow)",
    "piston": "a gas in a cylinder with a piston (fixed mass)",
}
"""Templates with what each is about; the files lie in the folder ``templates``."""
DEFAULT = "compression"
SCHEMA = "pathcalc-case.schema.json"
MODELINE = "# yaml-language-server: $schema={}\n"
"""What leads the YAML language server to a schema; the path is relative to the case."""
FOLDER = Path(__file__).parent / "templates"


def _names(context: click.Context, parameter: click.Parameter, incomplete: str) -> list[CompletionItem]:
    from click.shell_completion import CompletionItem

    return [CompletionItem(n, help=text) for n, text in TEMPLATES.items() if n.startswith(incomplete)]


LIST = "\b\nTemplates:\n" + "\n".join(f"  {name:<13}{text}" for name, text in TEMPLATES.items())


@click.command("new", short_help=COMMANDS["new"], epilog=LIST)
@click.argument("name")
@click.option(
    "--like",
    metavar="TEMPLATE",
    default=DEFAULT,
    shell_complete=_names,
    help=f"What the case is like, by default {DEFAULT}; the list is below.",
)
@click.option("--schema/--no-schema", default=True, help="Whether the first line leads an editor to the schema.")
@loudness
@click.pass_obj
def command(talk: Talk, name: str, like: str, schema: bool) -> None:
    """Write NAME.yaml: a commented case that can be solved as it is, to be changed into your own.

    Its first line leads an editor with a YAML language server to the schema pathcalc-case.schema.json, in the case's
    folder or one above it in the checkout; where there is none, it is written beside the case. A file that is there
    already is never written over.
    """
    text = template(like)
    target = Path(name if name.lower().endswith((".yaml", ".yml")) else f"{name}.yaml")
    if not target.stem or name in ("", "-") or name.endswith("/"):
        raise UsageError(f"{name!r} cannot be the name of a case; give one such as booster")
    try:
        place = _schema_for(target) if schema else None
        lead = "" if place is None else MODELINE.format(Path(os.path.relpath(place, target.parent)).as_posix())
        _write_new(target, lead + text)
        if place is not None and not place.exists():
            _write_schema(place)
            talk.note(f"{place.as_posix()} written, for editors")
    except FileExistsError:
        raise UsageError(f"{target.as_posix()} is there already; choose another name") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise UsageError(f"cannot write {target.as_posix()}: {reason}") from None
    talk.note(f"{target.as_posix()} written; next: pathcalc solve {target.as_posix()}")


def template(like: str) -> str:
    """Text of a template; UsageError with the nearest name if there is none."""
    if like not in TEMPLATES:
        near = difflib.get_close_matches(like, TEMPLATES, 1)
        hint = f"did you mean {near[0]!r}? " if near else ""
        raise UsageError(f"no template {like!r}; {hint}there are {', '.join(TEMPLATES)}")
    return (FOLDER / f"{like}.yaml").read_text(encoding="utf-8")


def _schema_for(target: Path) -> Path:
    """The schema for editors: beside the case or in the nearest folder above it in its checkout; else to be beside."""
    from pathcalc.case.files import find_root

    folder = target.parent
    root = find_root(folder) if folder.is_dir() else folder.resolve()
    for above in (folder.resolve(), *folder.resolve().parents):
        if (above / SCHEMA).is_file():
            return above / SCHEMA
        if above == root:
            break
    return folder / SCHEMA


def _write_schema(place: Path) -> None:
    from pathcalc.case.json_schema import case_json_schema
    from pathcalc.cli.talk import json_text
    from pathcalc.files import write_file

    write_file(place, f"{json_text(case_json_schema())}\n".encode())


def _write_new(target: Path, text: str) -> None:
    """Write a file that must not be there yet, whole or not at all."""
    with target.open("x", encoding="utf-8", newline="\n") as stream:
        try:
            stream.write(text)
            stream.flush()
        except BaseException:
            os.unlink(target)
            raise
