"""``pathcalc check``: validates, never solves."""

from __future__ import annotations

import contextlib
from typing import TYPE_CHECKING

import click

from pathcalc.cli.findings import FORMATS, rendered
from pathcalc.cli.group import COMMANDS
from pathcalc.cli.inputs import PATH, Input, gather, root_option
from pathcalc.cli.run import report_error
from pathcalc.cli.talk import Talk, loudness, write_utf8
from pathcalc.errors import Finding, InvalidCaseError, NoSolutionError, PathcalcError, UsageError

if TYPE_CHECKING:
    from pathcalc.case import Case


@click.command("check", short_help=COMMANDS["check"])
@click.argument("paths", nargs=-1, required=True, type=PATH, metavar="PATH...")
@click.option("--format", "form", type=click.Choice(FORMATS), default="text", help="Form of the findings.")
@click.option("--upgrade", is_flag=True, help="Rewrite cases of an older version of the format; comments stay.")
@root_option
@loudness
@click.pass_obj
def command(talk: Talk, paths: tuple[str, ...], form: str, upgrade: bool, root: str | None) -> int:
    """Validate cases without solving them.

    A PATH is a file, a folder (every *.yaml below it that begins with the key pathcalc) or - for standard input.
    Each finding is a line of standard output, file:line:column: error: message (code), or an item of a JSON list,
    or an annotation of a workflow.
    """
    inputs = gather(paths, talk, root)
    code, valid = inputs.code, 0
    findings: list[Finding] = []
    for item in inputs.items:
        own, found = _upgraded(item, root, talk) if upgrade else (0, [])
        if own == 0:
            own, more = _check(item, root, talk)
            found += more
        code = max(code, own)
        valid += own == 0
        findings += found
        if form != "json" and found:
            write_utf8(rendered(found, form))
    if form == "json":
        write_utf8(rendered(findings, form))
    talk.note(_tally(valid, len(inputs.items)))
    return code


def _upgraded(item: Input, root: str | None, talk: Talk) -> tuple[int, list[Finding]]:
    """Rewrite one case, and tell every edit; the file stays as it is where anything is wrong."""
    from pathcalc.library.upgrade import upgrade

    if item.path is None:
        return report_error(UsageError("--upgrade rewrites files; name one"), talk), []
    try:
        return 0, list(upgrade(item.path, root).changes)
    except InvalidCaseError as error:
        return error.exit_code, error.findings
    except PathcalcError as error:
        return report_error(error, talk, item.shown), []


def _check(item: Input, root: str | None, talk: Talk) -> tuple[int, list[Finding]]:
    try:
        case = item.load(root)
        if case.fluid.card_path is not None:
            _check_card(case)
    except InvalidCaseError as error:
        errors = any(finding.severity == "error" for finding in error.findings)
        return (error.exit_code if errors else 0), error.findings
    except PathcalcError as error:
        return report_error(error, talk, item.shown), []
    except BrokenPipeError:
        raise
    except Exception as error:
        return report_error(error, talk, item.shown), []
    return 0, []


def _check_card(case: Case) -> None:
    """Read the user's own card and put up its equation: whatever is wrong with them is wrong without solving."""
    from pathcalc.path.fluid import card_of, model_of

    with contextlib.suppress(NoSolutionError):
        model_of(case, card_of(case))


def _tally(valid: int, total: int) -> str:
    if valid == total:
        return f"{total} case{'' if total == 1 else 's'} valid"
    return f"{valid} of {total} cases valid" if total != 1 else "the case is not valid"
