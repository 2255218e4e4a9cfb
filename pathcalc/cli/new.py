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
@loudness
@click.pass_obj
def command(talk: Talk, name: str, like: str) -> None:
    """Write NAME.yaml: a commented case that can be solved as it is, to be changed into your own.

    A file that is there already is never written over.
    """
    text = template(like)
    target = Path(name if name.lower().endswith((".yaml", ".yml")) else f"{name}.yaml")
    if not target.stem or name in ("", "-") or name.endswith("/"):
        raise UsageError(f"{name!r} cannot be the name of a case; give one such as booster")
    try:
        _write_new(target, text)
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


def _write_new(target: Path, text: str) -> None:
    """Write a file that must not be there yet, whole or not at all."""
    with target.open("x", encoding="utf-8", newline="\n") as stream:
        try:
            stream.write(text)
            stream.flush()
        except BaseException:
            os.unlink(target)
            raise
