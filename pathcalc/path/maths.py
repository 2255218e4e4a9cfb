"""Numbers and small expressions in LaTeX for the worked calculation.

Formulas use the coherent set K, kPa, m3/kg, kJ/kg, kJ/(kg K): a pocket calculator needs no conversion factors.
"""

from __future__ import annotations

import math

DIGITS = 7
UNITS = {
    "T": r"\mathrm{K}",
    "p": r"\mathrm{kPa}",
    "v": r"\mathrm{m^3/kg}",
    "energy": r"\mathrm{kJ/kg}",
    "entropy": r"\mathrm{kJ/(kg\,K)}",
    "none": "",
}
_SCALE = {"T": 1.0, "p": 1e-3, "v": 1.0, "energy": 1e-3, "entropy": 1e-3, "none": 1.0}


def number(value: float, digits: int = DIGITS) -> str:
    """A number with ``digits`` significant digits, in powers of ten where it is very large or small."""
    if not math.isfinite(value):
        return r"\text{undefined}"
    if value == 0.0:
        return "0"
    if 1e-4 <= abs(value) < 1e7:
        decimals = max(0, digits - 1 - math.floor(math.log10(abs(value))))
        text = f"{value:.{decimals}f}"
        return text.rstrip("0").rstrip(".") if "." in text else text
    mantissa, exponent = f"{value:.{digits - 1}e}".split("e")
    return rf"{mantissa.rstrip('0').rstrip('.')}\times 10^{{{int(exponent)}}}"


def signed(value: float, digits: int = DIGITS) -> str:
    """A number in brackets if it is negative, to stand after a sign."""
    text = number(value, digits)
    return f"({text})" if text.startswith("-") else text


def shown(value: float, kind: str, digits: int = DIGITS) -> str:
    """An SI value in the coherent set, without its unit."""
    return number(value * _SCALE[kind], digits)


def bracketed(value: float, kind: str) -> str:
    """As :func:`shown`, in brackets if negative."""
    return signed(value * _SCALE[kind])


def with_unit(value: float, kind: str, digits: int = DIGITS) -> str:
    """An SI value in the coherent set with its unit."""
    unit = UNITS[kind]
    return shown(value, kind, digits) + (rf"\ {unit}" if unit else "")


def uncertain(value: float, error: float, kind: str) -> str:
    """A value with its integration error (two digits); 0 where the value is within that error."""
    if abs(value) <= error:
        value = 0.0
    return rf"{with_unit(value, kind)}\quad(\text{{integration error}}\le {number(error * _SCALE[kind], 2)})"


_RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


def rough(value: float) -> str:
    """A small number in running text, two digits: 9.6×10⁻⁵."""
    if value == 0.0 or not math.isfinite(value):
        return "0" if value == 0.0 else "undefined"
    mantissa, exponent = f"{value:.1e}".split("e")
    return f"{mantissa}×10{str(int(exponent)).translate(_RAISED)}"
