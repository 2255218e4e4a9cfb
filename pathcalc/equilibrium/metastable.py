"""Superheated liquid and subcooled vapour: states that last for a while beyond the saturation line, only when asked."""

from __future__ import annotations

import numpy as np

from pathcalc.equations.contract import Array, Model
from pathcalc.equilibrium import reasons
from pathcalc.equilibrium.fence import fenced
from pathcalc.equilibrium.given_pressure import range_reason
from pathcalc.equilibrium.points import LIQUID, VAPOUR, Draft, Points


def metastable(model: Model, T: Array, p: Array, *, liquid: bool) -> Points:
    """The liquid (or the vapour) at ``T`` (K), ``p`` (Pa), arrays of one shape (n,), stable or not.

    Lanes at or above the critical temperature have no such state (above-critical); beyond the limit of mechanical
    stability, where (∂p/∂v)_T ≥ 0, the reason is no-root. That a state is metastable shows in its pressure: below
    saturation for a liquid, above it for a vapour.
    """
    T, p = (np.atleast_1d(np.asarray(a, dtype=np.float64)) for a in (T, p))
    draft = Draft(T.size)
    reason = range_reason(model, T)
    reason[~((p > 0.0) & (p < np.inf))] = reasons.NOT_A_STATE
    if not model.has_dome:
        reason[reason == 0] = reasons.NO_COEXISTENCE
    else:
        reason[(reason == 0) & (model.T_c <= T)] = reasons.ABOVE_CRITICAL
    go = np.flatnonzero(reason == 0)
    draft.reason[:] = reason
    if go.size:
        with np.errstate(all="ignore"):
            v = model.residual.volume_roots(T[go], p[go])[0 if liquid else 1]
        found = np.where(np.isfinite(v), 0, reasons.NO_ROOT).astype(np.int16)
        draft.put(go, T[go], p[go], v, found)
    points = draft.finish(model)
    points.phase[points.ok] = LIQUID if liquid else VAPOUR
    return fenced(model, points)
