"""From arguments to an exit code: whatever goes wrong ends in one readable line and the code that stands for it."""

from __future__ import annotations

import contextlib
import os
import sys
from collections.abc import Sequence

import click

from pathcalc.cli.group import COMPLETE_VARIABLE, PROGRAM, PipeClosed, cli
from pathcalc.cli.talk import Talk, one_line
from pathcalc.errors import InvalidCaseError, InvalidWordsError, PathcalcError

INTERRUPTED = 130
PIPE_CLOSED = 141
WRONG_USAGE = 2
OUR_FAULT = 5


def run(argv: Sequence[str] | None = None) -> int:
    """Run the commands with ``argv`` (by default those of the process) and return the exit code."""
    talk = Talk()
    _set_streams()
    try:
        code = _run(argv, talk)
        sys.stdout.flush()
    except (BrokenPipeError, PipeClosed):
        _drop_output()
        return PIPE_CLOSED
    return code


def _run(argv: Sequence[str] | None, talk: Talk) -> int:
    try:
        result = cli.main(
            args=None if argv is None else list(argv),
            prog_name=PROGRAM,
            complete_var=COMPLETE_VARIABLE,
            standalone_mode=False,
            obj=talk,
        )
    except (click.Abort, KeyboardInterrupt):
        talk.error("interrupted")
        return INTERRUPTED
    except click.ClickException as error:
        talk.usage(error)
        return WRONG_USAGE
    except PathcalcError as error:
        return report_error(error, talk)
    except (BrokenPipeError, PipeClosed):
        raise
    except Exception as error:
        return report_error(error, talk)
    return result if isinstance(result, int) else 0


def report_error(error: Exception, talk: Talk, where: str = "") -> int:
    """Say on standard error what went wrong, and return the exit code for it."""
    if isinstance(error, InvalidCaseError | InvalidWordsError):
        for finding in error.findings:
            if finding.file or finding.line:
                talk.line(str(finding))
            else:
                talk.error(f"{finding.message} ({finding.code})")
        return error.exit_code
    if isinstance(error, PathcalcError) and error.exit_code != OUR_FAULT:
        talk.error(str(error))
        return error.exit_code
    talk.traceback(error)
    place = f"{where}: " if where else ""
    kind = type(error).__name__
    text = one_line(str(error)) or "no further text"
    hint = "" if talk.verbose else " (--verbose shows where)"
    talk.error(f"{place}internal error, {kind}: {text}; please report it with the case{hint}")
    return OUR_FAULT


def _set_streams() -> None:
    """What a terminal's character set lacks is written as an escape rather than not at all."""
    for stream in (sys.stdout, sys.stderr):
        with contextlib.suppress(AttributeError, OSError, ValueError):
            stream.reconfigure(errors="backslashreplace")  # type: ignore[union-attr]


def _drop_output() -> None:
    """Let nothing be written at exit to a pipe that nobody reads."""
    with contextlib.suppress(OSError, ValueError):
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
