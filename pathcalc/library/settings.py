"""The settings file of a library: tolerances with their reasons, the time limit of a case, the number of workers."""

from __future__ import annotations

import os
from dataclasses import dataclass, field
from fnmatch import fnmatchcase
from pathlib import Path
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from pathcalc.case.model import Case
    from pathcalc.library.tolerances import Rule, Tolerances

NAME = "pathcalc-library.yaml"
VERSION = "1"
TIME_LIMIT = 60.0
"""Seconds a case may take where nothing else is said."""


@dataclass(frozen=True)
class Settings:
    """What the settings file says; without a file, the defaults."""

    file: str = ""
    time_limit: float = TIME_LIMIT
    jobs: int | None = None
    rules: tuple[tuple[str, Rule], ...] = field(default=())
    """Patterns of case ids, relative to the settings file's folder, with their rules."""


def find_settings(folder: Path, root: Path) -> Path | None:
    """The settings file in a folder, or in the nearest one above it, not above ``root``."""
    here = folder.resolve()
    for candidate in (here, *here.parents):
        file = candidate / NAME
        if file.is_file():
            return file
        if candidate == root or not candidate.is_relative_to(root):
            return None
    return None


def read_settings(file: Path) -> Settings:
    """Settings of a file. Raises InvalidCaseError with every finding, UsageError where it cannot be read."""
    from pathcalc.case.nodes import Mapping, Scalar
    from pathcalc.case.translate import Findings
    from pathcalc.case.yaml_reader import MAX_BYTES, decode, read
    from pathcalc.errors import Finding, InvalidCaseError, UsageError
    from pathcalc.library.settings_model import SettingsModel
    from pathcalc.library.tolerances import Rule

    shown = _shown(file)
    try:
        with file.open("rb") as stream:
            data = stream.read(MAX_BYTES + 1)
    except OSError as error:
        raise UsageError(f"{shown} cannot be read: {error.strerror or error}") from None
    found: list[Finding] = []
    text = decode(data, shown, found)
    node = read(text, shown, found) if text is not None else None
    model = None
    if node is not None:
        out: Any = Findings(shown, found)
        kept = Mapping(node.mark)
        for key, value in node.items():
            if key.startswith("x-"):
                continue
            if isinstance(value, Scalar) and value.null:
                out.found.append(Finding(*node.keys_at[key], f"{key!r} has no value", "empty-value"))
                out.emptied.add((key,))
            else:
                kept.put(key, node.keys_at[key], value)
        out.root = kept
        if kept.get("library", VERSION) != VERSION:
            out.add(("library",), f"version of the settings is not known; write {VERSION}", "wrong-version")
        else:
            model = out.validate(SettingsModel, kept, (), {"sources": None}, "the settings file")
    if found or model is None:
        raise InvalidCaseError(found)
    return Settings(
        file=shown,
        time_limit=TIME_LIMIT if model.time_limit is None else model.time_limit.value,
        jobs=model.jobs,
        rules=tuple((given.cases or "*", Rule.of(given, NAME)) for given in model.tolerances or ()),
    )


def tolerances_for(case: Case, file: Path, settings: Settings) -> Tolerances:
    """Tolerances of one case: those of the settings that are for it, then its own."""
    from pathcalc.library.tolerances import Rule, Tolerances

    rules = [rule for pattern, rule in settings.rules if _applies(pattern, file, settings)]
    rules += [Rule.of(given, "case") for given in case.record.tolerances or ()]
    return Tolerances(rules)


def _applies(pattern: str, file: Path, settings: Settings) -> bool:
    if pattern == "*":
        return True
    base = Path(settings.file).resolve().parent
    name = Path(os.path.relpath(file.resolve(), base)).with_suffix("").as_posix()
    return fnmatchcase(name, pattern)


def _shown(file: Path) -> str:
    try:
        return Path(os.path.relpath(file)).as_posix()
    except (OSError, ValueError):
        return file.as_posix()
