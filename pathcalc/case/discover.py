"""Which files of a folder are cases."""

from __future__ import annotations

import os
import re
from pathlib import Path

import yaml

from pathcalc.errors import UsageError

_LOADER = getattr(yaml, "CSafeLoader", yaml.SafeLoader)
_HEAD = 65536
_FIRST_KEY = re.compile(r"""(?:[ \t]*(?:[#%][^\n]*|---[ \t]*)?\r?\n)*["']?pathcalc["']?[ \t]*:""")


def find_cases(path: str | os.PathLike[str]) -> list[Path]:
    """Cases at ``path``: the file itself, or every ``*.yaml`` below the folder that begins as a case, sorted.

    Folders reached a second time through a link are not entered again. Raises UsageError if nothing is there.
    """
    top = Path(path)
    if not top.is_dir():
        if not top.exists():
            raise UsageError(f"{top.as_posix()} does not exist")
        return [top]
    found: list[Path] = []
    seen: set[tuple[int, int]] = set()
    for folder, folders, files in os.walk(top, followlinks=True):
        status = os.stat(folder)
        if (status.st_dev, status.st_ino) in seen:
            folders.clear()
            continue
        seen.add((status.st_dev, status.st_ino))
        folders[:] = sorted(f for f in folders if not f.startswith("."))
        for name in files:
            file = Path(folder, name)
            if name.endswith(".yaml") and not name.startswith(".") and file.is_file() and begins_as_case(file):
                found.append(file)
    return sorted(found, key=lambda p: p.relative_to(top).parts)


def begins_as_case(file: Path) -> bool:
    """Is ``pathcalc`` the first key of a file, as far as its head can be read, however long the rest is."""
    try:
        with file.open("rb") as stream:
            text = stream.read(_HEAD).decode("utf-8", errors="replace").removeprefix("\ufeff")
        for event in yaml.parse(text, Loader=_LOADER):
            if isinstance(event, yaml.ScalarEvent):
                return bool(event.value == "pathcalc")
            if isinstance(event, (yaml.SequenceStartEvent, yaml.AliasEvent)):
                return False
    except OSError:
        return False
    except yaml.YAMLError:
        return _FIRST_KEY.match(text) is not None  # a case that is not readable is one all the same, and has to be told
    return False
