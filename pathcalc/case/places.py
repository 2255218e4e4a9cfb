"""Where in the files stands what an address or the name of a leg means."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pathcalc.case.model import Case

Place = tuple[str, int, int]


def leg_places(case: Case) -> Iterator[tuple[str, Place]]:
    """Name of every leg with the file, line and column it begins at."""
    for leg in case.legs:
        line, column = leg.origin
        yield leg.name, (leg.origin_file, line, column)


def place_of(case: Case, at: str) -> Place | None:
    """File, line and column of what an address or a name of a leg stands for; None where it has none."""
    for limit in case.limits:
        if limit.quantity == at and limit.line:
            file = case.positions.get(("limits",))
            return str(file[0]) if file else "", limit.line, limit.column
    return place_of_result(case, at)


def place_of_result(case: Case, at: str) -> Place | None:
    """As :func:`place_of`, but of the leg or section that a result comes from, not of a limit on it."""
    name = at
    known = dict(leg_places(case))
    while name and name not in known:
        name = name.rpartition(".")[0]
    if name and known[name][1]:
        return known[name]
    for key in ("start", "surroundings", "fluid", "amount", "limits", "legs"):
        if at == key or at.startswith(f"{key}."):
            mark = case.positions.get((key,))
            if mark is not None:
                return str(mark[0]), int(mark[1]), int(mark[2])
    return None
