"""A results object as a flat list: address -> value, with its kind and the scale it is judged on.

A state and the leg that ends in it share a name, as in ``<state or leg>.<key>``; the kinds are the dimensions of
the format, and ``heat-capacity`` for c_v and c_p.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from pathcalc.case.names import LEG_KEYS, PER_TIME, RESULT_KINDS, STATE_KEYS, TOTAL_KEYS
from pathcalc.quantities.limits import si_unit

_DELTA = {
    "T": "temperature", "p": "pressure", "v": "specific-volume", "u": "specific-energy", "h": "specific-energy",
    "s": "specific-entropy", "a": "specific-energy", "g": "specific-energy",
}  # fmt: skip
_DELTA_TOTAL = {
    "T": "temperature", "p": "pressure", "v": "volume", "u": "energy", "h": "energy", "s": "entropy", "a": "energy",
    "g": "energy",
}  # fmt: skip
_CLOSED_TO_FLOW = {**PER_TIME, "mass": "mass-flow", "volume": "volume-flow"}


@dataclass(frozen=True)
class Entry:
    """One result: a number, None or a text; ``scale`` is the size (SI) below which a difference means nothing.

    ``error`` is the relative error that the result itself states (of an integral), 0 where it states none.
    """

    value: float | str | None
    kind: str
    scale: float = 0.0
    error: float = 0.0

    @property
    def unit(self) -> str:
        """SI unit of the value."""
        return si_unit(RESULT_KINDS[self.kind], "mass") if self.kind in RESULT_KINDS else ""


@dataclass(frozen=True)
class Scales:
    """Natural sizes of one case: R T0/M and R/M per kilogram, largest p, v and amount."""

    energy: float
    entropy: float
    temperature: float
    pressure: float
    volume: float
    amount: float

    @classmethod
    def of(cls, results: dict[str, Any]) -> Scales:
        """From the results themselves."""
        from pathcalc.quantities.units import R_MOLAR

        molar_mass = results["fluid"]["molar_mass"] or 0.03
        T0 = results["surroundings"]["T"] or 298.15
        states = results["states"]
        amounts = [results["amount"]["value"], *(leg["amount"] for leg in results["legs"])]
        return cls(
            energy=R_MOLAR * T0 / molar_mass,
            entropy=R_MOLAR / molar_mass,
            temperature=T0,
            pressure=max((abs(s.get("p") or 0.0) for s in states), default=0.0),
            volume=max((abs(s.get("v") or 0.0) for s in states), default=0.0),
            amount=max((abs(a) for a in amounts if a is not None), default=0.0),
        )

    def for_difference(self, kind: str) -> float:
        """Scale of a change, or of a value whose zero is a convention."""
        return {
            "temperature": self.temperature,
            "pressure": self.pressure,
            "specific-volume": self.volume,
            "specific-energy": self.energy,
            "specific-entropy": self.entropy,
            "energy": self.energy * self.amount,
            "power": self.energy * self.amount,
            "entropy": self.entropy * self.amount,
            "entropy-rate": self.entropy * self.amount,
            "volume": self.volume * self.amount,
            "volume-flow": self.volume * self.amount,
        }.get(kind, 0.0)


def kind_at(address: str, flow: bool) -> str:
    """Kind of the quantity at a public address such as ``first stage.T``; empty where it is no number."""
    name, _, key = address.rpartition(".")
    table = {**STATE_KEYS, **LEG_KEYS, "amount": "mass", "cv": "heat-capacity", "cp": "heat-capacity"}
    if name.endswith(".delta") or name == "delta":
        table = _DELTA_TOTAL if name == "totals.delta" else _DELTA
    elif name == "totals" or name.endswith(".total"):
        table = TOTAL_KEYS
    kind = table.get(key, "")
    return _CLOSED_TO_FLOW.get(kind, kind) if flow else kind


def entries_of(results: dict[str, Any]) -> dict[str, Entry]:
    """Every result of a results object that two solves of one case must share, by address."""
    return dict(_entries(results))


def _entries(results: dict[str, Any]) -> Iterator[tuple[str, Entry]]:
    flow = results["boundary"] == "flow"
    scales = Scales.of(results)
    fluid = results["fluid"]
    for key in ("substance", "equation", "datum"):
        if key in fluid:
            yield f"fluid.{key}", Entry(fluid[key], "text")
    yield "fluid.molar_mass", Entry(fluid["molar_mass"], "molar-mass")
    yield "boundary", Entry(results["boundary"], "text")
    yield "amount", Entry(results["amount"]["value"], "mass-flow" if flow else "mass")
    yield "surroundings.T", Entry(results["surroundings"]["T"], "temperature")
    yield "surroundings.p", Entry(results["surroundings"]["p"], "pressure")
    legs = {leg["name"]: leg for leg in results["legs"]}
    for state in results["states"]:
        yield from _state(state, scales)
        leg = legs.get(state["name"])
        if leg is not None:
            yield from _leg(leg, flow, scales)
    for key, value in results["totals"].items():
        if key == "delta":
            yield from _keys(value, "totals.delta", flow, scales)
        else:
            kind = kind_at(f"totals.{key}", flow)
            yield f"totals.{key}", Entry(value, kind, scales.for_difference(kind))
    for key, value in (results.get("cycle") or {}).items():
        yield f"cycle.{key}", Entry(value, "fraction", 1.0)
    for row in results["comparison"]:
        yield from (
            (f"comparison.{row['equation']}.{address}", _compared(address, value, flow, scales))
            for address, value in row["quantities"].items()
        )


def _state(state: dict[str, Any], scales: Scales) -> Iterator[tuple[str, Entry]]:
    name = state["name"]
    for key, value in state.items():
        if key == "name":
            continue
        if key == "phase":
            yield f"{name}.phase", Entry(value, "text")
            continue
        kind = kind_at(f"{name}.{key}", False)
        if key in ("u", "h", "s", "a", "g", "exergy"):
            scale = scales.for_difference(kind)
        elif key == "x":
            scale = 1.0
        elif key == "expansivity":
            scale = 1.0 / state["T"] if state.get("T") else 0.0
        elif key == "joule_thomson":
            scale = state["v"] / state["cp"] if state.get("v") and state.get("cp") else 0.0
        else:
            scale = 0.0
        yield f"{name}.{key}", Entry(value, kind, scale)


def _leg(leg: dict[str, Any], flow: bool, scales: Scales) -> Iterator[tuple[str, Entry]]:
    name, error = leg["name"], leg["maxwell"]["error"] or 0.0
    for key in ("path", "from", "to"):
        yield f"{name}.{key}", Entry(leg[key], "text")
    yield from _keys(leg["delta"], f"{name}.delta", False, scales, error)
    for key in ("heat", "work", "entropy_generated", "exergy_destroyed"):
        kind = kind_at(f"{name}.{key}", False)
        yield f"{name}.{key}", Entry(leg[key], kind, scales.for_difference(kind), error)
    yield f"{name}.amount", Entry(leg["amount"], "mass-flow" if flow else "mass")
    yield from _keys(leg["total"], f"{name}.total", flow, scales, error)
    integrals = {key[1:]: leg["maxwell"][key] for key in ("ds", "du", "dh")}
    for key, value in integrals.items():
        kind = _DELTA[key]
        yield f"{name}.maxwell.d{key}", Entry(value, kind, scales.for_difference(kind), error)
    for i, piece in enumerate(leg["pieces"], 1):
        yield f"{name}.pieces.{i}.phase", Entry(piece["phase"], "text")
        for key in ("ds", "dh"):
            kind = _DELTA[key[1:]]
            yield f"{name}.pieces.{i}.{key}", Entry(piece[key], kind, scales.for_difference(kind), error)


def _keys(
    values: dict[str, Any], at: str, flow: bool, scales: Scales, error: float = 0.0
) -> Iterator[tuple[str, Entry]]:
    for key, value in values.items():
        kind = kind_at(f"{at}.{key}", flow)
        yield f"{at}.{key}", Entry(value, kind, scales.for_difference(kind), error)


def _compared(address: str, value: Any, flow: bool, scales: Scales) -> Entry:
    total = address.startswith("totals.")
    kind = kind_at(address, flow and total)
    difference = total or ".delta." in address or kind in ("specific-energy", "specific-entropy")
    return Entry(value, kind, scales.for_difference(kind) if difference else 0.0)
