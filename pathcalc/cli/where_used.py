"""``pathcalc where-used``: the cases that lean on a site basis, a card or a substance."""

from __future__ import annotations

from dataclasses import asdict

import click

from pathcalc.cli.group import COMMANDS
from pathcalc.cli.inputs import root_option
from pathcalc.cli.talk import Talk, json_text, loudness, visible, write_utf8
from pathcalc.errors import UsageError


@click.command("where-used", short_help=COMMANDS["where-used"])
@click.argument("folder", type=click.Path(), metavar="FOLDER")
@click.argument("things", nargs=-1, metavar="[WHAT]...")
@click.option("--format", "form", type=click.Choice(("text", "json")), default="text", help="Form of the list.")
@root_option
@loudness
@click.pass_obj
def command(talk: Talk, folder: str, things: tuple[str, ...], form: str, root: str | None) -> int:
    """List the cases below FOLDER that lean on each site basis, card, published equation and substance.

    With WHAT, a file or the name of a substance, only on that. Run it before a shared file is changed.
    """
    from pathcalc.library.discovery import discover
    from pathcalc.library.where_used import only, uses

    found = discover(folder, root)
    if not found.cases:
        raise UsageError(f"{folder}: no case in this folder (*.yaml that begin with the key pathcalc)")
    every = uses(found)
    chosen = [use for thing in things for use in only(every, thing)] if things else every
    if form == "json":
        write_utf8(json_text([asdict(use) for use in chosen]))
    else:
        for use in chosen:
            write_utf8(f"{use.kind} {visible(use.name)} ({len(use.cases)})")
            for case in use.cases:
                write_utf8(f"  {visible(case)}")
    for thing in things:
        if not only(every, thing):
            talk.note(f"no case below {folder} leans on {thing}")
    return 0
