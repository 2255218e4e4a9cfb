"""The exergy balance of a path: what it begins with, what heat, work and streams carry, what is destroyed and left.

For one leg, per kilogram (T. J. Kotas, The Exergy Method of Thermal Plant Analysis, 1985, chapter 2):

    e_2 - e_1 = e_q + w_u - T0 s_gen

with the useful work w_u = w in steady flow and w + p0 (v_2 - v_1) for a closed mass, whose surroundings are pushed
back at p0. The exergy of the heat, e_q, is what the balance leaves: q (1 - T0/T_res) where the leg names a reservoir,
else the integral of (1 - T0/T) dq over the fluid's own temperature. Where the amount changes (mixing, separation)
there is neither heat nor work, and the balance leaves the exergy of the stream that joins or parts.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

STREAMS = frozenset({"mixing", "separation"})
_ROUNDING = 1e-9


@dataclass(frozen=True)
class LegExergy:
    """One leg's part, J/kg, or J or W where the case gives an amount. Positive into the fluid."""

    name: str
    heat: float
    work: float
    stream: float
    destroyed: float
    change: float


@dataclass(frozen=True)
class ExergyBalance:
    """start + sum of (heat + work + stream - destroyed) = end. ``total``: of the whole amount, else per kilogram."""

    start: float
    end: float
    legs: tuple[LegExergy, ...]
    total: bool

    def gained(self, key: str) -> float:
        """What legs that take it in get with ``heat``, ``work`` or ``stream``."""
        return sum(max(float(getattr(leg, key)), 0.0) for leg in self.legs)

    def given(self, key: str) -> float:
        """What legs that give it off lose with ``heat``, ``work`` or ``stream``, not negative."""
        return sum(max(-float(getattr(leg, key)), 0.0) for leg in self.legs)

    @property
    def destroyed(self) -> float:
        """The sum over the legs."""
        return sum(leg.destroyed for leg in self.legs)


def balance(result: Mapping[str, Any]) -> ExergyBalance | None:
    """The balance from a results object (contract, section 6).

    None where a state has no exergy (the fluid has no state at the surroundings), or where amounts change along a
    path that gives no amount.
    """
    exergy = {state["name"]: state["exergy"] for state in result["states"]}
    legs = result["legs"]
    first = (result["amount"] or {}).get("value")
    total = first is not None and all(leg["amount"] is not None for leg in legs)
    if any(value is None for value in exergy.values()) or not legs:
        return None
    if not total and any(leg["path"] in STREAMS for leg in legs):
        return None
    needed = [leg[key] for leg in legs for key in ("work", "exergy_destroyed")]
    if any(value is None for value in needed):
        return None
    p0 = 0.0 if result["boundary"] == "flow" else float(result["surroundings"]["p"])
    amount = float(first) if total and first is not None else 1.0
    start = float(exergy[legs[0]["from"]]) * amount
    scale = max(abs(float(e)) for e in exergy.values())
    found = []
    for leg in legs:
        after = float(leg["amount"]) if total else 1.0
        change = float(exergy[leg["to"]]) * after - float(exergy[leg["from"]]) * amount
        destroyed = float(leg["exergy_destroyed"]) * after
        work = (float(leg["work"]) + p0 * float(leg["delta"]["v"])) * after
        size = scale * max(amount, after) + abs(work) + destroyed
        if leg["path"] in STREAMS:
            heat, stream = 0.0, _settled(change - work + destroyed, size)
        else:
            heat, stream = _settled(change - work + destroyed, size), 0.0
        found.append(LegExergy(str(leg["name"]), heat, _settled(work, size), stream, _settled(destroyed, size), change))
        amount = after
    return ExergyBalance(start, float(exergy[legs[-1]["to"]]) * amount, tuple(found), total)


def _settled(value: float, size: float) -> float:
    """Zero for what is only the rounding of a balance."""
    return 0.0 if abs(value) <= _ROUNDING * size else value
