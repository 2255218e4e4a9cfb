"""Where texts go, so that they stand clear of lines and of each other."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import numpy as np
from numpy.typing import NDArray

from pathcalc.report.drawing.lines import Box

Array = NDArray[np.float64]

_CELL = 2.0
DIRECTIONS = np.deg2rad([45, 135, 315, 225, 90, 270, 0, 180, 67, 113, 247, 293])


class Room:
    """What is taken on a sheet: the frame to stay in, dots of lines with their weight, boxes of texts and signs."""

    def __init__(self, frame: Box) -> None:
        self.frame = frame
        self.boxes: list[Box] = []
        columns, rows = (int((frame[i + 2] - frame[i]) / _CELL) + 1 for i in (0, 1))
        self._cells = np.zeros((columns, rows))
        self._sums: Array | None = None

    def ink(self, dots: Array, weight: float) -> None:
        """Lines that texts keep off, the more the heavier they weigh."""
        if len(dots):
            columns, rows = self._cell(dots[:, 0], 0), self._cell(dots[:, 1], 1)
            np.add.at(self._cells, (columns, rows), weight)
            self._sums = None

    def _cell(self, places: Array, axis: int) -> NDArray[np.intp]:
        cells = np.floor((places - self.frame[axis]) / _CELL)
        return cells.clip(0, self._cells.shape[axis] - 1).astype(np.intp)

    def _inked(self, boxes: Array) -> Array:
        """The weight of the lines under each of the boxes (n, 4), from sums over the cells."""
        if self._sums is None:
            self._sums = np.pad(self._cells.cumsum(axis=0).cumsum(axis=1), ((1, 0), (1, 0)))
        x0, y0 = self._cell(boxes[:, 0], 0), self._cell(boxes[:, 1], 1)
        x1, y1 = self._cell(boxes[:, 2], 0) + 1, self._cell(boxes[:, 3], 1) + 1
        total: Array = self._sums[x1, y1] - self._sums[x0, y1] - self._sums[x1, y0] + self._sums[x0, y0]
        return total

    def costs(self, boxes: Array) -> Array:
        """How badly a text in each of the boxes (n, 4) would stand: out of the frame, over texts, over lines."""
        f = self.frame
        low, high = boxes[:, :2], boxes[:, 2:]
        out = np.maximum(np.array(f[:2]) - low, 0.0).sum(axis=1) + np.maximum(high - np.array(f[2:]), 0.0).sum(axis=1)
        total: Array = 100.0 * out + self._inked(boxes)
        if self.boxes:
            taken = np.array(self.boxes)
            shared = np.minimum(high[:, None], taken[None, :, 2:]) - np.maximum(low[:, None], taken[None, :, :2])
            over = (shared > 0.0).all(axis=2)
            total += np.where(over, 30.0 + shared.prod(axis=2), 0.0).sum(axis=1)
        return total

    def settle(self, spots: Sequence[tuple[float, float, float]], width: float, height: float) -> tuple[float, float]:
        """The best of the spots (x, y of the middle, its own cost) for a text of that size; it is taken then.

        Of equally good ones the first.
        """
        table = np.array(spots, dtype=float)
        half = np.array([0.5 * width, 0.5 * height])
        boxes = np.hstack([table[:, :2] - half, table[:, :2] + half])
        k = int(np.argmin(np.round(table[:, 2] + self.costs(boxes), 6)))
        x, y = float(table[k, 0]), float(table[k, 1])
        self.boxes.append(around(x, y, width, height))
        return x, y


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
