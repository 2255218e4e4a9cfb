"""A state from two of T, p, v, rho, u, h, s, x, or one of them with a superheat, subcooling or phase."""

from __future__ import annotations

from collections.abc import Callable, Mapping

import numpy as np
from numpy.typing import ArrayLike

from pathcalc.equations.contract import Array, Model
from pathcalc.equilibrium.along_saturation import flash_beside, flash_x
from pathcalc.equilibrium.fence import fenced
from pathcalc.equilibrium.given_calorics import flash_s, flash_uh
from pathcalc.equilibrium.given_pressure import flash_p, flash_Tp
from pathcalc.equilibrium.given_temperature import flash_T
from pathcalc.equilibrium.given_volume import flash_v
from pathcalc.equilibrium.points import Points, joined
from pathcalc.errors import UsageError

BLOCK = 2048
"""Lanes worked on at a time, so that temporaries stay in the processor's cache."""

WIDE_BLOCK = 16384
"""The same for equations that block their terms themselves: the last steps of a few slow lanes are shared."""

KEYS = ("T", "p", "v", "rho", "u", "h", "s", "x", "superheat", "subcooling")


def flash(model: Model, given: Mapping[str, ArrayLike]) -> Points:
    """Equilibrium states of shape (n,) from two quantities, each a scalar or an array of n values.

    Keys and units: T (K), p (Pa), v (m3/mol), rho (mol/m3), u, h (J/mol), s (J/(mol K)), x (vapour quality),
    superheat and subcooling (K, from the saturation temperature at p), or ``phase`` ("saturated-liquid",
    "saturated-vapour"). A lane without a state carries a reason and NaN; it never disturbs another.
    Raises :class:`UsageError` for keys that make no pair.
    """
    pair = dict(given)
    phase = pair.pop("phase", None)
    if phase is not None:
        if phase not in ("saturated-liquid", "saturated-vapour"):
            raise UsageError(f"phase is 'saturated-liquid' or 'saturated-vapour', not {phase!r}")
        pair["x"] = 0.0 if phase == "saturated-liquid" else 1.0
    unknown = [key for key in pair if key not in KEYS]
    if unknown:
        raise UsageError(f"{unknown[0]!r} is no state quantity; one of {', '.join(KEYS)}")
    arrays = {key: np.asarray(value, dtype=np.float64).ravel() for key, value in pair.items()}
    if "rho" in arrays:
        if "v" in arrays:
            raise UsageError("v and rho are the same quantity; give another one with it")
        with np.errstate(divide="ignore"):
            arrays["v"] = 1.0 / arrays.pop("rho")
    if len(arrays) != 2:
        raise UsageError(f"a state needs two quantities, not {len(arrays)}: {', '.join(given) or 'none'}")
    solve, order = _route(frozenset(arrays))
    a, b = (np.ascontiguousarray(x) for x in np.broadcast_arrays(*(arrays[key] for key in order)))
    n = a.size
    with np.errstate(all="ignore"):
        block = BLOCK if model.residual.coexistence is None else WIDE_BLOCK
        parts = [solve(model, a[i : i + block], b[i : i + block]) for i in range(0, max(n, 1), block)]
    return fenced(model, joined(parts))


Solve = Callable[[Model, Array, Array], Points]


def _route(keys: frozenset[str]) -> tuple[Solve, tuple[str, str]]:
    """The solver of a pair and the order in which it takes the two."""
    if keys == {"T", "p"}:
        return flash_Tp, ("T", "p")
    if keys == {"u", "h"}:
        return flash_uh, ("u", "h")
    for first, second in (("superheat", 1.0), ("subcooling", -1.0)):
        if first in keys:
            (other,) = keys - {first}
            if other in ("x", "superheat", "subcooling"):
                break
            return _beside(second, other), (first, other)
    else:
        for first, family in (("x", flash_x), ("T", flash_T), ("p", flash_p), ("v", flash_v), ("s", flash_s)):
            if first in keys:
                (other,) = keys - {first}
                return _with(family, other), (first, other)
    raise UsageError(f"{' and '.join(sorted(keys))} do not make a state")


def _with(family: Callable[[Model, Array, str, Array], Points], key: str) -> Solve:
    return lambda model, first, second: family(model, first, key, second)


def _beside(sign: float, key: str) -> Solve:
    def solve(model: Model, offset: Array, given: Array) -> Points:
        if sign < 0.0 and bool(np.all(offset == 0.0)):
            return flash_x(model, np.zeros_like(offset), key, given)
        return flash_beside(model, sign * offset, key, given)

    return solve
