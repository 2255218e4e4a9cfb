"""A stretch of one family of curves between two states, cut at phase boundaries and integrated piece by piece."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import lru_cache
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.points import Points
from pathcalc.equilibrium.saturation import saturation_at_p, saturation_at_T
from pathcalc.legs.integration.differentials import QUANTITIES, differentials
from pathcalc.legs.integration.families import Ends, Family, HeatedWithDrop, Isochore, Isotherm, Lanes, Polytrope
from pathcalc.legs.integration.kinks import kinks_on
from pathcalc.legs.integration.polytropic_efficiency import end_mismatch
from pathcalc.legs.integration.quadrature import Quadrature, integrate
from pathcalc.legs.integration.saturation_line import Cuts, SaturationLine, Side, sorted_cuts
from pathcalc.legs.integration.two_phase import level_piece, sloping_piece

COUNT = len(QUANTITIES)


@dataclass(frozen=True)
class Piece:
    """One piece of a segment in the lanes that have it: its curve, its ends, where it lies, its integrals.

    ``lanes`` are lanes of the leg, ``local`` the same lanes as the segment's family counts them.
    """

    family: Family
    lanes: Lanes
    local: Lanes
    own: bool
    ends: Ends
    in_dome: bool
    integrals: Quadrature


@dataclass(frozen=True)
class Segment:
    """From ``a`` to ``b`` along ``family`` in some lanes of the leg (all of them where ``lanes`` is None).

    ``own`` is False where the fluid's true way is not known (an irreversible leg) and the segment is part of an
    equivalent reversible way between the same states. ``region`` says that the whole segment is known to lie in
    one phase or in the dome; else it is cut where it meets the boundary.
    """

    family: Family
    a: Points
    b: Points
    own: bool = True
    lanes: Lanes | None = None
    region: Literal["unknown", "one-phase", "dome"] = "unknown"


@dataclass(frozen=True)
class Integrals:
    """Sums over the pieces of a leg, arrays (7, n) in the order of QUANTITIES, and the pieces themselves."""

    value: Array
    error: Array
    magnitude: Array
    converged: NDArray[np.bool_]
    pieces: tuple[Piece, ...]

    def __getitem__(self, name: str) -> Array:
        """One integral by its name, (n,)."""
        row: Array = self.value[QUANTITIES.index(name)]
        return row


class BoundaryOf:
    """The saturation line of a model, worked out on first use."""

    def __init__(self, model: Model) -> None:
        self._model = model
        self._line: SaturationLine | None = None

    def line(self) -> SaturationLine:
        """The table; computed once."""
        if self._line is None:
            self._line = _line_of(self._model)
        return self._line


@lru_cache(maxsize=16)
def _line_of(model: Model) -> SaturationLine:
    return SaturationLine(model)


def integrate_segments(model: Model, boundary: BoundaryOf, segments: list[Segment], lanes: int) -> Integrals:
    """Route 1 over the segments of a leg: every segment cut at the dome, every piece by quadrature."""
    pieces: list[Piece] = []
    for segment in segments:
        pieces.extend(_pieces(model, boundary, segment))
    shape = (COUNT, lanes)
    value, error, magnitude = np.zeros(shape), np.zeros(shape), np.zeros(shape)
    converged = np.ones(lanes, dtype=bool)
    for piece in pieces:
        value[:, piece.lanes] += piece.integrals.value
        error[:, piece.lanes] += piece.integrals.error
        magnitude[:, piece.lanes] += piece.integrals.magnitude
        converged[piece.lanes] &= piece.integrals.converged
    return Integrals(value, error, magnitude, converged, tuple(pieces))


def _ends_of(segment: Segment) -> Ends:
    return Ends(segment.a.T, segment.a.v, segment.b.T, segment.b.v)


def _pieces(model: Model, boundary: BoundaryOf, segment: Segment) -> list[Piece]:
    ends = _ends_of(segment)
    lanes = np.arange(ends.T_a.size, dtype=np.intp)
    at_risk = _may_meet_dome(model, segment)
    if segment.region != "unknown" or not at_risk.any():
        return [_piece(model, segment, ends, lanes, segment.region == "dome")]
    cuts = _level_cuts(model, segment) if segment.family.level_in_dome else _cuts(boundary, segment, ends)
    inside = _starts_inside(model, segment, ends, cuts, at_risk)
    ends = _without_contradictions(segment, ends, cuts, inside)
    pieces: list[Piece] = []
    for j in range(int(cuts.count.max(initial=0)) + 1):
        here = lanes[cuts.count >= j]
        part = _part(ends, cuts, j, here)
        in_dome = inside[here] ^ (j % 2 == 1)
        for dome in (False, True):
            chosen = np.flatnonzero(in_dome == dome)
            if chosen.size:
                pieces.append(_piece(model, segment, part.take(chosen), here[chosen], dome))
    return pieces


_WARM = 1.25
"""Up to this multiple of the critical temperature a lane is looked at where the temperature may dip on the way."""


def _may_meet_dome(model: Model, segment: Segment) -> NDArray[np.bool_]:
    """Lanes of which at least a part may lie below the critical temperature."""
    if not model.has_dome:
        return np.zeros(segment.a.T.shape, dtype=bool)
    steady = not isinstance(segment.family, Polytrope | HeatedWithDrop) or segment.family.level_in_dome
    return np.minimum(segment.a.T, segment.b.T) < model.T_c * (1.0 if steady else _WARM)


def _progress(segment: Segment, side: Side, lane: Lanes) -> Array:
    a, b, here = _coordinates(segment, side)
    with np.errstate(divide="ignore", invalid="ignore"):
        along: Array = (here - a[lane]) / (b[lane] - a[lane])
    return along


def _cuts(boundary: BoundaryOf, segment: Segment, ends: Ends) -> Cuts:
    def progress(side: Side, lane: Lanes) -> Array:
        return _progress(segment, side, lane)

    family = segment.family
    return boundary.line().cuts(ends.T_a.size, family.mismatch, progress, family.dome_volume, _parity(segment))


def _level_cuts(model: Model, segment: Segment) -> Cuts:
    """Isotherms and isobars meet the boundary at one saturation state, both sides of it."""
    a = segment.a
    by_T = isinstance(segment.family, Isotherm)
    sat = saturation_at_T(model, a.T) if by_T else saturation_at_p(model, a.p)
    lanes = np.flatnonzero(sat.reason == 0).astype(np.intp)
    found = []
    for vapour in (False, True):
        v = sat.v_vapour if vapour else sat.v_liquid
        none = np.full(lanes.size, np.nan)
        side = Side(sat.T[lanes], sat.p[lanes], v[lanes], none, none, none, sat.dp_dT[lanes])
        along = _progress(segment, side, lanes)
        keep = np.isfinite(along)
        found.append((lanes[keep], along[keep], Side(*(x[keep] for x in side)), vapour))
    return sorted_cuts(a.T.size, found, _parity(segment))


def _coordinates(segment: Segment, side: Side) -> tuple[Array, Array, Array]:
    if segment.family.coordinate == "T":
        return segment.a.T, segment.b.T, side.T
    if segment.family.coordinate == "p":
        return segment.a.p, segment.b.p, side.p
    return np.log(segment.a.v), np.log(segment.b.v), np.log(side.v)


def _starts_inside(
    model: Model, segment: Segment, ends: Ends, cuts: Cuts, at_risk: NDArray[np.bool_]
) -> NDArray[np.bool_]:
    """Whether the first piece of each lane lies in the dome."""

    inside_a, outside_a = _sure(segment.a)
    inside_b, outside_b = _sure(segment.b)
    odd = cuts.count % 2 == 1
    unknown = ~inside_a & ~outside_a
    from_b = unknown & (inside_b | outside_b)
    inside = np.where(from_b, inside_b ^ odd, inside_a)
    unknown &= ~from_b & at_risk
    if unknown.any():
        lanes = np.flatnonzero(unknown).astype(np.intp)
        first = _part(ends, cuts, 0, lanes)
        middle = flash(model, segment.family.middle(model, first, lanes))
        inside[lanes] = ~np.isnan(middle.x)
    result: NDArray[np.bool_] = inside & at_risk
    return result


def _sure(points: Points) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Which lanes lie inside the dome, and which outside: neither, where the state is saturated."""
    return (points.x > 0.0) & (points.x < 1.0), np.isnan(points.x)


def _parity(segment: Segment) -> NDArray[np.int8]:
    """Whether the number of cuts is odd (1), even (0), or not known beforehand (-1)."""
    (inside_a, outside_a), (inside_b, outside_b) = _sure(segment.a), _sure(segment.b)
    known = (inside_a | outside_a) & (inside_b | outside_b)
    return np.where(known, (inside_a != inside_b).astype(np.int8), np.int8(-1)).astype(np.int8)


def _without_contradictions(segment: Segment, ends: Ends, cuts: Cuts, inside: NDArray[np.bool_]) -> Ends:
    """NaN ends in lanes whose cuts do not lead from the phase of the start to that of the end.

    Then a cut lies where there is no saturation (below the triple point): the path leaves the range in between.
    """
    inside_a, outside_a = _sure(segment.a)
    inside_b, outside_b = _sure(segment.b)
    ends_inside = inside ^ (cuts.count % 2 == 1)
    wrong = (inside_a & ~inside) | (outside_a & inside) | (inside_b & ~ends_inside) | (outside_b & ends_inside)
    if not wrong.any():
        return ends
    return ends._replace(T_b=np.where(wrong, np.nan, ends.T_b), v_b=np.where(wrong, np.nan, ends.v_b))


def _part(ends: Ends, cuts: Cuts, j: int, lanes: Lanes) -> Ends:
    """The ends of piece ``j`` of the given lanes."""
    T_a, v_a = ends.T_a[lanes], ends.v_a[lanes]
    T_b, v_b = ends.T_b[lanes], ends.v_b[lanes]
    if j > 0:
        T_a, v_a = cuts.T[j - 1, lanes], cuts.v[j - 1, lanes]
    if j < cuts.T.shape[0]:
        more = cuts.count[lanes] > j
        T_b = np.where(more, cuts.T[j, lanes], T_b)
        v_b = np.where(more, cuts.v[j, lanes], v_b)
    return Ends(T_a, v_a, T_b, v_b)


def _floors(model: Model, ends: Ends) -> Array:
    """Below these magnitudes an integral counts as zero: 1e-6 of R, of R T."""
    energy = 1e-6 * model.R * ends.T_a
    entropy = np.full_like(energy, 1e-6 * model.R)
    return np.stack([entropy, energy, energy, energy, energy, energy, entropy])


def _piece(model: Model, segment: Segment, ends: Ends, local: Lanes, in_dome: bool) -> Piece:
    family = segment.family

    def integrand(x: Array, k: NDArray[np.intp]) -> tuple[Array, Array, Array]:
        return differentials(model, family.nodes(model, ends.take(k), x, local[k]))

    if not in_dome:
        breaks = kinks_on(model, family, ends, local)
        total = integrate(integrand, COUNT, local.size, _floors(model, ends), breaks=breaks)
        if not isinstance(family, Isotherm | Isochore):
            total = replace(total, error=total.error + end_mismatch(model, family, ends, local))
    elif family.level_in_dome:
        total = level_piece(model, ends)
    else:
        total = sloping_piece(model, family, ends, local, _floors(model, ends))
    lanes = local if segment.lanes is None else segment.lanes[local]
    return Piece(family, lanes, local, segment.own, ends, in_dome, total)
