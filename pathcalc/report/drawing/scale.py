"""From values to places on the sheet, and the ticks between."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from pathcalc.report.numbers import fixed
from pathcalc.report.numbers import short as written

Array = NDArray[np.float64]

_STEPS = (1.0, 2.0, 2.5, 5.0, 10.0)
_LOG_TICKS = (
    (0.9, (1.0, 1.5, 2.0, 3.0, 4.0, 5.0, 6.0, 8.0)),
    (1.8, (1.0, 2.0, 3.0, 5.0)),
    (3.5, (1.0, 2.0, 5.0)),
    (math.inf, (1.0,)),
)
_NARROW = 0.6
"""Below so many decades a logarithmic axis is ticked as evenly as a linear one."""


@dataclass(frozen=True)
class Scale:
    """One axis: the values at its ends and the places they take (``start`` at ``low``)."""

    low: float
    high: float
    log: bool
    start: float = 0.0
    stop: float = 1.0

    def __call__(self, values: Any) -> Array:
        """Places of values; a value that has no logarithm is NaN."""
        x = np.asarray(values, dtype=float)
        low, high = self.low, self.high
        if self.log:
            with np.errstate(all="ignore"):
                x, low, high = np.where(x > 0.0, np.log10(x), np.nan), math.log10(low), math.log10(high)
        place: Array = self.start + (x - low) / (high - low) * (self.stop - self.start)
        return place

    def on(self, start: float, stop: float) -> Scale:
        """The same axis laid between two other places."""
        return Scale(self.low, self.high, self.log, start, stop)

    @property
    def power(self) -> int:
        """The power of ten that is taken out of the ticks' texts; 0 unless the values are small and evenly ticked."""
        largest = max(abs(self.low), abs(self.high))
        return math.floor(math.log10(largest)) if largest < 0.01 and not self._by_decades else 0

    @property
    def _by_decades(self) -> bool:
        return self.log and math.log10(self.high / self.low) > _NARROW

    def ticks(self, most: int) -> list[tuple[float, str]]:
        """At most so many round values (three at least), each with its text; on long log axes powers of ten."""
        if self._by_decades:
            return [(v, written(v)) for v in self._log_ticks(most)]
        return self._even_ticks(most)

    def _even_ticks(self, most: int) -> list[tuple[float, str]]:
        span = self.high - self.low
        power = math.floor(math.log10(span / most))
        for exponent in (power, power + 1):
            for step in _STEPS:
                size = step * 10.0**exponent
                first, last = math.ceil(self.low / size - 1e-9), math.floor(self.high / size + 1e-9)
                if last - first + 1 <= most:
                    digits = self.power - exponent + (1 if step == 2.5 else 0) - (1 if step == 10.0 else 0)
                    values = [k * size for k in range(first, last + 1)]
                    return [(v, fixed(v / 10.0**self.power, max(0, digits))) for v in values]
        return []

    def _log_ticks(self, most: int) -> list[float]:
        decades = math.log10(self.high / self.low)
        begin = next(i for i, (reach, _) in enumerate(_LOG_TICKS) if decades <= reach)
        low, high = math.floor(math.log10(self.low)), math.ceil(math.log10(self.high))
        found: list[float] = []
        for _, leads in _LOG_TICKS[begin:]:
            found = [lead * 10.0**k for k in range(low, high + 1) for lead in leads]
            found = [v for v in found if self.low <= v <= self.high]
            if len(found) <= most:
                return found
        return found[:: -(-len(found) // most)]


def limits(values: Array, log: bool, margin: float = 0.08) -> tuple[float, float]:
    """Ends of an axis that holds all values with a margin; a single value gets an axis round it."""
    if not values.size:
        return 0.0, 1.0
    low, high = float(values.min()), float(values.max())
    if log:
        gap = max(margin * math.log10(high / low), 0.01)
        return low / 10**gap, high * 10**gap
    gap = margin * (high - low)
    if gap <= 1e-9 * max(abs(low), abs(high)):
        gap = 0.05 * max(abs(low), abs(high), 1e-12)
    return low - gap, high + gap
