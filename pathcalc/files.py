"""Files that are written whole or not at all."""

from __future__ import annotations

import contextlib
import os
import shutil
from collections.abc import Mapping
from pathlib import Path

PART = ".part"
"""Ending of a file that is being written; its name begins with a dot and holds the number of the process."""


def write_all(folder: Path, files: Mapping[str, bytes]) -> list[Path]:
    """Write every file beside its final place, then move all into place; on failure remove what was begun.

    The folder is made where it is missing. Raises OSError with the name of the place that failed.
    """
    folder.mkdir(parents=True, exist_ok=True)
    begun: list[tuple[Path, Path]] = []
    try:
        for name, content in files.items():
            target = folder / name
            if target.is_dir():
                raise IsADirectoryError(21, "a folder stands where the file would go", str(target))
            temporary = folder / f".{name}.{os.getpid()}{PART}"
            begun.append((temporary, target))
            with temporary.open("xb") as stream:
                stream.write(content)
                stream.flush()
                os.fsync(stream.fileno())
            if target.exists():
                shutil.copymode(target, temporary)
        for temporary, target in begun:
            os.replace(temporary, target)
    except BaseException:
        for temporary, _ in begun:
            with contextlib.suppress(OSError):
                temporary.unlink()
        raise
    return [target for _, target in begun]


def write_file(target: Path, content: bytes) -> None:
    """Write one file whole or not at all; see :func:`write_all`."""
    write_all(target.parent, {target.name: content})


def remove_parts(folder: Path, name: str) -> None:
    """Remove what runs that were killed left of writing ``name``; only for who holds the folder's lock."""
    for left in folder.glob(f".{_literal(name)}.*{PART}"):
        if left.name[len(name) + 2 : -len(PART)].isdigit():
            with contextlib.suppress(OSError):
                left.unlink()


def _literal(name: str) -> str:
    import glob

    return glob.escape(name)
