"""Strict reading of YAML nodes: typed access that collects a finding for everything that is wrong.

A reader asks for what it expects; what is missing, misspelt or of the wrong kind becomes a
:class:`pathcalc.errors.Finding` at its place, and reading goes on, so that one run shows all of them.
"""

from __future__ import annotations

import difflib
import math
import re
from collections.abc import Collection
from typing import Any

from pathcalc.case.nodes import Scalar, place
from pathcalc.errors import Finding

Path = tuple[str | int, ...]

# YAML 1.2, section 10.3.2: the decimal numbers of the core schema
_NUMBER = re.compile(r"[-+]?(\.[0-9]+|[0-9]+(\.[0-9]*)?)([eE][-+]?[0-9]+)?")


class Fields:
    """The nodes ``data`` of one ``file``, and the findings so far."""

    def __init__(self, file: str, data: Any, findings: list[Finding] | None = None) -> None:
        self.file = file
        self.data = data
        self.findings: list[Finding] = [] if findings is None else findings

    def place(self, path: Path, key: bool = False) -> tuple[int, int]:
        """Line and column of the value at ``path`` (or of its ``key``), or of the nearest part above it."""
        mark = place(self.data, path, key)
        return (mark.line, mark.column) if mark else (1, 1)

    def wrong(self, path: Path, text: str, code: str, *, key: bool = False) -> None:
        """Notes a finding at ``path``."""
        line, column = self.place(path, key)
        self.findings.append(Finding(self.file, line, column, text, code))

    def mapping(self, value: Any, path: Path, needed: Collection[str], optional: Collection[str] = ()) -> bool:
        """Whether ``value`` is a mapping that has all ``needed`` keys.

        Unknown and missing keys are noted; keys that begin with ``x-`` are the user's own.
        """
        if not isinstance(value, dict):
            self.wrong(path, f"{_where(path)} must be a mapping of keys, not {_kind(value)}", "wrong-type")
            return False
        known = [*needed, *optional]
        for key in value:
            if key not in known and not key.startswith("x-"):
                close = difflib.get_close_matches(key, known, n=1)
                hint = f"did you mean {close[0]!r}?" if close else f"known here: {', '.join(known)}"
                text = f"unknown key {key!r} in {_where(path)}; {hint}"
                self.wrong((*path, key), text, "unknown-key", key=True)
        missing = [key for key in needed if key not in value]
        for key in missing:
            self.wrong(path, f"{_where(path)} has no {key!r}", "missing-key")
        return not missing

    def sequence(self, value: Any, path: Path) -> list[Any]:
        """``value`` if it is a list, else an empty one and a finding."""
        if isinstance(value, list):
            return value
        self.wrong(path, f"{_where(path)} must be a list, not {_kind(value)}", "wrong-type")
        return []

    def text(self, value: Any, path: Path) -> str:
        """Non-empty text."""
        if isinstance(value, Scalar) and value.strip() and not value.null:
            return str(value)
        self.wrong(path, f"{_where(path)} must be text, not {_kind(value)}", "wrong-type")
        return ""

    def optional_text(self, value: dict[str, Any], key: str, path: Path) -> str | None:
        """The text under ``key`` of a mapping, or None where the key is absent."""
        return self.text(value[key], (*path, key)) if key in value else None

    def texts(self, value: Any, path: Path) -> tuple[str, ...]:
        """A list of texts."""
        items = self.sequence(value, path)
        return tuple(self.text(item, (*path, i)) for i, item in enumerate(items))

    def number(self, value: Any, path: Path, *, above: float | None = None, at_least: float | None = None) -> float:
        """A finite number, within the bounds given; NaN and a finding if it is none."""
        if not (isinstance(value, Scalar) and value.plain and _NUMBER.fullmatch(value)):
            self.wrong(path, f"{_where(path)} must be a plain number, not {_kind(value)}", "wrong-type")
            return math.nan
        number = float(value)
        if not math.isfinite(number):
            self.wrong(path, f"{_where(path)} must be finite", "bad-value")
        elif above is not None and number <= above:
            self.wrong(path, f"{_where(path)} must be greater than {above:g}, not {number:g}", "bad-value")
        elif at_least is not None and number < at_least:
            self.wrong(path, f"{_where(path)} must be at least {at_least:g}, not {number:g}", "bad-value")
        return number

    def row(self, value: Any, path: Path, columns: tuple[str, ...]) -> tuple[float, ...] | None:
        """A list of exactly as many numbers as there are ``columns``, or None and a finding."""
        if not isinstance(value, list) or len(value) != len(columns):
            text = f"{_where(path)} must be a list of {len(columns)}: {', '.join(columns)}"
            self.wrong(path, text, "wrong-type")
            return None
        return tuple(self.number(item, (*path, i)) for i, item in enumerate(value))


def _where(path: Path) -> str:
    if not path:
        return "the card"
    text = ""
    for part in path:
        text += f"[{part + 1}]" if isinstance(part, int) else f".{part}" if text else str(part)
    return f"`{text}`"


def _kind(value: Any) -> str:
    if isinstance(value, Scalar):
        return "nothing" if value.null else f"{str(value)!r}" if value.strip() else "empty text"
    return "a list" if isinstance(value, list) else "a mapping"
