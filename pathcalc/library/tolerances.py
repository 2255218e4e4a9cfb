"""How far a result may be from the stored one.

By default |now - stored| <= relative * max(|stored|, scale), the scale being the natural size of a change where the
zero of a quantity is a convention or a cancellation (R T0/M for energies, R/M for entropies, by amount for totals).
The defaults are ours (common practice, no source): another release of the numerical libraries, or other vector
instructions, move results of this program in the last two digits (measured: 2e-14 at most, of a margin), and an
iteration may stop a step sooner; 1e-9 is above both and far below what any input is known to. Second derivatives
(heat capacities and what follows from them) are ten times as sensitive. An integral may also be as far off as the
error that it states itself.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fnmatch import fnmatchcase
from typing import TYPE_CHECKING

from pathcalc.case.names import RESULT_KINDS
from pathcalc.library.quantities import Entry
from pathcalc.quantities.parse import difference_of

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pathcalc.case.sections import Tolerance

RELATIVE = 1e-9
RELATIVE_DERIVATIVE = 1e-8
DERIVATIVES = frozenset({"heat-capacity", "speed", "expansivity", "compressibility", "joule-thomson"})


@dataclass(frozen=True)
class Rule:
    """One tolerance that is not the default; numbers in SI, None where the default stays."""

    pattern: str | None
    kind: str | None
    relative: float | None
    absolute: float | None
    dimension: str | None
    reason: str
    origin: str
    """Where it is written: ``case`` or the name of the settings file."""

    @classmethod
    def of(cls, given: Tolerance, origin: str) -> Rule:
        """From the block of a case or a settings file."""
        q = given.absolute
        return cls(
            pattern=given.quantity,
            kind=given.kind,
            relative=None if given.relative is None else given.relative.value,
            absolute=None if q is None else q.value,
            dimension=None if q is None else q.dimension,
            reason=given.reason,
            origin=origin,
        )

    def matches(self, address: str, entry: Entry) -> bool:
        """Does it speak of this result."""
        if entry.kind not in RESULT_KINDS:
            return False
        if self.dimension is not None and self.dimension != difference_of(RESULT_KINDS[entry.kind]):
            return False
        return entry.kind == self.kind if self.pattern is None else fnmatchcase(address, self.pattern)


@dataclass(frozen=True)
class Allowed:
    """The difference (SI) that one result may have, and the rule that says so, None for the default."""

    value: float
    rule: Rule | None


class Tolerances:
    """The tolerances of one case: its own rules win over those of the library, later ones over earlier ones."""

    def __init__(self, rules: Iterable[Rule] = ()) -> None:
        self.rules = tuple(rules)
        self.used: set[Rule] = set()

    def allowed(self, address: str, stored: Entry) -> Allowed:
        """What the stored result at an address allows."""
        value = stored.value if isinstance(stored.value, int | float) else 0.0
        relative = RELATIVE_DERIVATIVE if stored.kind in DERIVATIVES else RELATIVE
        floor, chosen = 0.0, None
        for rule in self.rules:
            if rule.matches(address, stored):
                self.used.add(rule)
                chosen = rule
        if chosen is not None:
            relative = relative if chosen.relative is None else chosen.relative
            floor = chosen.absolute or 0.0
        relative = max(relative, stored.error)
        return Allowed(max(relative * max(abs(value), stored.scale), floor), chosen)

    @property
    def unused(self) -> list[Rule]:
        """Rules that no result was judged by or could have been."""
        return [rule for rule in self.rules if rule not in self.used]


def in_tolerances(difference: float, allowed: float) -> float:
    """The size of a difference, counted in tolerances; infinite where nothing is allowed."""
    if difference == 0.0:
        return 0.0
    return abs(difference) / allowed if allowed > 0.0 else math.inf
