"""One solved case against its stored result: what differs, by how much, and what can have done it."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from pathcalc.library.compare import InputChange, difference_of, input_changes, limit_rows, warning_places
from pathcalc.library.inputs import Input
from pathcalc.library.outcome import Miss
from pathcalc.library.quantities import Entry, entries_of
from pathcalc.library.tolerances import Tolerances

NOTHING_KNOWN = "nothing known: inputs, files, cards and versions are those of the stored result"


@dataclass(frozen=True)
class Judgement:
    """``misses`` in the order of the path; ``newly_missed`` are limits that the stored result does not miss."""

    misses: tuple[Miss, ...]
    changes: tuple[str, ...]
    newly_missed: tuple[str, ...]
    still_missed: tuple[str, ...]
    notes: tuple[str, ...]


def judge(
    stored: dict[str, Any], results: dict[str, Any], inputs: Mapping[str, Input], tolerances: Tolerances,
    other_changes: list[str],
) -> Judgement:  # fmt: skip
    """Hold results against the stored ones. ``other_changes``: cards and software that are not what they were."""
    accepted = stored.get("accepted")
    changed = input_changes(accepted["inputs"], inputs) if accepted else []
    order = _Order(results)
    misses: list[Miss] = []
    a, b = entries_of(stored), entries_of(results)
    gone: set[str] = set()
    for address, now in b.items():
        before = a.get(address)
        causes = _causes(changed, other_changes, address, order)
        if before is None:
            owner = order.owner(address, stored)
            if owner not in gone:
                gone.add(owner)
                misses.append(Miss(owner, "absent", "present", "", None, None, "", causes))
            continue
        if difference_of(address, before, now, tolerances) > 1.0:
            misses.append(_miss(address, before, now, tolerances, causes))
    theirs = _Order(stored)
    for address in a:
        if address not in b:
            owner = theirs.owner(address, results)
            if owner not in gone:
                gone.add(owner)
                causes = _causes(changed, other_changes, address, order)
                misses.append(Miss(owner, "present", "absent", "", None, None, "", causes))
    misses += _warnings(stored, results, changed, other_changes, order)
    misses += _checks(stored, results, changed, other_changes)
    limits = _limit_sides(stored, results)
    texts = [_text_of(change) for change in changed]
    return Judgement(
        misses=tuple(misses),
        changes=tuple(dict.fromkeys([*texts, *other_changes])),
        newly_missed=limits[0],
        still_missed=limits[1],
        notes=_notes(stored, tolerances),
    )


class _Order:
    """Where on the path a name stands: 0 is the start, then the legs; what is of the whole comes last."""

    def __init__(self, results: dict[str, Any]) -> None:
        self.places = {state["name"]: i for i, state in enumerate(results["states"])}
        self.last = len(self.places)

    def owner(self, address: str, other: dict[str, Any]) -> str:
        """The state or leg of an address where the other side lacks it whole, else the address itself."""
        name = self.name_in(address)
        if name is not None and not address.startswith("comparison."):
            return address if any(s["name"] == name for s in other["states"]) else name
        if address.startswith("comparison."):
            equation = address.split(".")[1]
            lacks = all(row["equation"] != equation for row in other["comparison"])
            return f"comparison.{equation}" if lacks else address
        return address

    def name_in(self, address: str) -> str | None:
        """The state or leg that an address belongs to."""
        return next((name for name in self.places if address.startswith(f"{name}.")), None)

    def of_result(self, address: str) -> int:
        """Place of a result."""
        if address.startswith("comparison."):
            address = address.split(".", 2)[-1]
        name = self.name_in(address)
        if name is not None:
            return self.places[name]
        return 0 if address.startswith(("fluid.", "surroundings.", "boundary", "amount")) else self.last

    def of_input(self, address: str) -> int | None:
        """Place from which on an input acts; None for one that acts on no result."""
        if address.startswith(("title", "record.", "limits.")):
            return None
        name = self.name_in(address)
        return 0 if name is None or name == "start" else self.places[name]


def _acts(change: InputChange, address: str, order: _Order) -> bool:
    if change.kind == "rewritten":
        return False
    if change.address.startswith("report."):
        return address.startswith("comparison.")
    place = order.of_input(change.address)
    return place is not None and place <= order.of_result(address)


def _causes(changed: list[InputChange], other: list[str], address: str, order: _Order) -> tuple[str, ...]:
    found = [_text_of(change) for change in changed if _acts(change, address, order)]
    return tuple(found + other) or (NOTHING_KNOWN,)


def _text_of(change: InputChange) -> str:
    """``start.T 15 degC (288.15 K) -> 18 degC (291.15 K)``."""
    return f"{change.address} {written(change.old)} -> {written(change.new)}"


def written(value: Input | None) -> str:
    """An input as written, and in SI where that is something else."""
    if value is None:
        return "absent"
    text = str(value["written"])
    if value["value"] is None:
        return text if len(text) <= 60 else f"{text[:57]}..."
    unit = value["unit"]
    return text if not unit or text.endswith(f" {unit}") else f"{text} ({value['value']!r} {unit})"


def _miss(address: str, stored: Entry, now: Entry, tolerances: Tolerances, causes: tuple[str, ...]) -> Miss:
    allowed = tolerances.allowed(address, stored)
    size = difference_of(address, stored, now, tolerances)
    numbers = isinstance(stored.value, int | float) and isinstance(now.value, int | float)
    return Miss(
        address=address,
        stored=stored.value,
        now=now.value,
        unit=stored.unit,
        tolerances=size if math.isfinite(size) else None,
        allowed=allowed.value if numbers else None,
        reason=allowed.rule.reason if allowed.rule is not None else "",
        causes=causes,
    )


def _warnings(
    stored: dict[str, Any], results: dict[str, Any], changed: list[InputChange], other: list[str], order: _Order
) -> list[Miss]:
    a, b = warning_places(stored), warning_places(results)
    rows = [(code, at, "absent", "present") for code, at in b if (code, at) not in a and code != "check-failed"]
    rows += [(code, at, "present", "absent") for code, at in a if (code, at) not in b and code != "check-failed"]
    return [
        Miss(f"warning {code} at {at}" if at else f"warning {code}", was, now, "", None, None, "",
             _causes(changed, other, f"{at.split(', ')[0]}.", order))
        for code, at, was, now in rows
    ]  # fmt: skip


def _checks(
    stored: dict[str, Any], results: dict[str, Any], changed: list[InputChange], other: list[str]
) -> list[Miss]:
    """Checks that the stored result has and that are no longer made; what fails is told on its own."""
    legs = {leg["name"] for leg in results["legs"]} | {"totals"}
    a, b = ({(row["name"], row["at"]) for row in side["checks"]} for side in (stored, results))
    lost = sorted((name, at) for name, at in a - b if at in legs)
    causes = tuple([_text_of(c) for c in changed if c.kind != "rewritten"] + other) or (NOTHING_KNOWN,)
    return [Miss(f"check {name} at {at}", "made", "not made", "", None, None, "", causes) for name, at in lost]


def _limit_sides(stored: dict[str, Any], results: dict[str, Any]) -> tuple[tuple[str, ...], tuple[str, ...]]:
    before = limit_rows(stored)
    missed = [name for name, row in limit_rows(results).items() if not row["passed"]]
    still = tuple(name for name in missed if name in before and not before[name]["passed"])
    return tuple(name for name in missed if name not in still), still


def _notes(stored: dict[str, Any], tolerances: Tolerances) -> tuple[str, ...]:
    notes = [
        f"the tolerance for {rule.pattern or rule.kind!r} of the {rule.origin} is for no result"
        for rule in tolerances.unused
        if rule.origin == "case"
    ]
    if "accepted" not in stored:
        notes.append("the stored result does not say what it came from; accept it to record that")
    return tuple(notes)
