"""Files as they were in a revision of a git checkout, laid out in a folder of their own with all they lean on."""

from __future__ import annotations

import os
import subprocess
from dataclasses import dataclass
from pathlib import Path

from pathcalc.case.yaml_reader import MAX_BYTES as CASE_BYTES
from pathcalc.errors import UsageError
from pathcalc.library.references import references
from pathcalc.library.results_file import ENDING, MAX_BYTES

GIT_LIMIT = 60.0
MOST_LINKS = 8
LINK = "120000"
"""Mode of a symbolic link in a tree of git."""


@dataclass(frozen=True)
class Revision:
    """``REV:path`` as given, taken apart: the checkout's top, the commit, and the path from the top."""

    given: str
    top: Path
    commit: str
    path: str
    is_folder: bool


def parse_revision(given: str) -> Revision | None:
    """What ``REV:path`` means in the checkout around the current folder; None for what is an ordinary path.

    The path counts from the current folder, as on any command line, and from the top of the checkout where there is
    no such path in the revision. Raises UsageError where git, the checkout, the revision or the path is not there.
    """
    revision, colon, path = given.partition(":")
    if not colon or os.path.lexists(given):
        return None
    if not revision or revision.startswith("-") or not path:
        raise UsageError(f"{given}: neither a file nor a revision and a path, such as HEAD~1:cases/booster.yaml")
    top = Path(
        _git(Path.cwd(), "rev-parse", "--show-toplevel", what=given).decode("utf-8", "surrogateescape").rstrip("\n")
    )
    commit = _git(top, "rev-parse", "--verify", "--quiet", "--end-of-options", f"{revision}^{{commit}}", what=given,
                  why=f"no revision {revision!r} in this checkout").decode().strip()  # fmt: skip
    here = Path(os.path.relpath(Path.cwd().resolve(), top.resolve())).as_posix()
    for base in dict.fromkeys((here, ".")):
        full = os.path.normpath(os.path.join(base, path))
        if full.startswith("..") or os.path.isabs(full):
            continue
        kind = _kind(top, commit, full)
        if kind is not None:
            return Revision(given, top, commit, "" if full == "." else Path(full).as_posix(), kind == "tree")
    raise UsageError(f"{given}: there is no {path} in revision {revision}")


def _kind(top: Path, commit: str, path: str) -> str | None:
    if path == ".":
        return "tree"
    done = _run(top, "cat-file", "-t", f"{commit}:{path}")
    return done.stdout.decode().strip() if done.returncode == 0 else None


def _environment() -> dict[str, str]:
    """Without what a hook sets, which would point at another checkout than the one around the current folder."""
    set_by_hooks = ("GIT_DIR", "GIT_WORK_TREE", "GIT_INDEX_FILE", "GIT_PREFIX", "GIT_COMMON_DIR")
    kept = {name: value for name, value in os.environ.items() if name not in set_by_hooks}
    return {**kept, "GIT_OPTIONAL_LOCKS": "0", "LC_ALL": "C", "GIT_NO_LAZY_FETCH": "1"}


def _run(folder: Path, *arguments: str) -> subprocess.CompletedProcess[bytes]:
    try:
        return subprocess.run(
            ["git", "--no-pager", "-C", str(folder), *arguments],
            stdin=subprocess.DEVNULL,
            capture_output=True,
            env=_environment(),
            timeout=GIT_LIMIT,
            check=False,
        )
    except FileNotFoundError:
        raise UsageError("revisions are read by git, which is not installed here") from None
    except subprocess.TimeoutExpired:
        raise UsageError(f"git took longer than {GIT_LIMIT:g} s") from None


def _git(folder: Path, *arguments: str, what: str, why: str = "") -> bytes:
    done = _run(folder, *arguments)
    if done.returncode != 0:
        said = " ".join(done.stderr.decode("utf-8", "backslashreplace").split())
        raise UsageError(f"{what}: {why or said or 'git failed'}")
    return done.stdout


class Tree:
    """Files of one commit, read when they are asked for, by one git process."""

    def __init__(self, top: Path, commit: str) -> None:
        listing = _git(top, "ls-tree", "-r", "-z", "--full-tree", commit, what=commit)
        self.entries: dict[str, tuple[str, str]] = {}
        for line in listing.split(b"\0"):
            head, _, name = line.partition(b"\t")
            if name:
                mode, kind, digest = head.decode().split()
                if kind == "blob":
                    self.entries[name.decode("utf-8", "surrogateescape")] = mode, digest
        self._git = subprocess.Popen(
            ["git", "--no-pager", "-C", str(top), "cat-file", "--batch"],
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.DEVNULL,
            env=_environment(),
        )
        self._read: dict[str, bytes | None] = {}

    def close(self) -> None:
        """End the git process."""
        self._git.communicate()

    def bytes_of(self, path: str) -> bytes | None:
        """Bytes of a file, symbolic links followed inside the checkout; None if there is none or it is too large."""
        if path not in self._read:
            self._read[path] = self._followed(path, MOST_LINKS)
        return self._read[path]

    def _followed(self, path: str, links: int) -> bytes | None:
        if path not in self.entries or links == 0:
            return None
        mode, digest = self.entries[path]
        data = self._blob(digest, MAX_BYTES if path.endswith(ENDING) else CASE_BYTES)
        if mode != LINK or data is None:
            return data
        target = os.path.normpath(os.path.join(os.path.dirname(path), data.decode("utf-8", "surrogateescape")))
        return None if target.startswith("..") or os.path.isabs(target) else self._followed(target, links - 1)

    def _blob(self, digest: str, most: int) -> bytes | None:
        assert self._git.stdin is not None
        assert self._git.stdout is not None
        self._git.stdin.write(digest.encode() + b"\n")
        self._git.stdin.flush()
        head = self._git.stdout.readline().split()
        if len(head) != 3:
            return None
        left = int(head[2])
        if left <= most:
            data = self._git.stdout.read(left)
            self._git.stdout.read(1)
            return data
        left += 1
        while left:
            left -= len(self._git.stdout.read(min(left, 1 << 20)))
        return None

    def below(self, path: str) -> list[str]:
        """Every YAML and results file below a folder."""
        prefix = f"{path}/" if path else ""
        endings = (".yaml", ".yml", ENDING)
        return sorted(n for n in self.entries if n.startswith(prefix) and n.endswith(endings))


def lay_out(revision: Revision, folder: Path) -> Path:
    """Write what a revision's path needs into an empty folder, as it lay in the checkout; where the path is there.

    Raises UsageError where the file is not to be had (a link out of the checkout, a file too large).
    """
    tree = Tree(revision.top, revision.commit)
    try:
        return _laid_out(revision, folder, tree)
    finally:
        tree.close()


def _laid_out(revision: Revision, folder: Path, tree: Tree) -> Path:
    wanted = tree.below(revision.path) if revision.is_folder else [revision.path]
    if not revision.is_folder and tree.bytes_of(revision.path) is None:
        raise UsageError(f"{revision.given}: not a file that can be read, or too large for a case")
    every = dict.fromkeys(wanted)
    for path in wanted:
        if not path.endswith(ENDING):
            every.update(dict.fromkeys(references(path, tree.bytes_of)))
    for path in every:
        data = tree.bytes_of(path)
        if data is None:
            continue
        place = folder / path
        if not Path(os.path.normpath(place)).is_relative_to(folder):
            continue
        place.parent.mkdir(parents=True, exist_ok=True)
        place.write_bytes(data)
    return folder / revision.path
