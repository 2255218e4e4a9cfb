"""Storing results that were accepted: one run at a time on a folder, each file whole or not at all."""

from __future__ import annotations

import contextlib
import os
from collections.abc import Iterator, Sequence
from pathlib import Path

from pathcalc.errors import UsageError
from pathcalc.files import remove_parts, write_file
from pathcalc.library.outcome import Outcome
from pathcalc.library.results_file import results_path

LONGEST_REASON = 500


def checked_reason(reason: str | None) -> str:
    """The reason as it is recorded: one line. Raises UsageError where there is none."""
    text = "".join(c if c.isprintable() else " " for c in " ".join((reason or "").split()))
    if not text:
        raise UsageError("--accept needs --reason TEXT: why the results are to be stored as they are now")
    if len(text) > LONGEST_REASON:
        raise UsageError(f"the reason is longer than {LONGEST_REASON} characters")
    return text


@contextlib.contextmanager
def only_run(folder: Path) -> Iterator[None]:
    """Hold a folder for accepting; raises UsageError while another run holds it.

    The lock goes with the process, however that ends. Where the system has no such lock, the last file wins, whole.
    """
    try:
        import fcntl
    except ImportError:
        yield
        return
    try:
        handle = os.open(folder, os.O_RDONLY)
    except OSError as error:
        raise UsageError(f"{folder.as_posix()} cannot be opened: {error.strerror}") from None
    try:
        try:
            fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            text = "another run is accepting results in this folder; nothing was written, try again when it has ended"
            raise UsageError(f"{folder.as_posix()}: {text}") from None
        except OSError:
            pass  # a file system without locks
        yield
    finally:
        os.close(handle)


def store(outcomes: Sequence[Outcome]) -> tuple[list[Path], list[tuple[Path, str]]]:
    """Write what was accepted; the files written, and those that could not be, each with the reason.

    An interrupt leaves whole files only: those written so far, and the others as they were.
    """
    written: list[Path] = []
    failed: list[tuple[Path, str]] = []
    for outcome in outcomes:
        if outcome.text is None:
            continue
        place = results_path(Path(outcome.file))
        remove_parts(place.parent, place.name)
        try:
            write_file(place, outcome.text.encode("utf-8"))
        except OSError as error:
            failed.append((place, error.strerror or str(error)))
        except KeyboardInterrupt:
            raise StoringInterrupted(written) from None
        else:
            written.append(place)
    return written, failed


class StoringInterrupted(KeyboardInterrupt):
    """Interrupted while storing; ``written`` are whole, all others as they were."""

    def __init__(self, written: list[Path]) -> None:
        self.written = written
        super().__init__()
