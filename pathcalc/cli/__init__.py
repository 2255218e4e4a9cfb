"""The command line: one file a command. The only room that prints, reads options or sets an exit code.

Exit codes: 0 all well · 1 a limit or check missed · 2 wrong usage · 3 a case is invalid · 4 a valid case has no
solution · 5 our own fault · 130 interrupted · 141 the reader of our output went away.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import NoReturn

__all__ = ["main"]


def main(argv: Sequence[str] | None = None) -> NoReturn:
    """Run the command line and leave the process with its exit code."""
    from pathcalc.cli.run import run

    raise SystemExit(run(argv))
