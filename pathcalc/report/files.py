"""Files that are written whole or not at all."""

from __future__ import annotations

import contextlib
import os
from collections.abc import Mapping
from pathlib import Path

from pathcalc.errors import UsageError


def check(formats: set[str], stem: str) -> None:
    """Raise UsageError for a format or a file name that cannot be."""
    from pathcalc.report import FORMATS

    unknown = sorted(formats - set(FORMATS))
    if unknown:
        raise UsageError(f"unknown report format {', '.join(unknown)}; known are {', '.join(FORMATS)}")
    if not stem or stem in {".", ".."} or any(c in stem for c in "/\\\0"):
        raise UsageError(f"{stem!r} cannot be the name of a report file")


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
                raise IsADirectoryError(21, "a folder stands where the report would go", str(target))
            temporary = folder / f".{name}.{os.getpid()}.part"
            begun.append((temporary, target))
            with temporary.open("xb") as stream:
                stream.write(content)
                stream.flush()
                os.fsync(stream.fileno())
        for temporary, target in begun:
            os.replace(temporary, target)
    except BaseException:
        for temporary, _ in begun:
            with contextlib.suppress(OSError):
                temporary.unlink()
        raise
    return [target for _, target in begun]
