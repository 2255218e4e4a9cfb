"""``pathcalc compare``: what differs between two cases, in quantities and not in text."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

import click

from pathcalc.cli.findings import rendered
from pathcalc.cli.group import COMMANDS
from pathcalc.cli.inputs import root_option
from pathcalc.cli.talk import Talk, json_text, loudness, write, write_utf8

FORMATS = ("text", "json", "markdown")


@click.command("compare", short_help=COMMANDS["compare"])
@click.argument("old", metavar="A")
@click.argument("new", metavar="B")
@click.option("--format", "form", type=click.Choice(FORMATS), default="text", help="Form of the comparison.")
@click.option("--exact", is_flag=True, help="Tell every difference, down to the last digit.")
@root_option
@loudness
@click.pass_obj
def command(talk: Talk, old: str, new: str, form: str, exact: bool, root: str | None) -> int:
    """Tell what differs between A and B: inputs, results, limits that changed side.

    A and B are cases, results files, folders of either, or REVISION:PATH of a git checkout, as in
    HEAD~1:cases/booster.yaml. Cases are solved; results differ when they do beyond the tolerances of a regression.
    The exit code is 0 whether or not anything differs, 3 where a case is not valid, 4 where one has no solution.
    """
    from pathcalc.cli.compare_text import as_markdown, as_text
    from pathcalc.cli.progress import watching
    from pathcalc.library.compare_sides import compared, sides

    with sides((old, new)) as (a, b), watching(talk) as watch:
        pairs = compared(a, b, root, exact, watch.done)
        many = a.place.is_dir()
    for pair in pairs:
        if pair.trouble:
            talk.line(rendered(pair.trouble, "text").rstrip("\n"))
    if form == "json":
        write_utf8(json_text([_public(pair) for pair in pairs] if many else _public(pairs[0])))
    elif form == "markdown":
        write_utf8(as_markdown(pairs, old, new))
    else:
        write(as_text(pairs, old, new, talk))
    return max(pair.code for pair in pairs)


def _public(pair: Any) -> dict[str, Any]:
    found: dict[str, Any] = {"name": pair.name, "only": pair.only or None}
    if pair.comparison is not None:
        found.update(pair.comparison.to_dict())
    elif pair.unchanged:
        found["same"] = True
    else:
        found["findings"] = [asdict(f) for f in pair.trouble]
    return found
