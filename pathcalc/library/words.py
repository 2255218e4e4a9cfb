"""Sentences of a run: numbers in SI, with the digits that tell two of them apart."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from pathcalc.library.outcome import Miss


def number(value: float | str | None) -> str:
    """A value by itself."""
    if value is None:
        return "no value"
    return value if isinstance(value, str) else f"{value:.6g}"


def apart(a: float | str | None, b: float | str | None) -> tuple[str, str]:
    """Two values with as many digits as tell them apart, and one more."""
    if not (isinstance(a, int | float) and isinstance(b, int | float)) or a == b:
        return number(a), number(b)
    for digits in range(6, 17):
        if f"{a:.{digits - 1}g}" != f"{b:.{digits - 1}g}":
            return f"{a:.{digits}g}", f"{b:.{digits}g}"
    return repr(float(a)), repr(float(b))


def count(tolerances: float) -> str:
    """A number of tolerances in words."""
    return f"{tolerances:.3g} tolerances" if tolerances < 1e4 else f"{tolerances:.1e} tolerances".replace("e+0", "e")


def miss_text(miss: Miss) -> str:
    """Quantity, stored, now, difference in tolerances, and what has changed."""
    was, now = apart(miss.stored, miss.now)
    unit = f" {miss.unit}" if miss.unit and isinstance(miss.stored, int | float) else ""
    unit_now = f" {miss.unit}" if miss.unit and isinstance(miss.now, int | float) else ""
    text = f"{miss.address}: stored {was}{unit}, now {now}{unit_now}"
    if miss.tolerances is not None and miss.allowed is not None:
        text += f", {count(miss.tolerances)} of {miss.allowed:.2g}{unit}"
    elif miss.allowed == 0.0:
        text += ", and nothing is allowed"
    return f"{text}; changed: {', '.join(miss.causes)}"


def limit_text(row: dict[str, Any], flow: bool) -> str:
    """A missed limit, in SI."""
    from pathcalc.case.names import RESULT_KINDS
    from pathcalc.library.quantities import kind_at
    from pathcalc.quantities.limits import si_unit

    quantity = row["quantity"]
    kind = kind_at(quantity, flow and quantity.startswith("totals."))
    unit = f" {si_unit(RESULT_KINDS[kind], 'mass')}".rstrip() if kind in RESULT_KINDS else ""
    if row["value"] is None:
        return f"limit missed: {quantity} has no value in this state"
    low = row["min"] is not None and row["value"] < row["min"]
    value, bound = apart(row["value"], row["min"] if low else row["max"])
    return f"limit missed: {quantity} = {value}{unit}, not at {'least' if low else 'most'} {bound}{unit}"
