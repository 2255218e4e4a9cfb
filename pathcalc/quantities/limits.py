"""What a value of each dimension can be at most: the check that catches slips of unit and of exponent.

The bounds are ours, wide on purpose: common practice, no source.
"""

from __future__ import annotations

SI_UNIT = {
    "pressure": "Pa", "pressure-difference": "Pa", "temperature": "K", "temperature-difference": "K",
    "energy": "J", "power": "W", "mass": "kg", "mole": "mol", "volume": "m3", "mass-flow": "kg/s",
    "mole-flow": "mol/s", "volume-flow": "m3/s", "time": "s", "speed": "m/s", "molar-mass": "kg/mol",
    "third-virial": "m6/mol2", "entropy": "J/K", "entropy-rate": "W/K", "expansivity": "1/K",
    "compressibility": "1/Pa", "joule-thomson": "K/Pa", "fraction": "",
}  # fmt: skip
_PER = {
    "specific-energy": "J/{}",
    "specific-entropy": "J/({} K)",
    "specific-volume": "m3/{}",
    "density": "{}/m3",
}

# dimension -> (lowest, highest) in SI
_BOUNDS = {
    "temperature": (0.0, 1e4),
    "temperature-difference": (-1e4, 1e4),
    "pressure": (0.0, 1e10),
    "pressure-difference": (-1e10, 1e10),
    "density": (0.0, 1e5),
    "specific-volume": (0.0, 1e15),
    "specific-energy": (-1e10, 1e10),
    "specific-entropy": (-1e8, 1e8),
    "mass": (0.0, 1e15),
    "mole": (0.0, 1e18),
    "volume": (0.0, 1e15),
    "mass-flow": (0.0, 1e9),
    "mole-flow": (0.0, 1e12),
}
POSITIVE = frozenset(d for d, (low, _) in _BOUNDS.items() if low == 0.0)


def si_unit(dimension: str, per: str | None) -> str:
    """SI unit of a dimension, ``per`` "mass" or "mole" for specific quantities."""
    if dimension in _PER:
        return _PER[dimension].format("mol" if per == "mole" else "kg")
    return SI_UNIT.get(dimension, "")


def implausible(value: float, dimension: str, per: str | None) -> str | None:
    """Why a value in SI cannot be meant, or None."""
    low, high = _BOUNDS.get(dimension, (-float("inf"), float("inf")))
    if per == "mole" and dimension == "density":
        high *= 1e3
    shown = f"read as {value:.6g} {si_unit(dimension, per)}".rstrip()
    if low == 0.0 and value <= 0.0:
        if dimension == "temperature":
            return f"{shown}: a temperature is above 0 K"
        if dimension == "pressure":
            return f"{shown} absolute: an absolute pressure is above 0"
        return f"{shown}: must be above 0"
    if value > high or value < low:
        edge = high if value > high else low
        return f"{shown}: beyond {edge:g} {si_unit(dimension, per)}, check the number and its unit"
    return None
