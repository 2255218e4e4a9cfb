"""Where a curve solved as if there were one phase enters the dome.

A state of pressure p and volume v lies inside the dome where v is between the saturated volumes at p. The
saturated volumes are read off the table of the saturation line, and solved for where the table cannot decide.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equilibrium.saturation import NEAR_CRITICAL, saturation_at_p
from pathcalc.legs.integration.families import Lanes
from pathcalc.legs.integration.polytropic_efficiency import Solution
from pathcalc.legs.integration.quadrature import NODES
from pathcalc.legs.integration.saturation_line import SaturationLine

_DOUBT = 0.02
"""Relative distance from a tabled volume within which the volume itself is solved for."""
_NEAR = 0.9
"""Above this part of the critical pressure the table is not trusted."""


@dataclass(frozen=True)
class Entry:
    """Bracket of ln p in which each lane enters (NaN: it does not), from which side, and lanes lost before any."""

    low: Array
    high: Array
    liquid: NDArray[np.bool_]
    lost: NDArray[np.bool_]


def first_entry(model: Model, line: SaturationLine | None, solution: Solution) -> Entry:
    """The first entry of every lane of ``solution`` (unknowns T and v along ln p); none without a ``line``."""
    panels, lanes = solution.values.shape[1], solution.y_a.size
    if line is None:
        none = np.full(lanes, np.nan)
        return Entry(none, none, np.zeros(lanes, dtype=bool), np.zeros(lanes, dtype=bool))
    width = (solution.y_b - solution.y_a) / panels
    y = (solution.y_a + width * (np.arange(panels)[:, None, None] + NODES[:, None])).reshape(-1, lanes)
    v = solution.values[1].reshape(-1, lanes)
    y, v = np.vstack([y, solution.y_b]), np.vstack([v, solution.last[1]])
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        v_l, v_v = _boundary(model, line, y, v)
        inside = (v > v_l) & (v < v_v)
    broken = ~(np.isfinite(v) & (v > 0.0))
    rows = y.shape[0]
    first_inside = np.where(inside.any(axis=0), inside.argmax(axis=0), rows)
    first_broken = np.where(broken.any(axis=0), broken.argmax(axis=0), rows)
    enters = (first_inside < first_broken) & (first_inside < rows)
    lost = ~enters & ((first_broken < rows) | ~solution.converged)
    column = np.arange(lanes)
    at = np.minimum(first_inside, rows - 1)
    before = np.where(at > 0, y[np.maximum(at - 1, 0), column], solution.y_a)
    edge = np.log(model.p_c * (1.0 - 1e-6))
    low = np.where(before > edge, np.maximum(edge, y[at, column]), before)
    with np.errstate(invalid="ignore"):
        liquid = v[at, column] - v_l[at, column] < v_v[at, column] - v[at, column]
        v_before = np.where(at > 0, v[np.maximum(at - 1, 0), column], solution.first_volume)
        liquid = np.where(before > edge, liquid, v_before < model.v_c)
    return Entry(np.where(enters, low, np.nan), np.where(enters, y[at, column], np.nan), enters & liquid, lost)


def _boundary(model: Model, line: SaturationLine, y: Array, v: Array) -> tuple[Array, Array]:
    """Saturated volumes at pressures exp(y); NaN above the critical pressure and below the triple point."""
    log_p = np.log(line.vapour.p)
    v_l, v_v = (
        np.exp(np.interp(y, log_p, np.log(side.v), left=np.nan, right=np.nan)) for side in (line.liquid, line.vapour)
    )
    p = np.exp(y)
    doubt = (np.abs(v / v_l - 1.0) < _DOUBT) | (np.abs(v / v_v - 1.0) < _DOUBT) | (p > _NEAR * model.p_c)
    doubt &= np.isfinite(v_l) & (p < model.p_c * (1.0 - 2.0 * NEAR_CRITICAL)) & (v > 0.0)
    if doubt.any():
        sat = saturation_at_p(model, p[doubt])
        v_l[doubt], v_v[doubt] = sat.v_liquid, sat.v_vapour
    return v_l, v_v


def beyond_boundary(model: Model, solution: Solution, y: Array, liquid: NDArray[np.bool_], lanes: Lanes) -> Array:
    """How far the curve at ``y`` = ln p lies beyond the saturated volume of its side: ln of the ratio."""
    v = solution.at(y[None, :], lanes)[1, 0]
    sat = saturation_at_p(model, np.exp(y))
    with np.errstate(invalid="ignore", divide="ignore"):
        beyond = np.where(liquid, np.log(v / sat.v_liquid), np.log(sat.v_vapour / v))
    return np.where(sat.reason == 0, beyond, np.nan)
