"""Unit spellings, conversion, and uncertain values."""

from pathcalc.quantities.parse import QuantityError, parse, parse_text
from pathcalc.quantities.units import ATM, UNITS, Unit, convert
from pathcalc.quantities.values import Quantity, Relative

__all__ = ["ATM", "UNITS", "Quantity", "QuantityError", "Relative", "Unit", "convert", "parse", "parse_text"]
