"""``pathcalc schema``: the JSON Schema of the case file, for editors."""

from __future__ import annotations

import click

from pathcalc.cli.group import COMMANDS
from pathcalc.cli.talk import loudness, write_json


@click.command("schema", short_help=COMMANDS["schema"])
@click.argument("of", type=click.Choice(("case", "settings")), default="case", metavar="[case|settings]")
@loudness
def command(of: str) -> None:
    """Print the JSON Schema of the case file, or of the settings file of a library.

    Editors that know JSON Schema complete and check cases with it: pathcalc schema > pathcalc-case.schema.json
    """
    from pathcalc.case.json_schema import case_json_schema, settings_json_schema

    write_json(case_json_schema() if of == "case" else settings_json_schema())
