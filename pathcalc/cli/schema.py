"""``pathcalc schema``: the JSON Schema of the case file, for editors."""

from __future__ import annotations

import click

from pathcalc.cli.group import COMMANDS
from pathcalc.cli.talk import loudness, write_json


@click.command("schema", short_help=COMMANDS["schema"])
@loudness
def command() -> None:
    """Print the JSON Schema of the case file.

    Editors that know JSON Schema complete and check cases with it: pathcalc schema > case.schema.json
    """
    from pathcalc.case.json_schema import case_json_schema

    write_json(case_json_schema())
