"""Text to Case: strict loading with places, schema, quantities, includes, messages."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from pathcalc.case.discover import find_cases
    from pathcalc.case.leg_model import LegModel, OneOf
    from pathcalc.case.loader import load, loads
    from pathcalc.case.model import Case, CaseSurroundings
    from pathcalc.case.sections import Fluid, HeatCapacity, Limit, Record, Report, Virial

__all__ = [
    "Case",
    "CaseSurroundings",
    "Fluid",
    "HeatCapacity",
    "LegModel",
    "Limit",
    "OneOf",
    "Record",
    "Report",
    "Virial",
    "find_cases",
    "load",
    "loads",
]

_HOMES = {
    "find_cases": "discover",
    "LegModel": "leg_model",
    "OneOf": "leg_model",
    "load": "loader",
    "loads": "loader",
    "Case": "model",
    "CaseSurroundings": "model",
    **dict.fromkeys(("Fluid", "HeatCapacity", "Limit", "Record", "Report", "Virial"), "sections"),
}


def __getattr__(name: str) -> Any:
    """Import what is asked for when it is asked for: finding cases needs no schema."""
    if name in _HOMES:
        from importlib import import_module

        return getattr(import_module(f"pathcalc.case.{_HOMES[name]}"), name)
    raise AttributeError(f"module 'pathcalc.case' has no attribute {name!r}")
