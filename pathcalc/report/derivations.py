"""Which worked steps a report shows, under which heading, and where a value links to."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from pathcalc.case.names import STATE_KEYS
from pathcalc.path.steps import StateParts, Step
from pathcalc.report.view import SolutionLike

STATE_SECTION = frozenset(key for key in STATE_KEYS if key not in ("x", "exergy"))
"""Properties shown by the parts of all states together, with one state worked out in full."""


@dataclass(frozen=True)
class Group:
    """Steps towards one or more addresses, and the anchor of their place."""

    addresses: tuple[str, ...]
    steps: tuple[Step, ...]
    anchor: str


class Derivations:
    """Worked steps by state or leg; equal ones are shown once.

    Explanations without numbers put in only name the equation of state: they are left out. What the states are put
    together from stands in a table of its own, to which their values link.
    """

    def __init__(self, solution: SolutionLike, legs: Sequence[str]) -> None:
        self.parts: tuple[StateParts, ...] = tuple(solution.state_parts)
        self._places = {"start": 0, **{name: i for i, name in enumerate(legs, 1)}}
        found: dict[str, dict[tuple[Step, ...], list[str]]] = {}
        self._full = self._state_in_full()
        for address, steps in solution.explanations.items():
            name, _, key = address.partition(".")
            if key in STATE_SECTION and self.parts and not _of_few_terms(key, steps):
                continue
            if any(step.numbers for step in steps):
                found.setdefault(name, {}).setdefault(tuple(steps), []).append(address)
        order = [*self._places, "totals"]
        names = [n for n in order if n in found] + [n for n in found if n not in order]
        self.groups: dict[str, tuple[Group, ...]] = {
            name: tuple(
                Group(tuple(addresses), steps, self._anchor_of(addresses[0]))
                for steps, addresses in found[name].items()
            )
            for name in names
        }
        self._anchors = {a: g.anchor for groups in self.groups.values() for g in groups for a in g.addresses}

    def _anchor_of(self, address: str) -> str:
        name, _, key = address.partition(".")
        place = name if name == "totals" else str(self._places.get(name, len(self._places)))
        return f"why-{place}-{key.replace('.', '-').replace('_', '-')}"

    def state_anchor(self, name: str) -> str:
        """Where the parts of a state stand; empty where they are not shown."""
        if name not in self._places or not any(p.state == name for p in self.parts):
            return ""
        return f"why-state-{self._places[name] + 1}"

    def anchor(self, address: str) -> str:
        """The anchor that shows how the value of an address came about; empty where the report has none."""
        if address in self._anchors:
            return self._anchors[address]
        name, _, key = address.partition(".")
        return self.state_anchor(name) if key in STATE_SECTION and name in self._places else ""

    def _state_in_full(self) -> str:
        """The state that is worked out in full: the first of one phase after the start, else the start."""
        single = [p.state for p in self.parts if not p.wet and p.state in self._places]
        later = [name for name in single if name != "start"]
        return next(iter(later or single), "")

    @property
    def in_full(self) -> str:
        """Name of the state that is worked out in full; empty where there is none of one phase."""
        return self._full


def _of_few_terms(key: str, steps: Sequence[Step]) -> bool:
    """Whether these steps put the state into an equation of two or three terms, which a reader can follow whole."""
    return key == "p" and any("frac{a}" in step.formula or "frac{B}" in step.formula for step in steps)
