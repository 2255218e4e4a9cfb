"""Lines for diagrams: the ways of the legs and the dome, SI per kilogram."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium.saturation import saturation_at_T
from pathcalc.legs.integration.saturation_line import Side, side_of
from pathcalc.legs.integration.segments import Piece
from pathcalc.path.solver import SolvedLeg, SolvedPath
from pathcalc.path.steps import Curve, CurvePiece, Dome
from pathcalc.path.values import piece_phase

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution

POINTS = 41


_NO_STATES = frozenset({"throttling", "free-expansion", "mixing", "separation"})


def curves_of(solution: Solution) -> list[Curve]:
    """One curve a leg, lane 0."""
    return [
        Curve(leg.leg.name, _pieces_of(solution.path, leg), passes_through(leg), len(leg.outcome.segments))
        for leg in solution.path.legs
    ]


def passes_through(solved: SolvedLeg) -> bool:
    """Whether the fluid goes through the states of the leg's line, one after the other.

    It does not where it is far from equilibrium on the way (throttling, expansion into a vacuum, work against a
    constant pressure), where streams part or meet, and where an efficiency tells of the end state alone. The
    polytropic efficiency is defined along the line (a row of small stages), and a pressure drop along a heat
    exchanger is taken to be one.
    """
    leg = solved.leg
    given = (getattr(leg, key, None) for key in ("efficiency", "against"))
    return leg.path not in _NO_STATES and all(item is None for item in given)


def _pieces_of(path: SolvedPath, solved: SolvedLeg) -> tuple[CurvePiece, ...]:
    found = []
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        for piece in solved.integrals.pieces:
            at = np.flatnonzero(piece.lanes == 0)
            if at.size:
                found.append(_curve_piece(path, piece, int(at[0])))
    return tuple(found)


def _curve_piece(path: SolvedPath, piece: Piece, k: int) -> CurvePiece:
    line = _in_dome(path, piece, k) if piece.in_dome else _in_one_phase(path, piece, k)
    M = path.model.M
    T, p, v, s, h, u = line
    return CurvePiece(piece_phase(path, piece, k), T, p, v / M, s / M, h / M, u / M)


def _in_one_phase(path: SolvedPath, piece: Piece, k: int) -> tuple[Array, ...]:
    x = np.linspace(0.0, 1.0, POINTS)[:, None]
    lane = np.array([k], dtype=np.intp)
    nodes = piece.family.nodes(path.model, piece.ends.take(lane), x, piece.local[lane])
    T, v = nodes.T[:, 0], nodes.v[:, 0]
    t = thermal(path.model, T, v)
    return T, t.p, v, t.s, t.h, t.u


def _in_dome(path: SolvedPath, piece: Piece, k: int) -> tuple[Array, ...]:
    ends = piece.ends
    x = np.linspace(0.0, 1.0, POINTS)
    T = ends.T_a[k] + x * (ends.T_b[k] - ends.T_a[k])
    if piece.family.level_in_dome:
        T = np.full(POINTS, ends.T_a[k])
    sat = saturation_at_T(path.model, T)
    liquid, vapour = side_of(path.model, sat, False), side_of(path.model, sat, True)
    if piece.family.level_in_dome:
        v = ends.v_a[k] + x * (ends.v_b[k] - ends.v_a[k])
    else:
        lane = piece.local[np.array([k], dtype=np.intp)]
        low, high = (Side(*(a[:, None] for a in side)) for side in (liquid, vapour))
        v = piece.family.dome_volume(low, high, lane)[:, 0]
    quality = (v - liquid.v) / (vapour.v - liquid.v)

    def mixed(low: Array, high: Array) -> Array:
        return np.asarray((1.0 - quality) * low + quality * high)

    return (
        T,
        sat.p,
        v,
        mixed(liquid.s, vapour.s),
        mixed(liquid.h, vapour.h),
        mixed(liquid.u, vapour.u),
    )


def dome_of(solution: Solution) -> Dome | None:
    """The dome from the triple point to the critical point; None where the equation has none."""
    path = solution.path
    if not path.model.has_dome:
        return None
    line, M = path.setting.boundary.line(), path.model.M
    liquid, vapour = line.liquid, line.vapour
    return Dome(
        liquid.T,
        liquid.p,
        liquid.v / M,
        vapour.v / M,
        liquid.s / M,
        vapour.s / M,
        liquid.h / M,
        vapour.h / M,
        T_c=float(liquid.T[-1]),
        p_c=float(liquid.p[-1]),
        v_c=float(liquid.v[-1] / M),
        s_c=float(liquid.s[-1] / M),
        h_c=float(liquid.h[-1] / M),
    )
