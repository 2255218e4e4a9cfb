"""Reading a case's files: the root that nothing may leave, includes and their merging, the digest."""

from __future__ import annotations

import hashlib
import os
from dataclasses import dataclass, field
from pathlib import Path

from pathcalc.case.nodes import Mapping, Mark, Scalar, Sequence
from pathcalc.case.yaml_reader import MAX_BYTES, decode, read
from pathcalc.errors import Finding

MAX_INCLUDES = 100
_CHECKOUTS = (".git", ".hg", ".svn")


def find_root(folder: Path) -> Path:
    """Enclosing version-control checkout of a folder, else the folder; resolved."""
    resolved = folder.resolve()
    for candidate in (resolved, *resolved.parents):
        if any((candidate / mark).exists() for mark in _CHECKOUTS):
            return candidate
    return resolved


@dataclass
class Files:
    """Everything that is read for one case."""

    root: Path
    folder: Path
    findings: list[Finding]
    texts: list[tuple[str, str]] = field(default_factory=list)
    digest: list[tuple[str, bytes]] = field(default_factory=list)
    folders: dict[str, Path] = field(default_factory=dict)
    reads: int = 0
    incomplete: bool = False
    """An include could not be read: what it would have held is not told as missing."""

    def sha256(self, own: bytes) -> str:
        """Digest of the file's bytes, then of each further file's path and bytes, in order of reading."""
        total = hashlib.sha256(own)
        for name, data in self.digest:
            total.update(b"\0" + name.encode() + b"\0" + data)
        return total.hexdigest()

    def fenced(self, written: Scalar, folder: Path, what: str) -> Path | None:
        """Resolved file of a path as written, or None with a finding where it may not or cannot be read."""
        mark = written.mark
        if "\\" in written or os.path.isabs(written) or "\0" in written:
            text = f"{what} {str(written)!r} must be a relative path with forward slashes"
            self._refuse(mark, text, "include-path")
            return None
        try:
            target = (folder / str(written)).resolve()
        except (OSError, RuntimeError):
            self._refuse(mark, f"{what} {str(written)!r} cannot be followed: a loop of links", "include-missing")
            return None
        if not target.is_relative_to(self.root):
            text = f"{what} {str(written)!r} leads out of the root folder; move the file under it, or set --root"
            self._refuse(mark, text, "include-outside")
            return None
        if not target.exists():
            self._refuse(mark, f"{what} {str(written)!r} does not exist", "include-missing")
            return None
        if not target.is_file():
            self._refuse(mark, f"{what} {str(written)!r} is not a file", "include-missing")
            return None
        return target

    def _refuse(self, mark: Mark, message: str, code: str) -> None:
        self.findings.append(Finding(*mark, message, code))

    def take(self, target: Path, shown: str, mark: Mark) -> str | None:
        """Text of a further file; remembered for the digest and for display."""
        try:
            with target.open("rb") as stream:
                data = stream.read(MAX_BYTES + 1)
        except OSError as error:
            self._refuse(mark, f"{shown} cannot be read: {error.strerror}", "include-missing")
            return None
        name = Path(os.path.relpath(target, self.folder.resolve())).as_posix()
        text = decode(data, shown, self.findings)
        if text is not None and name not in (n for n, _ in self.digest):
            self.digest.append((name, data))
            self.texts.append((name, text))
        return text

    def merged(self, node: Mapping, shown: str, folder: Path, chain: tuple[Path, ...]) -> Mapping:
        """The mapping with all it includes merged under it; later files of a list win over earlier ones."""
        if "include" not in node:
            return node
        written = node["include"]
        items = list(written) if isinstance(written, Sequence) else [written]
        base = Mapping(node.mark)
        for item in items:
            if not isinstance(item, Scalar) or item.null:
                at = getattr(item, "mark", node.keys_at["include"])
                self._refuse(at, "include holds a path, or a list of paths", "wrong-type")
                self.incomplete = True
                continue
            included = self._included(item, shown, folder, chain)
            if included is not None:
                base = merge(base, included)
            else:
                self.incomplete = True
        own = Mapping(node.mark)
        for key, value in node.items():
            if key != "include":
                own.put(key, node.keys_at[key], value)
        return merge(base, own)

    def _included(self, item: Scalar, shown: str, folder: Path, chain: tuple[Path, ...]) -> Mapping | None:
        target = self.fenced(item, folder, "included file")
        if target is None:
            return None
        if target in chain:
            self._refuse(item.mark, f"included file {str(item)!r} includes itself in the end", "include-cycle")
            return None
        if self.reads >= MAX_INCLUDES:
            self._refuse(item.mark, f"more than {MAX_INCLUDES} included files", "include-too-many")
            return None
        display = os.path.normpath(os.path.join(os.path.dirname(shown), str(item)))
        self.reads += 1
        self.folders[display] = target.parent
        text = self.take(target, display, item.mark)
        node = read(text, display, self.findings) if text is not None else None
        if node is None:
            return None
        return self.merged(node, display, target.parent, (*chain, target))


def merge(under: Mapping, over: Mapping) -> Mapping:
    """Mappings merge key by key, ``over`` winning; anything else is replaced whole."""
    result = Mapping(over.mark)
    for key, value in under.items():
        result.put(key, under.keys_at[key], value)
    for key, value in over.items():
        below = result.get(key)
        if isinstance(below, Mapping) and isinstance(value, Mapping):
            value = merge(below, value)
        result.put(key, over.keys_at[key], value)
    return result
