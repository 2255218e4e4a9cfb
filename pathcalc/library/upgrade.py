"""Bring a case of an older version of the format to this one; comments and layout stay as they are."""

from __future__ import annotations

import re
from dataclasses import dataclass
from pathlib import Path

from pathcalc.case.names import FORMAT_VERSION
from pathcalc.case.nodes import Mapping, Scalar
from pathcalc.case.yaml_reader import MAX_BYTES, decode, read
from pathcalc.errors import Finding, InvalidCaseError, UsageError
from pathcalc.files import write_file
from pathcalc.library.migrations import MIGRATIONS, Edit

CURRENT = int(FORMAT_VERSION)


@dataclass(frozen=True)
class Upgraded:
    """What was done to one file: a finding an edit; none where it is of this version already."""

    file: Path
    text: str | None
    changes: tuple[Finding, ...]


def upgrade(file: Path, root: str | None = None) -> Upgraded:
    """Rewrite a case in place, whole or not at all. Raises InvalidCaseError, the file being as it was, where the case

    is of a newer version, where an edit cannot be made in the text, or where the result would not be valid; UsageError
    where the file cannot be read or written.
    """
    made = upgraded(file)
    if made.text is None:
        return made
    from pathcalc.case.loader import load_bytes

    data = made.text.encode("utf-8")
    load_bytes(data, file, root=root)
    try:
        write_file(file.resolve(), data)
    except OSError as error:
        raise UsageError(f"{file.as_posix()} cannot be written: {error.strerror or error}; it is as it was") from None
    return made


def upgraded(file: Path) -> Upgraded:
    """The text as it would be, nothing written; see :func:`upgrade`."""
    shown = file.as_posix()
    try:
        with file.open("rb") as stream:
            data = stream.read(MAX_BYTES + 1)
    except OSError as error:
        raise UsageError(f"{shown} cannot be read: {error.strerror or error}") from None
    findings: list[Finding] = []
    text = decode(data, shown, findings)
    changes: list[Finding] = []
    while text is not None:
        tree = read(text, shown, findings)
        if tree is None:
            break
        version = _version(tree, findings)
        if version is None or version == CURRENT:
            break
        edits = [*MIGRATIONS[version](tree), Edit(tree["pathcalc"], str(version + 1))]
        text = _applied(text, edits, changes, findings)
    if findings:
        raise InvalidCaseError(findings)
    return Upgraded(file, text if changes else None, tuple(sorted(changes, key=lambda f: (f.line, f.column))))


def _version(tree: Mapping, findings: list[Finding]) -> int | None:
    """Version of the format; None, with a finding, where it is none that can be upgraded."""
    written = tree.get("pathcalc")
    if not isinstance(written, Scalar):
        return None
    if re.fullmatch(r"[0-9]{1,6}", written):
        version = int(written)
        if version == CURRENT or version in MIGRATIONS:
            return version
    from pathcalc.case.build import version_text

    findings.append(Finding(*written.mark, version_text(str(written)), "wrong-version"))
    return None


def _applied(text: str, edits: list[Edit], changes: list[Finding], findings: list[Finding]) -> str | None:
    """The text with all edits made; None, with findings, where one cannot be made."""
    lines = text.split("\n")
    once = {edit.node.mark: edit for edit in edits}  # an alias has the place of its anchor
    for _, edit in sorted(once.items(), reverse=True):
        mark = edit.node.mark
        line, at = lines[mark.line - 1], mark.column - 1
        old = str(edit.node)
        written = next((w for w in (old, f"'{old}'", f'"{old}"') if line.startswith(w, at)), None)
        if written is None:
            findings.append(Finding(*mark, f"{old!r} is to read {edit.new!r}; change it by hand", "wrong-version"))
            return None
        lines[mark.line - 1] = line[:at] + edit.new + line[at + len(written) :]
        changes.append(Finding(*mark, f"{old} -> {edit.new}", "upgraded", "warning"))
    return "\n".join(lines)
