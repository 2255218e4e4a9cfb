"""Some lanes of points."""

from __future__ import annotations

from dataclasses import fields

from pathcalc.equilibrium.points import Points
from pathcalc.legs.integration.families import Lanes


def take_points(points: Points, lanes: Lanes) -> Points:
    """The given lanes."""
    return Points(**{f.name: getattr(points, f.name)[lanes] for f in fields(Points)})


def replace_points(points: Points, lanes: Lanes, by: Points) -> Points:
    """A copy in which the given lanes are those of ``by``."""
    changed = {}
    for f in fields(Points):
        values = getattr(points, f.name).copy()
        values[lanes] = getattr(by, f.name)
        changed[f.name] = values
    return Points(**changed)
