"""The group of commands. A command's module is imported when it is called: ``--help`` costs nothing else."""

from __future__ import annotations

import difflib
from importlib import import_module
from typing import Any

import click

from pathcalc.cli.talk import loudness

PROGRAM = "pathcalc"
COMPLETE_VARIABLE = "_PATHCALC_COMPLETE"

COMMANDS = {
    "check": "Validate cases without solving them.",
    "solve": "Solve cases: summary or JSON, and reports.",
    "explain": "Show how one number came about.",
    "regress": "Hold a library of cases against its stored results.",
    "compare": "Tell what differs between two cases, results or revisions.",
    "where-used": "List the cases that lean on a file or a substance.",
    "substances": "List the substances, or show one in full.",
    "schema": "Print the JSON Schema of the case file.",
    "new": "Write a commented case to start from.",
    "completion": "Print the completion script of a shell.",
}
"""Commands with their short help; each lives in the module of its name and is called ``command`` there."""


class PipeClosed(Exception):
    """The reader of standard output went away."""


class Group(click.Group):
    """A group that loads its commands when they are needed and answers a slip with the nearest name."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """Names of the commands, in the order they are usually needed."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """The command of that name, from its own module."""
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = import_module(f"pathcalc.cli.{cmd_name.replace('-', '_')}").command
        return command

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        """The command that the arguments begin with."""
        if args and args[0] not in COMMANDS and not args[0].startswith("-"):
            near = difflib.get_close_matches(args[0], COMMANDS, 1)
            hint = f" Did you mean '{near[0]}'?" if near else ""
            ctx.fail(f"No such command '{args[0]}'.{hint}")
        return super().resolve_command(ctx, args)

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        """The list of commands, from the table rather than from their modules."""
        with formatter.section("Commands"):
            formatter.write_dl(list(COMMANDS.items()))

    def invoke(self, ctx: click.Context) -> Any:
        """Run the command; a closed pipe is told apart from other errors of the system."""
        try:
            return super().invoke(ctx)
        except BrokenPipeError as error:
            raise PipeClosed from error


def _version(context: click.Context, parameter: click.Parameter, value: bool) -> None:
    if value and not context.resilient_parsing:
        from pathcalc import __version__

        click.echo(f"{PROGRAM} {__version__}")
        context.exit()


@click.group(
    cls=Group,
    no_args_is_help=False,
    context_settings={"help_option_names": ["-h", "--help"]},
    epilog="Exit codes: 0 all well; 1 a limit or check missed; 2 wrong usage; 3 a case is invalid; "
    "4 a valid case has no solution; 5 an internal error.",
)
@click.option(
    "--version", is_flag=True, expose_value=False, is_eager=True, callback=_version, help="Show the version and leave."
)
@loudness
def cli() -> None:
    """Thermodynamic path calculations for real fluids, from a case file to a checkable report."""
