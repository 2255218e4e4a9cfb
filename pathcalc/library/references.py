"""Which other files a case names: includes and the user's own card, followed as far as they can be read.

Nothing is validated here: what is wrong with a file is told by loading it.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from pathlib import PurePosixPath
from typing import Any

from pathcalc.case.files import MAX_INCLUDES
from pathcalc.case.nodes import Mapping, Scalar, Sequence
from pathcalc.case.yaml_reader import decode, read

REFERENCE = "reference"


def references(file: str, bytes_of: Callable[[str], bytes | None]) -> dict[str, str]:
    """Every file that a case leans on, by its path, with how it is used: ``include``, ``card`` or ``equation``.

    Paths have forward slashes and are relative to one root; ``bytes_of`` gives a file's bytes, None where there is
    none. What is named but not there is left out, as is what leads above the root.
    """
    found: dict[str, str] = {}
    todo = [file]
    while todo and len(found) <= MAX_INCLUDES + 2:
        here = todo.pop()
        for kind, name in _named(bytes_of(here)):
            path = _joined(here, name)
            if path is None or path in found or path == file or bytes_of(path) is None:
                continue
            found[path] = kind
            if kind == "include":
                todo.append(path)
            else:
                beside = (PurePosixPath(path).parent / REFERENCE / PurePosixPath(path).name).as_posix()
                if bytes_of(beside) is not None:
                    found[beside] = "equation"
    return found


def substance_of(data: bytes | None) -> str | None:
    """The built-in substance that a file names, as written."""
    node = _read(data)
    fluid = node.get("fluid") if node is not None else None
    name = fluid.get("substance") if isinstance(fluid, Mapping) else None
    return str(name) if isinstance(name, Scalar) else None


def _read(data: bytes | None) -> Mapping | None:
    if data is None:
        return None
    findings: list[Any] = []
    text = decode(data, "", findings)
    return read(text, "", findings) if text is not None else None


def _named(data: bytes | None) -> Iterator[tuple[str, str]]:
    node = _read(data)
    if node is None:
        return
    included = node.get("include")
    for item in included if isinstance(included, Sequence) else [included]:
        if isinstance(item, Scalar) and not item.null:
            yield "include", str(item)
    fluid = node.get("fluid")
    card = fluid.get("card") if isinstance(fluid, Mapping) else None
    if isinstance(card, Scalar) and not card.null:
        yield "card", str(card)


def _joined(here: str, name: str) -> str | None:
    """A path as written in a file, from the root; None where it leads out or is no path."""
    if name.startswith("/") or "\\" in name or "\0" in name:
        return None
    parts: list[str] = []
    for part in (*PurePosixPath(here).parent.parts, *name.split("/")):
        if part == "..":
            if not parts:
                return None
            parts.pop()
        elif part not in ("", "."):
            parts.append(part)
    return "/".join(parts) or None
