"""Text to Case: strict loading with places, schema, quantities, includes, messages."""

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
