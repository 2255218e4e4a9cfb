"""Which report files there can be; they are written whole or not at all by :mod:`pathcalc.files`."""

from __future__ import annotations

from pathcalc.errors import UsageError
from pathcalc.files import write_all

__all__ = ["check", "write_all"]


def check(formats: set[str], stem: str) -> None:
    """Raise UsageError for a format or a file name that cannot be."""
    from pathcalc.report import FORMATS

    unknown = sorted(formats - set(FORMATS))
    if unknown:
        raise UsageError(f"unknown report format {', '.join(unknown)}; known are {', '.join(FORMATS)}")
    if not stem or stem in {".", ".."} or any(c in stem for c in "/\\\0"):
        raise UsageError(f"{stem!r} cannot be the name of a report file")
