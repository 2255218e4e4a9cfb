"""Ends of a machine of constant polytropic efficiency at many pressures, each followed from the nearest one known.

A search for the end pressure asks for the ends of one and the same curve again and again; only the stretch from the
last known state inwards of the pressure asked for is followed anew.
"""

from __future__ import annotations

from copy import copy

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equilibrium.points import Points
from pathcalc.legs.integration.pick import replace_points, take_points
from pathcalc.legs.polytropic_path import follow
from pathcalc.legs.run import LegRun, Place


class Trail:
    """The curve of every lane of a leg; ``efficiency`` (n,)."""

    def __init__(self, run: LegRun, efficiency: Array) -> None:
        self._run, self._efficiency = run, efficiency
        self._known: list[tuple[Array, Points]] = [(np.log(run.inlet.p), run.inlet.points)]

    def end(self, log_p: Array) -> Place:
        """The states at the logarithms of pressure ``log_p`` (n,); NaN where the curve cannot be followed."""
        run = copy(self._run)
        run.inlet = run.place(self._nearest(log_p))
        end = follow(run, np.exp(log_p), self._efficiency, quiet=True).end
        self._known.append((log_p, end.points))
        return end

    def _nearest(self, log_p: Array) -> Points:
        """Of the states known between the inlet and ``log_p`` the one nearest to ``log_p``."""
        start, points = self._known[0]
        wanted, best = log_p - start, np.zeros_like(start)
        for known, found in self._known[1:]:
            at = known - start
            with np.errstate(invalid="ignore"):
                between = (at * wanted > 0.0) & (np.abs(at) <= np.abs(wanted)) & (np.abs(at) > np.abs(best))
            lanes = np.flatnonzero(between & found.ok & np.isfinite(found.v)).astype(np.intp)
            if lanes.size:
                points = replace_points(points, lanes, take_points(found, lanes))
                best[lanes] = at[lanes]
        return points
