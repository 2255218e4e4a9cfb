"""Where a reference equation ends in pressure: its largest pressure and the melting line of its card."""

from __future__ import annotations

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equations.helmholtz.ancillary import melting_pressure
from pathcalc.substances.reference import Reference


class Fences:
    """The pressure limits of the card ``reference``; see :class:`contract.PressureLimits`."""

    def __init__(self, reference: Reference) -> None:
        self.p_max = reference.limits.p_max
        self._parts = reference.melting

    def melting_pressure(self, T: Array) -> Array:
        """Melting pressure (Pa) at ``T`` (K), NaN where the card gives none."""
        if not self._parts:
            return np.full(np.shape(T), np.nan)
        return melting_pressure(self._parts, T)
