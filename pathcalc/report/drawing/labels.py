"""Where texts go, so that they stand clear of lines and of each other."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from pathcalc.report.drawing.lines import Box

Array = NDArray[np.float64]

DIRECTIONS = np.deg2rad([45, 135, 315, 225, 90, 270, 0, 180, 67, 113, 247, 293])


@dataclass
class Room:
    """What is taken on a sheet: the frame to stay in, dots of lines with their weight, boxes of texts and signs."""

    frame: Box
    boxes: list[Box] = field(default_factory=list)
    _dots: list[tuple[Array, float]] = field(default_factory=list)

    def ink(self, dots: Array, weight: float) -> None:
        """Lines that texts keep off, the more the heavier they weigh."""
        if len(dots):
            self._dots.append((dots, weight))

    def cost(self, box: Box) -> float:
        """How badly a text in the box would stand: out of the frame, over texts, over lines."""
        x0, y0, x1, y1 = box
        f = self.frame
        out = max(0.0, f[0] - x0) + max(0.0, f[1] - y0) + max(0.0, x1 - f[2]) + max(0.0, y1 - f[3])
        total = 100.0 * out
        for a0, b0, a1, b1 in self.boxes:
            wide, high = min(x1, a1) - max(x0, a0), min(y1, b1) - max(y0, b0)
            if wide > 0.0 and high > 0.0:
                total += 30.0 + wide * high
        for dots, weight in self._dots:
            x, y = dots[:, 0], dots[:, 1]
            hit = (x > x0) & (x < x1) & (y > y0) & (y < y1)
            total += weight * float(np.count_nonzero(hit))
        return total

    def settle(self, spots: Iterable[tuple[float, float, float]], width: float, height: float) -> tuple[float, float]:
        """The best of the spots (x, y of the middle, its own cost) for a text of that size; it is taken then."""
        best, least, chosen = (0.0, 0.0), np.inf, None
        for x, y, own in spots:
            box = around(x, y, width, height)
            cost = own + self.cost(box)
            if cost < least - 1e-9:
                best, least, chosen = (x, y), cost, box
                if least <= 0.0:
                    break
        if chosen is not None:
            self.boxes.append(chosen)
        return best


def around(x: float, y: float, width: float, height: float) -> Box:
    """The box of a size round a point."""
    return x - 0.5 * width, y - 0.5 * height, x + 0.5 * width, y + 0.5 * height


def beside(x: float, y: float, width: float, height: float, gaps: Iterable[float]) -> list[tuple[float, float, float]]:
    """Spots round a point for a text of a size, nearest first; farther ones cost more."""
    found = []
    for gap in gaps:
        for k, angle in enumerate(DIRECTIONS):
            dx, dy = float(np.cos(angle)), float(-np.sin(angle))
            found.append((x + dx * (gap + 0.5 * width), y + dy * (gap + 0.5 * height), 0.35 * gap + 0.02 * k))
    return found


def together(spots: list[tuple[int, Array]], apart: float = 7.0) -> list[tuple[list[int], Array]]:
    """States that fall on one place, as one group: their numbers and the place of the first."""
    groups: list[tuple[list[int], Array]] = []
    for number, spot in spots:
        for numbers, centre in groups:
            if np.hypot(*(centre - spot)) < apart:
                numbers.append(number)
                break
        else:
            groups.append(([number], spot))
    return groups
