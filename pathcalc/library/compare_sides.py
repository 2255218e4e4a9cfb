"""What ``pathcalc compare`` is given: cases, results files, folders of either, and revisions of a git checkout."""

from __future__ import annotations

import contextlib
import os
import tempfile
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any

from pathcalc.errors import Finding, InvalidCaseError, UsageError
from pathcalc.library.compare import (
    Comparison,
    Snapshot,
    compare_snapshots,
    snapshot_of_case,
    snapshot_of_results,
    snapshot_of_solution,
)
from pathcalc.library.results_file import ENDING, ResultsError, read_results
from pathcalc.library.revisions import lay_out, parse_revision

if TYPE_CHECKING:
    from pathcalc.case.model import Case
    from pathcalc.path.solution import Solution

JSON = ".json"


@dataclass(frozen=True)
class Side:
    """One of the two things given: as it was given, where it lies now, and the folder that stands for the checkout."""

    given: str
    place: Path
    laid_out: Path | None = None

    def shown(self, file: Path) -> str:
        """A file of this side as the user knows it."""
        if self.laid_out is None:
            return file.as_posix()
        revision = self.given.partition(":")[0]
        return f"{revision}:{Path(os.path.relpath(file, self.laid_out)).as_posix()}"


@dataclass(frozen=True)
class Pair:
    """Two cases of one name, compared; ``trouble`` holds what is wrong with a side that cannot be compared."""

    name: str
    comparison: Comparison | None
    trouble: tuple[Finding, ...] = ()
    code: int = 0
    only: str = ""
    """``old`` or ``new`` where only that side has a case of this name."""
    unchanged: bool = False
    """Both cases are the same to the last byte, with all that they include: neither was solved."""


@contextlib.contextmanager
def sides(given: tuple[str, str]) -> Iterator[tuple[Side, Side]]:
    """Both sides; revisions lie in temporary folders until the end. Raises UsageError for what is not there."""
    with contextlib.ExitStack() as stack:
        found = []
        for text in given:
            revision = parse_revision(text)
            if revision is None:
                if not Path(text).exists():
                    raise UsageError(f"{text} does not exist")
                found.append(Side(text, Path(text)))
                continue
            folder = Path(stack.enter_context(tempfile.TemporaryDirectory(prefix="pathcalc-"))).resolve()
            place = lay_out(revision, folder)
            if not place.exists():
                raise UsageError(f"{text}: no case in this folder of the revision")
            found.append(Side(text, place, folder))
        yield found[0], found[1]


def changes_since(earlier: str, solution: Solution, root: str | None) -> dict[str, Any]:
    """What differs between ``earlier`` (a case, a results file, or a revision of one) and a solved case.

    Plain values, as :meth:`Comparison.to_dict` gives them. Raises UsageError where ``earlier`` is not there or cannot
    be read, InvalidCaseError where it is no valid case.
    """
    with sides((earlier, earlier)) as (old, _):
        if old.place.is_dir():
            raise UsageError(f"{earlier} is a folder; name one case or results file")
        try:
            before = _snapshot(old.shown(old.place), _load(old, old.place, _root_for(old.place, root)))
        except ResultsError as error:
            raise UsageError(f"{earlier}: {error}") from error
        return compare_snapshots(before, snapshot_of_solution(solution)).to_dict()


def _root_for(place: Path, root: str | None) -> str | None:
    """The root given, where the file lies under it; else the file's own."""
    if root is None or place.resolve().is_relative_to(Path(root).resolve()):
        return root
    return None


def compared(old: Side, new: Side, root: str | None, exact: bool, done: Callable[[int, int], None]) -> list[Pair]:
    """The pairs of cases of both sides, compared, in the order of their names.

    Two files are one pair whatever they are called. Raises UsageError where a file is compared with a folder.
    """
    folders = old.place.is_dir(), new.place.is_dir()
    if folders[0] != folders[1]:
        if folders[0]:
            raise UsageError(f"{old.given} is a folder and {new.given} is not; compare two files, or two folders")
        raise UsageError(f"{new.given} is a folder and {old.given} is not; compare two files, or two folders")
    if not folders[0]:
        return [_pair(new.given, (old, old.place), (new, new.place), root, exact)]
    a, b = _files(old), _files(new)
    names = sorted({*a, *b}, key=lambda n: Path(n).parts)
    if not names:
        raise UsageError(f"no case in {old.given} nor in {new.given}")
    pairs = []
    for count, name in enumerate(names, 1):
        if name in a and name in b:
            pairs.append(_pair(name, (old, a[name]), (new, b[name]), root, exact))
        else:
            pairs.append(Pair(name, None, only="old" if name in a else "new"))
        done(count, len(names))
    return pairs


def _files(side: Side) -> dict[str, Path]:
    """Cases of a folder by their path without the ending; of a folder without cases its results files."""
    from pathcalc.library.discovery import discover

    found = discover(str(side.place), None if side.laid_out is None else str(side.laid_out))
    cases = {case.relative_to(side.place).with_suffix("").as_posix(): case for case in found.cases}
    if cases:
        return cases
    files = sorted(p for p in side.place.rglob(f"*{ENDING}") if p.is_file())
    return {p.relative_to(side.place).as_posix().removesuffix(ENDING): p for p in files}


def _pair(name: str, old: tuple[Side, Path], new: tuple[Side, Path], root: str | None, exact: bool) -> Pair:
    loaded: list[Case | dict[str, Any]] = []
    trouble: list[Finding] = []
    code = 0
    for side, file in (old, new):
        try:
            loaded.append(_load(side, file, root))
        except InvalidCaseError as error:
            trouble += [replace(f, file=_as_shown(side, f.file)) for f in error.findings]
            code = max(code, error.exit_code)
        except (UsageError, ResultsError) as error:
            trouble.append(Finding(side.shown(file), 1, 1, str(error), "unreadable"))
            code = max(code, 2)
    if trouble:
        return Pair(name, None, tuple(trouble), code)
    first, second = loaded
    if not isinstance(first, dict) and not isinstance(second, dict) and first.sha256 == second.sha256:
        return Pair(name, None, unchanged=True)
    try:
        a, b = (_snapshot(side.shown(file), it) for (side, file), it in zip((old, new), loaded, strict=True))
    except InvalidCaseError as error:
        return Pair(name, None, tuple(error.findings), error.exit_code)
    code = 4 if a.results is None or b.results is None else 0
    return Pair(name, compare_snapshots(a, b, exact=exact), code=code)


def _load(side: Side, file: Path, root: str | None) -> Case | dict[str, Any]:
    if file.name.endswith(JSON):
        return read_results(file)
    from pathcalc.case.loader import load

    return load(file, root=root if side.laid_out is None else side.laid_out)


def _snapshot(label: str, loaded: Case | dict[str, Any]) -> Snapshot:
    return snapshot_of_results(loaded, label) if isinstance(loaded, dict) else snapshot_of_case(loaded, label)


def _as_shown(side: Side, file: str) -> str:
    if side.laid_out is None or not os.path.isabs(file):
        return file
    return side.shown(Path(file))
