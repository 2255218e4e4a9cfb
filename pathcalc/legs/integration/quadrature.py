"""Vectorised adaptive Gauss-Kronrod quadrature with an error estimate per lane.

Rule and error estimate: Piessens, de Doncker-Kapenga, Ueberhuber & Kahaner, QUADPACK (Springer 1983),
7-15 point pair. Nodes and weights are printed there to 33 digits.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array

_HALF_NODES = (
    0.991455371120812639206854697526329,
    0.949107912342758524526189684047851,
    0.864864423359769072789712788640926,
    0.741531185599394439863864773280788,
    0.586087235467691130294144691693132,
    0.405845151377397166906606412076961,
    0.207784955007898467600689403773245,
    0.000000000000000000000000000000000,
)
_HALF_KRONROD = (
    0.022935322010529224963732008058970,
    0.063092092629978553290700663189204,
    0.104790010322250183839876322541518,
    0.140653259715525918745189590510238,
    0.169004726639267902826583426598550,
    0.190350578064785409913256402421014,
    0.204432940075298892414161999234649,
    0.209482141084727828012999174891714,
)
_HALF_GAUSS = (
    0.129484966168869693270611432679082,
    0.279705391489276667901467771423780,
    0.381830050505118944950369775488975,
    0.417959183673469387755102040816327,
)


def _unfold() -> tuple[Array, Array, Array]:
    half = np.array(_HALF_NODES)
    nodes = np.concatenate([-half[:-1], half[::-1]])
    kronrod = np.array(_HALF_KRONROD)
    weights = np.concatenate([kronrod[:-1], kronrod[::-1]])
    gauss = np.zeros(15)
    gauss[1:8:2] = _HALF_GAUSS
    gauss[7:15:2] = _HALF_GAUSS[::-1]
    return (nodes + 1.0) / 2.0, weights / 2.0, gauss / 2.0


NODES, KRONROD_WEIGHTS, GAUSS_WEIGHTS = _unfold()
"""Abscissas on [0, 1], shape (15,), and the weights of the 15-point and the embedded 7-point rule."""

EPS = float(np.finfo(float).eps)
MAX_DEPTH = 40
MAX_PANELS = 48
"""Panels of a lane still open at once beyond which its integrand is taken to be as smooth as rounding lets it be."""


@dataclass(frozen=True)
class Quadrature:
    """Integrals of m quantities over n lanes: value, error bound and the integral of the magnitudes.

    All arrays have shape (m, n); ``converged`` has shape (n,); ``panels`` counts the accepted panels.
    """

    value: Array
    error: Array
    magnitude: Array
    converged: NDArray[np.bool_]
    panels: NDArray[np.intp]


Integrand = Callable[[Array, NDArray[np.intp]], tuple[Array, Array, Array]]


def over_nodes(values: Array) -> Array:
    """Sum over the last axis but one. A single lane is summed in the same order as a lane among many.

    (numpy adds a contiguous column pairwise, but the columns of a wider array one row after the other; a lane
    must not depend on its neighbours to the last bit.)
    """
    if values.shape[-1] == 1:
        total: Array = np.repeat(values, 2, axis=-1).sum(axis=-2)[..., :1]
    else:
        total = values.sum(axis=-2)
    return total


def estimate(kronrod: Array, gauss: Array, spread: Array, magnitude: Array) -> Array:
    """Error of the 15-point value: QUADPACK, qk15: spread * min(1, (200 |K - G|/spread)^1.5), rounding kept."""
    difference = np.abs(kronrod - gauss)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        scaled = spread * np.minimum(1.0, (200.0 * difference / spread) ** 1.5)
    error = np.where((spread > 0.0) & (difference > 0.0), scaled, difference)
    return np.maximum(error, 50.0 * EPS * magnitude)


def integrate(
    integrand: Integrand,
    quantities: int,
    lanes: int,
    floors: Array,
    rtol: float = 1e-11,
    breaks: Array | None = None,
) -> Quadrature:
    """Integrate over [0, 1] in every lane, halving the panels of a lane until its own error is small enough.

    ``integrand(x, lane)`` takes abscissas (15, k) and lane numbers (k,) and returns values, magnitudes and
    inherited errors, each (quantities, 15, k). ``floors`` (quantities, lanes) is the magnitude below which a
    result counts as zero; ``breaks`` (K, lanes), NaN where there is none, are abscissas in (0, 1) that panels must not
    cross. A lane whose integrand is not finite is marked, not raised; where rounding keeps the error
    above ``rtol`` of the magnitude, the error says so.
    """
    value = np.zeros((quantities, lanes))
    error = np.zeros((quantities, lanes))
    magnitude = np.zeros((quantities, lanes))
    converged = np.ones(lanes, dtype=bool)
    panels = np.zeros(lanes, dtype=np.intp)
    lane, left, width = _first_panels(lanes, breaks)
    scale: Array | None = None
    for depth in range(MAX_DEPTH + 1):
        if lane.size == 0:
            break
        x = left + width * NODES[:, None]
        f, size, inherited = integrand(x, lane)
        weights = KRONROD_WEIGHTS[:, None]
        kronrod = over_nodes(weights * f)
        gauss = over_nodes(GAUSS_WEIGHTS[:, None] * f)
        spread = over_nodes(weights * np.abs(f - kronrod[:, None, :])) * width
        amount = over_nodes(weights * size) * width
        bound = estimate(kronrod * width, gauss * width, spread, amount)
        if scale is None:
            total = np.zeros((quantities, lanes))
            for m in range(quantities):
                np.add.at(total[m], lane, amount[m])
            scale = np.maximum(total, floors)
        good = (bound <= rtol * scale[:, lane]).all(axis=0)
        crowded = np.bincount(lane, minlength=lanes)[lane] > MAX_PANELS
        finite = np.isfinite(bound).all(axis=0)
        accept = good | (depth == MAX_DEPTH) | crowded | ~finite
        converged[lane[~finite]] = False
        inherited_sum = over_nodes(weights * inherited) * width
        chosen = lane[accept]
        for m in range(quantities):
            np.add.at(value[m], chosen, (kronrod * width)[m, accept])
            np.add.at(error[m], chosen, (bound + inherited_sum)[m, accept])
            np.add.at(magnitude[m], chosen, amount[m, accept])
        np.add.at(panels, chosen, 1)
        split = ~accept
        lane = np.concatenate([lane[split], lane[split]])
        half = width[split] / 2.0
        left = np.concatenate([left[split], left[split] + half])
        width = np.concatenate([half, half])
    return Quadrature(value, error, magnitude, converged, panels)


def _first_panels(lanes: int, breaks: Array | None) -> tuple[NDArray[np.intp], Array, Array]:
    """Lane, left end and width of the panels to begin with: one a lane, and one more for every break."""
    every = np.arange(lanes, dtype=np.intp)
    if breaks is None:
        return every, np.zeros(lanes), np.ones(lanes)
    row, column = np.nonzero((breaks > 0.0) & (breaks < 1.0))
    lane = np.concatenate([every, column.astype(np.intp)])
    left = np.concatenate([np.zeros(lanes), breaks[row, column]])
    order = np.lexsort((left, lane))
    lane, left = lane[order], left[order]
    right = np.append(left[1:], 1.0)
    right[np.append(lane[1:] != lane[:-1], True)] = 1.0
    return lane, left, right - left
