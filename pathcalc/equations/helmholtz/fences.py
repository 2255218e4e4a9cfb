"""Where a reference equation ends in pressure: its largest pressure and the melting line of its card."""

from __future__ import annotations

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equations.helmholtz.ancillary import melting_pressure, saturated
from pathcalc.substances.reference import Reference


class Fences:
    """The pressure limits of the card ``reference``; see :class:`contract.PressureLimits`."""

    def __init__(self, reference: Reference) -> None:
        self.p_max = reference.limits.p_max
        self._parts = reference.melting
        self._dew = reference.ancillaries.get("dew_pressure")
        self._bubble = reference.ancillaries.get("bubble_pressure")

    def melting_pressure(self, T: Array) -> Array:
        """Melting pressure (Pa) at ``T`` (K), NaN where the card gives none."""
        if not self._parts:
            return np.full(np.shape(T), np.nan)
        return melting_pressure(self._parts, T)

    def dew_and_bubble(self, T: Array) -> tuple[Array, Array] | None:
        """Dew and bubble pressure (Pa) at ``T`` (K) by the card's own equations, NaN above their end; else None."""
        if self._dew is None or self._bubble is None:
            return None
        return saturated(self._dew, T), saturated(self._bubble, T)
