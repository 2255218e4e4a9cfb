"""Which cases of a library lean on a site basis, a card, a published equation or a substance."""

from __future__ import annotations

import os
from dataclasses import dataclass, field
from pathlib import Path

from pathcalc.errors import InvalidCaseError, UsageError
from pathcalc.library.discovery import Found
from pathcalc.library.references import references, substance_of

KINDS = {"include": "basis", "card": "card", "equation": "equation", "substance": "substance"}


@dataclass
class Use:
    """One thing that cases lean on; ``cases`` are their files as shown, in order."""

    kind: str
    name: str
    cases: list[str] = field(default_factory=list)


def uses(found: Found) -> list[Use]:
    """Everything that the cases of a library lean on, by kind and name. Cases need not be valid."""
    kept: dict[Path, bytes | None] = {}

    def bytes_of(path: str) -> bytes | None:
        place = found.root / path
        if place not in kept:
            kept[place] = _bytes(place, found.root)
        return kept[place]

    table: dict[tuple[str, str], Use] = {}
    for case in found.cases:
        inside = Path(os.path.relpath(case.parent.resolve() / case.name, found.root)).as_posix()
        named = references(inside, bytes_of)
        for path, kind in named.items():
            shown = Path(os.path.relpath(found.root / path)).as_posix()
            table.setdefault((kind, shown), Use(KINDS[kind], shown)).cases.append(case.as_posix())
        substance = next((s for p in (inside, *named) if (s := substance_of(bytes_of(p))) is not None), None)
        if substance is not None:
            name = _canonical(substance)
            table.setdefault(("substance", name), Use("substance", name)).cases.append(case.as_posix())
    order = list(KINDS)
    return [table[key] for key in sorted(table, key=lambda k: (order.index(k[0]), k[1]))]


def _bytes(place: Path, root: Path) -> bytes | None:
    from pathcalc.case.yaml_reader import MAX_BYTES

    try:
        if not place.resolve().is_relative_to(root) or not place.is_file() or place.stat().st_size > MAX_BYTES:
            return None
        return place.read_bytes()
    except (OSError, RuntimeError, ValueError):
        return None


def _canonical(substance: str) -> str:
    from pathcalc.substances.catalogue import resolve

    try:
        return resolve(substance)
    except InvalidCaseError:
        return substance


def only(every: list[Use], wanted: str) -> list[Use]:
    """The uses of one file or substance; none if no case leans on it.

    Raises UsageError for what is neither a file nor a substance.
    """
    path = os.path.abspath(wanted)
    files = [use for use in every if use.kind != "substance" and os.path.abspath(use.name) == path]
    if files or os.path.exists(wanted):
        return files
    from pathcalc.substances.catalogue import resolve

    try:
        name = resolve(wanted)
    except InvalidCaseError as error:
        raise UsageError(f"{wanted} is no file, and {error}") from None
    return [use for use in every if use.kind == "substance" and use.name == name]
