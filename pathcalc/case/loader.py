"""``load`` and ``loads``: a file or a text to a Case, or every finding."""

from __future__ import annotations

import os
from dataclasses import replace
from pathlib import Path

from pathcalc.case.build import Origin, build
from pathcalc.case.files import Files, find_root
from pathcalc.case.model import Case
from pathcalc.case.yaml_reader import MAX_BYTES, decode, read
from pathcalc.errors import Finding, InvalidCaseError, UsageError

MAX_MESSAGE = 400


def load(path: str | os.PathLike[str], *, root: str | os.PathLike[str] | None = None) -> Case:
    """Case of a file. ``root``: folder that includes may not leave; the enclosing checkout if left out.

    Raises InvalidCaseError with all findings; UsageError where there is no such file, or not under ``root``.
    """
    shown = Path(path)
    file = shown.as_posix()
    if shown.is_dir():
        raise UsageError(f"{file} is a folder; name a file")
    try:
        with shown.open("rb") as stream:
            data = stream.read(MAX_BYTES + 1)
    except (OSError, ValueError) as error:
        raise UsageError(f"{file} cannot be read: {getattr(error, 'strerror', None) or error}") from None
    return load_bytes(data, shown, root=root)


def load_bytes(data: bytes, path: Path, *, root: str | os.PathLike[str] | None = None) -> Case:
    """Case of what a file holds or is going to hold; see :func:`load`."""
    shown, file = path, path.as_posix()
    folder = shown.parent.resolve()
    top = _root(root, folder)
    here = folder / shown.name
    if not here.is_relative_to(top):
        raise UsageError(f"{file} is not under the root folder {Path(root or top).as_posix()}")
    name = here.relative_to(top).with_suffix("").as_posix()
    return _load(data, file, folder, top, name, shown)


def loads(text: str, *, name: str = "-", root: str | os.PathLike[str] | None = None) -> Case:
    """Case of a text, as from standard input; ``name`` stands for the file in findings and for the id.

    Includes are relative to ``root``, by default the current folder. Raises InvalidCaseError, as ``load``.
    """
    folder = Path(root or ".").resolve()
    top = _root(root, folder)
    try:
        data = text.encode("utf-8")
    except UnicodeEncodeError as error:
        line, column = text.count("\n", 0, error.start) + 1, error.start - text.rfind("\n", 0, error.start)
        raise InvalidCaseError([Finding(name, line, column, "the text is not Unicode", "encoding")]) from None
    return _load(data, name, folder, top, "stdin" if name == "-" else name, None)


def _root(root: str | os.PathLike[str] | None, folder: Path) -> Path:
    if root is None:
        return find_root(folder)
    top = Path(root).resolve()
    if not top.is_dir():
        raise UsageError(f"the root {Path(root).as_posix()} is not a folder")
    return top


def _load(data: bytes, file: str, folder: Path, root: Path, name: str, path: Path | None) -> Case:
    findings: list[Finding] = []
    text = decode(data, file, findings)
    tree = read(text, file, findings) if text is not None else None
    case = None
    if tree is not None and text is not None:
        files = Files(root, folder, findings)
        own = (folder / path.name).resolve() if path is not None else folder
        merged = files.merged(tree, file, folder, (own,))
        if not files.incomplete:
            case = build(merged, Origin(name, path, text, data), files, file)
    if findings or case is None:
        findings.sort(key=lambda f: (f.file != file, f.file, f.line, f.column))
        raise InvalidCaseError([replace(f, message=_one_line(f.message)) for f in findings])
    return case


def _one_line(message: str) -> str:
    """A message that quotes a long text is cut in the middle, and never breaks the line."""
    flat = "\\n".join(message.splitlines())
    return flat if len(flat) <= MAX_MESSAGE else f"{flat[: MAX_MESSAGE // 2]} … {flat[-MAX_MESSAGE // 2 :]}"
