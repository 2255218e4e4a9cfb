"""Temperatures and pressures in running text, in the units of the case (pressures absolute)."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pathcalc.quantities import UNITS, convert

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution

DIGITS = 6
_PRINTED = {"degC": "°C", "degF": "°F", "degR": "°R"}


class Told:
    """Writes SI values for a reader of the case."""

    def __init__(self, solution: Solution) -> None:
        chosen = solution.case.units
        self._T = chosen.get("T", "degC")
        p = chosen.get("p", "bar")
        self._p = p.removesuffix("g") if UNITS[p].gauge else p

    def temperature(self, T: float) -> str:
        """A temperature, from K."""
        return f"{float(convert(T, self._T)):.{DIGITS}g} {_PRINTED.get(self._T, self._T)}"

    def pressure(self, p: float) -> str:
        """A pressure, absolute, from Pa."""
        return f"{float(convert(p, self._p)):.{DIGITS}g} {self._p}"

    def pressure_difference(self, p: float) -> str:
        """A difference of pressures, from Pa, roughly."""
        return f"{float(convert(p, self._p)):.3g} {self._p}"
