"""A progress bar on standard error, only on a terminal."""

from __future__ import annotations

import contextlib
import os
import sys
from collections.abc import Iterator
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pathcalc.cli.talk import Talk
    from pathcalc.library.workers import Watch


@contextlib.contextmanager
def watching(talk: Talk) -> Iterator[Watch]:
    """Who watches a run: a bar where a person looks on, notes in any case."""
    from pathcalc.library.workers import Watch

    if talk.quiet or not sys.stderr.isatty() or os.environ.get("TERM") == "dumb":
        yield Watch(note=talk.note)
        return
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn, TimeRemainingColumn

    console = Console(stderr=True, no_color=bool(os.environ.get("NO_COLOR")), highlight=False, markup=False)
    columns = (TextColumn("solving"), BarColumn(), MofNCompleteColumn(), TimeRemainingColumn())
    with Progress(*columns, console=console, transient=True) as progress:
        bar = progress.add_task("", total=None)

        def note(text: str) -> None:
            from pathcalc.cli.talk import safe

            progress.console.print(safe(text))

        yield Watch(done=lambda done, total: progress.update(bar, completed=done, total=total), note=note)
