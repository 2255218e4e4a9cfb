"""The integrals of a leg as sums that a person can do with a pocket calculator.

Route 1 is quadrature over many points. The same integrand at a few equally spaced points, summed by Simpson's
rule, shows a reader where the number comes from without a program; how near it comes is said beside it. A stretch
in the dome at constant temperature is Clapeyron's product.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equilibrium.saturation import saturation_at_T
from pathcalc.legs.integration.differentials import isochoric_heat_capacity
from pathcalc.path.steps import HandSum
from pathcalc.path.values import piece_phase

if TYPE_CHECKING:
    from pathcalc.legs.integration.segments import Piece
    from pathcalc.path.solver import SolvedLeg, SolvedPath

POINTS = (5, 9, 17)
"""Points tried in turn until the sum is as near as ``NEAR``; the last is kept."""
NEAR = 1e-3
MOST_PIECES = 6
"""Legs cut into more pieces than this are left to the program."""


def hand_sums(path: SolvedPath, solved: SolvedLeg) -> tuple[HandSum, ...]:
    """A sum for every stretch of the leg in which entropy changes (lane 0); none for a leg of many pieces."""
    pieces = [piece for piece in solved.integrals.pieces if np.any(piece.lanes == 0)]
    if len(pieces) > MOST_PIECES:
        return ()
    found: list[HandSum] = []
    for piece in pieces:
        k = int(np.flatnonzero(piece.lanes == 0)[0])
        ds = float(piece.integrals.value[0, k])
        size = float(piece.integrals.magnitude[0, k])
        if size < 1e-9 * path.model.R or abs(ds) <= 1e-10 * size:  # along an isentrope there is nothing to add
            continue
        if not piece.in_dome:
            found.append(_in_one_phase(path, solved, piece, k, ds, len(found) + 1))
        elif piece.family.level_in_dome:
            T, v_a, v_b = (float(a[k]) for a in (piece.ends.T_a, piece.ends.v_a, piece.ends.v_b))
            found.append(_clapeyron(path, solved, len(found) + 1, T, v_a, v_b))
        else:
            found += _sloping(path, solved, piece, k, ds, len(found) + 1)
    return tuple(found)


def _clapeyron(path: SolvedPath, solved: SolvedLeg, number: int, T: float, v_a: float, v_b: float) -> HandSum:
    """From one volume to another at constant temperature inside the dome or at its edge."""
    M = path.model.M
    sat = saturation_at_T(path.model, np.array([T]))
    slope, p = float(sat.dp_dT[0]) * 1e-3, float(sat.p[0]) * 1e-3
    product = slope * (v_b - v_a) / M
    return HandSum(solved.leg.name, number, "two-phase", (), product, product, (T, slope, v_a / M, v_b / M, p))


def _sloping(path: SolvedPath, solved: SolvedLeg, piece: Piece, k: int, ds: float, number: int) -> list[HandSum]:
    """The way of :func:`pathcalc.legs.integration.two_phase.sloping_piece`: to the boundary, along it, and back."""
    model, M, name = path.model, path.model.M, solved.leg.name
    T_a, v_a, T_b, v_b = (float(a[k]) for a in piece.ends)
    first, last = (saturation_at_T(model, np.array([T])) for T in (T_a, T_b))
    vapour = (v_a - float(first.v_liquid[0])) / float((first.v_vapour - first.v_liquid)[0]) > 0.5
    near_a, near_b = (float((sat.v_vapour if vapour else sat.v_liquid)[0]) for sat in (first, last))
    found: list[HandSum] = []
    if abs(near_a / v_a - 1.0) > 1e-12:
        found.append(_clapeyron(path, solved, number, T_a, v_a, near_a))
    back = _clapeyron(path, solved, number, T_b, near_b, v_b)
    along = ds / M * 1e-3 - back.quadrature - sum(item.quadrature for item in found)
    rows: tuple[tuple[float, ...], ...] = ()
    for points in POINTS:
        rows = _boundary_rows(path, T_a, T_b, vapour, points)
        if abs(simpson([row[-1] for row in rows]) - along) <= NEAR * abs(along):
            break
    phase = "saturated-vapour" if vapour else "saturated-liquid"
    found.append(HandSum(name, number + len(found), phase, rows, simpson([row[-1] for row in rows]), along))
    if abs(near_b / v_b - 1.0) > 1e-12:
        found.append(replace(back, number=number + len(found)))
    return found


def _boundary_rows(
    path: SolvedPath, T_a: float, T_b: float, vapour: bool, points: int
) -> tuple[tuple[float, ...], ...]:
    """Points along the saturation line; x is linear in the root of T_c - T, in which volumes are smooth."""
    model = path.model
    x = np.linspace(0.0, 1.0, points)
    root_a, root_b = (np.sqrt(max(model.T_c - T, 0.0)) for T in (T_a, T_b))
    root = root_a + x * (root_b - root_a)
    T = model.T_c - root * root
    sat = saturation_at_T(model, T)
    v = sat.v_vapour if vapour else sat.v_liquid
    terms = model.residual.pressure(T, v)
    dT = -2.0 * root * (root_b - root_a)
    dv = (sat.dp_dT - terms.p_T) / terms.p_v * dT
    return _table(path, x, T, v, dT, dv)


def _in_one_phase(path: SolvedPath, solved: SolvedLeg, piece: Piece, k: int, ds: float, number: int) -> HandSum:
    M = path.model.M
    best: HandSum | None = None
    for points in POINTS:
        rows = _rows(path, piece, k, points)
        total = simpson([row[-1] for row in rows])
        best = HandSum(solved.leg.name, number, piece_phase(path, piece, k), rows, total, ds / M * 1e-3)
        scale = float(piece.integrals.magnitude[0, k]) / M * 1e-3
        if abs(best.simpson - best.quadrature) <= NEAR * scale:
            break
    assert best is not None
    return best


Integrand = Callable[[float, float, float, float], float]
"""From T (K), p (kPa), ds/dξ (kJ/(kg K)) and dv/dξ (m3/kg) to an energy over dξ (kJ/kg)."""


def T_ds(T: float, p: float, ds: float, dv: float) -> float:
    """T ds."""
    return T * ds


def p_dv(T: float, p: float, ds: float, dv: float) -> float:
    """p dv."""
    return p * dv


def values_of(item: HandSum, integrand: Integrand) -> list[float]:
    """The integrand at the points of a stretch; of a two-phase one the product itself, alone."""
    if item.clapeyron is not None:
        T, slope, v_a, v_b, p = item.clapeyron
        return [integrand(T, p, slope * (v_b - v_a), v_b - v_a)]
    return [integrand(row[1], row[2], row[-1], row[7]) for row in item.rows]


def total_of(values: list[float]) -> float:
    """Simpson's rule over the values of a stretch; a value alone is the total."""
    return values[0] if len(values) == 1 else simpson(values)


def simpson(values: list[float]) -> float:
    """Simpson's rule over [0, 1] for an odd number of equally spaced values."""
    ends, odd, even = values[0] + values[-1], sum(values[1:-1:2]), sum(values[2:-1:2])
    return (ends + 4.0 * odd + 2.0 * even) / (3.0 * (len(values) - 1))


def _rows(path: SolvedPath, piece: Piece, k: int, points: int) -> tuple[tuple[float, ...], ...]:
    model = path.model
    x = np.linspace(0.0, 1.0, points)
    lane = np.array([k], dtype=np.intp)
    with np.errstate(all="ignore"):
        nodes = piece.family.nodes(model, piece.ends.take(lane), x[:, None], piece.local[lane])
        T, v, dT, dv = (np.broadcast_to(a, (points, 1))[:, 0] for a in nodes)
        return _table(path, x, T, v, dT, dv)


def _table(path: SolvedPath, x: Array, T: Array, v: Array, dT: Array, dv: Array) -> tuple[tuple[float, ...], ...]:
    model, M = path.model, path.model.M
    terms = model.residual.pressure(T, v)
    cv = isochoric_heat_capacity(model, T, v)[0] / M * 1e-3
    slope = terms.p_T * 1e-3
    volume, rate = v / M, dv / M
    integrand = cv / T * dT + slope * rate
    table = np.column_stack([x, T, terms.p * 1e-3, volume, cv, slope, dT, rate, integrand])
    return tuple(tuple(float(number) for number in row) for row in table)
