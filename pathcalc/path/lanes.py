"""Values given lane by lane: reading them, holding them to their ranges, marking lanes that do not close."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array
from pathcalc.errors import Trouble, UsageError

if TYPE_CHECKING:
    from pathcalc.legs.run import Status
    from pathcalc.path.solver import SolvedPath

_POSITIVE = frozenset({"amount", "against", "reservoir"})
_OF_A_STATE = frozenset({"T", "p", "v", "rho"})
_FRACTION = frozenset({"efficiency", "polytropic_efficiency"})
_NOT_NEGATIVE = frozenset({"pressure_drop", "superheat", "subcooling"})
OPEN = 1e-9
"""A lane is marked where its closure exceeds its error estimate and this part of the magnitudes along the leg."""


def lane_arrays(lanes: Mapping[str, Any] | None) -> tuple[dict[str, Array], int]:
    """Arrays of one length from what the caller gives, and that length. UsageError for what is no such thing."""
    if not lanes:
        return {}, 1
    arrays: dict[str, Array] = {}
    for address, value in lanes.items():
        try:
            arrays[address] = np.atleast_1d(np.asarray(value, dtype=np.float64))
        except (TypeError, ValueError):
            raise UsageError(f"lane values of {address!r} must be numbers, SI per kilogram") from None
    sizes = {a.size for a in arrays.values()} - {1}
    if len(sizes) > 1 or any(a.ndim != 1 for a in arrays.values()):
        raise UsageError("lane values must be one-dimensional and of one length")
    n = sizes.pop() if sizes else 1
    return {address: np.broadcast_to(a, (n,)).copy() for address, a in arrays.items()}, n


def mark_out_of_range(arrays: Mapping[str, Array], status: Status) -> None:
    """Mark lanes with a value that its field could not have in a case; make it NaN, so that nothing is computed."""
    for address, values in arrays.items():
        bad, range_text = _outside(address, values)
        status.fail(
            bad,
            Trouble(
                "lane-out-of-range",
                address,
                f"a lane value of {address} is not {range_text}",
                "give values that a case could hold",
            ),
        )
        values[bad] = np.nan


def _outside(address: str, values: Array) -> tuple[NDArray[np.bool_], str]:
    place, _, key = address.rpartition(".")
    with np.errstate(invalid="ignore"):
        if key in _FRACTION:
            return ~((values > 0.0) & (values <= 1.0)), "above 0 and at most 1"
        if key == "x":
            return ~((values >= 0.0) & (values <= 1.0)), "between 0 and 1"
        if key in _POSITIVE or (key in _OF_A_STATE and place in ("start", "surroundings")):
            return ~((values > 0.0) & np.isfinite(values)), "a positive number"
        if key in _NOT_NEGATIVE:
            return ~((values >= 0.0) & np.isfinite(values)), "a number that is not negative"
    return ~np.isfinite(values), "a finite number"


def mark_open_lanes(path: SolvedPath) -> None:
    """Mark lanes in which the two routes differ by more than the error estimate: what an ordinary solve reports

    as a failed check is no result in a lane.
    """
    from pathcalc.path.values import closure_of, rounding_of

    for solved in path.legs:
        with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
            error, closure = closure_of(path, solved)
            open_ = (closure > error) & (closure > OPEN)
            if open_.any():
                open_ &= closure > error + rounding_of(path, solved)
        path.setting.status.fail(
            open_,
            Trouble(
                "not-closed",
                solved.leg.name,
                "the integrals along the leg and the state functions disagree",
                "look at the lane as a case of its own, and keep the leg away from the critical point",
            ),
        )
