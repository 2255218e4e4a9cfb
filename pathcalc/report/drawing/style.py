"""Inks, dashes, sizes: what every drawing has in common."""

from __future__ import annotations

from dataclasses import dataclass

WIDTH = 480.0
"""Width of every drawing in its own units."""
SMALLEST = 13.0
"""Size of the smallest text in the same units: 13 / 480 of 85 mm is 6.5 points."""
STATE_SIZE = 14.0

COLOURS = ("#1f4e8c", "#b3471d", "#0f7a6c", "#7a3b86", "#6f6212", "#4a5560")
"""Six inks, at least 4.5 to 1 against white, apart in lightness and in the red–green dimension."""
DASHES = ("", "9 3.5", "2.6 2.6", "11 3 2.6 3", "6 2.4 1.6 2.4 1.6 2.4")
"""With six inks thirty different lines; numbers on the lines tell them apart in print."""
OTHER_DASHES = ("7 3", "3.5 2.2", "11 2.5 2 2.5", "7 2 2 2 2 2")
"""For the paths of other equations."""

INK, SOFT, GRID, DOME, ISO, OTHER = "#1c242c", "#4d5965", "#e3e7ea", "#5b6670", "#9aa4ad", "#39434c"
PAPER = "#ffffff"
HEAT, WORK = "#b3471d", "#1f4e8c"

LEG_WIDTH = 2.0
OPEN_WIDTH, OPEN_CORE = 4.2, 2.2
BAND_WIDTH, BAND_OPACITY = 9.0, 0.24


@dataclass(frozen=True)
class Stroke:
    """How the line of one leg is drawn."""

    colour: str
    dash: str


def of_leg(i: int) -> Stroke:
    """The stroke of leg ``i``, counted from 0."""
    return Stroke(COLOURS[i % len(COLOURS)], DASHES[i % len(DASHES)])
