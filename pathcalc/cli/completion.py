"""``pathcalc completion``: what a shell needs to complete commands, options, cases, substances and templates."""

from __future__ import annotations

import click

from pathcalc.cli.group import COMMANDS, COMPLETE_VARIABLE, PROGRAM, cli
from pathcalc.cli.talk import loudness, write

SHELLS = ("bash", "zsh", "fish")


@click.command("completion", short_help=COMMANDS["completion"])
@click.argument("shell", type=click.Choice(SHELLS))
@loudness
def command(shell: str) -> None:
    """Print the completion script of a shell.

    \b
    bash:  pathcalc completion bash > ~/.local/share/bash-completion/completions/pathcalc
    zsh:   pathcalc completion zsh > "${fpath[1]}/_pathcalc"
    fish:  pathcalc completion fish > ~/.config/fish/completions/pathcalc.fish
    """
    from click.shell_completion import get_completion_class

    kind = get_completion_class(shell)
    if kind is None:
        raise click.UsageError(f"no completion for {shell!r}; there is one for {', '.join(SHELLS)}")
    made = kind(cli, {}, PROGRAM, COMPLETE_VARIABLE)
    write(made.source_template % made.source_vars())
