"""What lies in a library: its cases, stored results whose case is gone, and links that lead out of it."""

from __future__ import annotations

import os
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

from pathcalc.case.discover import begins_as_case
from pathcalc.case.files import find_root
from pathcalc.errors import Finding, UsageError
from pathcalc.library.outcome import Outcome
from pathcalc.library.results_file import ENDING, ResultsError, parse_results, read_bytes

CASE = ".yaml"


@dataclass(frozen=True)
class Found:
    """Cases in the order of their paths; ``outcomes`` of what is no case and has to be told; the top and the root."""

    top: Path
    root: Path
    cases: tuple[Path, ...]
    outcomes: tuple[Outcome, ...]


def discover(path: str, root: str | None = None, *, results: bool = True) -> Found:
    """Everything below a folder, or the one case that ``path`` is. Raises UsageError where nothing is there.

    Links are followed as far as they stay under the root; what leads out of it is told and left out, and a folder
    reached twice is entered once. ``results``: whether to look for stored results without a case.
    """
    top = Path(path)
    if not top.exists():
        raise UsageError(f"{top.as_posix()} does not exist")
    folder = top if top.is_dir() else top.parent
    fence = _root(root, folder)
    if not top.is_dir():
        return Found(top, fence, (top,), ())
    cases: list[Path] = []
    outcomes: list[Outcome] = []
    seen: set[tuple[int, int]] = set()

    def closed(error: OSError) -> None:
        text = f"the folder cannot be read: {error.strerror}"
        outcomes.append(_told(Path(str(error.filename)), text, "unreadable", "unreadable"))

    for here, folders, files in os.walk(top, followlinks=True, onerror=closed):
        try:
            status = os.stat(here)
        except OSError as error:
            closed(error)
            continue
        if (status.st_dev, status.st_ino) in seen:
            folders.clear()
            continue
        seen.add((status.st_dev, status.st_ino))
        folders[:] = [f for f in sorted(folders) if not f.startswith(".") and _stays(Path(here, f), fence, outcomes)]
        names = {name for name in files if not name.startswith(".")}
        for name in sorted(names):
            file = Path(here, name)
            if name.endswith(CASE) and file.is_file() and begins_as_case(file):
                if _stays(file, fence, outcomes):
                    cases.append(file)
            elif results and name.endswith(ENDING):
                outcomes += _orphan(file, names)
    cases.sort(key=lambda p: p.relative_to(top).parts)
    return Found(top, fence, tuple(cases), tuple(outcomes))


def _root(root: str | None, folder: Path) -> Path:
    if root is None:
        return find_root(folder)
    if not Path(root).is_dir():
        raise UsageError(f"the root {Path(root).as_posix()} is not a folder")
    return Path(root).resolve()


def _stays(place: Path, fence: Path, outcomes: list[Outcome]) -> bool:
    """Does a place, followed through links, lie under the root; told where it does not."""
    if not place.is_symlink():
        return True
    try:
        inside = place.resolve().is_relative_to(fence)
    except (OSError, RuntimeError):
        inside = False
    if not inside:
        text = "this link leads out of the root folder and is not followed; move what it leads to, or set --root"
        outcomes.append(_told(place, text, "link-outside", "unreadable"))
    return inside


def _told(place: Path, text: str, code: str, status: str) -> Outcome:
    file = place.as_posix()
    return Outcome(file, status, findings=(Finding(file, 1, 1, text, code),))


def _orphan(file: Path, names: set[str]) -> list[Outcome]:
    """A stored result without its case, told unless it is a result that never was accepted."""
    stem = file.name.removesuffix(ENDING)
    case = f"{stem}{CASE}"
    if case in names and begins_as_case(file.with_name(case)):
        return []
    try:
        if "accepted" not in parse_results(read_bytes(file)):
            return []
    except FileNotFoundError:
        return []
    except ResultsError:
        pass
    why = f"{case} does not begin with the key pathcalc" if case in names else f"there is no {case}"
    text = f"a stored result without its case: {why}; restore the case, or remove the result"
    return [_told(file, text, "case-is-gone", "case is gone")]


def choose(found: Found, names: Sequence[str]) -> Found:
    """The cases that are named: by path, by path below the folder, or by file name without the ending.

    Raises UsageError, with the nearest name, for one that is no case here.
    """
    if not names:
        return found
    by: dict[str, list[Path]] = {}
    base = found.top if found.top.is_dir() else found.top.parent
    for case in found.cases:
        below = case.relative_to(base)
        spellings = {below.as_posix(), below.with_suffix("").as_posix(), case.name, case.stem}
        for spelling in spellings:
            by.setdefault(spelling, []).append(case)
    chosen: set[Path] = set()
    for name in names:
        direct = [case for case in found.cases if _same(case, name)]
        matches = direct or by.get(name, [])
        if not matches:
            import difflib

            near = difflib.get_close_matches(name, by, 1)
            hint = f"did you mean {near[0]!r}?" if near else "name one by its path or its file name"
            raise UsageError(f"no case {name!r} in {found.top.as_posix()}; {hint}")
        if len(matches) > 1:
            places = ", ".join(m.as_posix() for m in matches[:4])
            raise UsageError(f"{name!r} is the name of several cases ({places}); give the path")
        chosen.add(matches[0])
    return Found(found.top, found.root, tuple(c for c in found.cases if c in chosen), ())


def _same(case: Path, name: str) -> bool:
    return os.path.abspath(case) == os.path.abspath(name)
