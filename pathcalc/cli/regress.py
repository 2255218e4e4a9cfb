"""``pathcalc regress``: solves a library and holds it against the stored results."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from pathcalc.cli.findings import FORMATS
from pathcalc.cli.group import COMMANDS
from pathcalc.cli.inputs import root_option
from pathcalc.cli.talk import Talk, loudness, visible
from pathcalc.errors import UsageError

if TYPE_CHECKING:
    from click.shell_completion import CompletionItem

    from pathcalc.library.run import RunResult


def _cases(context: click.Context, parameter: click.Parameter, incomplete: str) -> list[CompletionItem]:
    """Names of the cases of the folder that is given, for the shell."""
    from click.shell_completion import CompletionItem

    from pathcalc.library.discovery import discover

    try:
        found = discover(str(context.params.get("folder") or "."))
    except UsageError:
        return []
    base = found.top if found.top.is_dir() else found.top.parent
    names = [case.relative_to(base).with_suffix("").as_posix() for case in found.cases]
    return [CompletionItem(name) for name in names if name.startswith(incomplete)]


@click.command("regress", short_help=COMMANDS["regress"])
@click.argument("folder", type=click.Path(), metavar="FOLDER")
@click.argument("cases", nargs=-1, metavar="[CASE]...", shell_complete=_cases)
@click.option("--accept", is_flag=True, help="Store the results as they are now, of the CASEs named, else of all.")
@click.option("--reason", metavar="TEXT", help="Why they are accepted; stored with them.")
@click.option("--changed", is_flag=True, help="Leave out what is as it was when its result was accepted.")
@click.option(
    "--jobs", type=click.IntRange(1, 1024), metavar="N", help="Worker processes; one a processor if left out."
)
@click.option("--time-limit", type=click.FloatRange(0.0, min_open=True), metavar="S", help="Seconds a case may take.")
@click.option("--scheduler", metavar="ADDRESS", help="Run on the dask cluster of this scheduler.")
@click.option("--format", "form", type=click.Choice(FORMATS), default="text", help="Form of what is found.")
@click.option("--junit", type=click.Path(), metavar="FILE", help="Write the outcomes as JUnit XML, too.")
@root_option
@loudness
@click.pass_obj
def command(
    talk: Talk,
    folder: str,
    cases: tuple[str, ...],
    accept: bool,
    reason: str | None,
    changed: bool,
    jobs: int | None,
    time_limit: float | None,
    scheduler: str | None,
    form: str,
    junit: str | None,
    root: str | None,
) -> int:
    """Solve a library and hold it against the stored results.

    Every case below FOLDER (or only the CASEs named) is solved and compared with the result stored beside it, CASE.yaml
    with CASE.results.json. A difference beyond its tolerance, a missing stored result, a failed check and a limit
    that was not missed before end with exit code 1. Nothing is written unless results are accepted with a reason.
    """
    from pathcalc.cli.progress import watching
    from pathcalc.cli.regress_text import shown
    from pathcalc.library.accept import StoringInterrupted, checked_reason
    from pathcalc.library.run import Options, regress

    if not accept and reason is not None:
        raise UsageError("--reason goes with --accept")
    if accept and changed:
        raise UsageError("--accept solves what it stores; leave --changed out")
    options = Options(root, cases, checked_reason(reason) if accept else None, changed, jobs, time_limit, scheduler)
    if junit is not None:
        _refuse(Path(junit))
    try:
        with watching(talk) as watch:
            result = regress(folder, options, watch)
    except StoringInterrupted as stopped:
        names = ", ".join(visible(place.as_posix()) for place in stopped.written) or "none"
        talk.note(f"stored before the interrupt: {names}; all others are as they were")
        raise
    shown(result, form, talk)
    code = result.code
    if junit is not None:
        code = max(code, _write_junit(result, Path(junit), talk))
    talk.note(_tally(result))
    return code


def _refuse(file: Path) -> None:
    if file.is_dir() or not file.name:
        raise UsageError(f"--junit {file.as_posix()}: name a file")


def _write_junit(result: RunResult, file: Path, talk: Talk) -> int:
    from pathcalc.files import write_file
    from pathcalc.library.junit import junit

    try:
        write_file(file, junit(result.outcomes, result.top.as_posix()))
    except OSError as error:
        talk.error(f"{file.as_posix()} cannot be written: {error.strerror or error}")
        return 2
    return 0


def _tally(result: RunResult) -> str:
    total = len(result.outcomes)
    parts = [f"{count} {status}" for status, count in result.counts().items()]
    still = sum(bool(o.stored_limits_missed) and not o.code for o in result.outcomes)
    if still:
        parts.append(f"{still} with a limit missed as accepted")
    return f"{total} case{'' if total == 1 else 's'}: {', '.join(parts)}"
