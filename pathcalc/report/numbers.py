"""Numbers as a reader wants them: fixed or significant digits, grouped thousands, aligned decimals.

Text uses the true minus sign (U+2212), a narrow no-break space (U+202F) between groups of three digits
(ISO 80000-1:2022, 7.3.1) and superscript digits for powers of ten, so that it stands in HTML and in
Markdown alike.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

MINUS = "\u2212"
THIN = "\u202f"
ABSENT = "\u2013"
SIGNIFICANT_DIGITS = 6
_SMALLEST_POWER = -4
_LARGE = 1e9
SUPERSCRIPTS = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


@dataclass(frozen=True)
class Number:
    """A formatted number; ``pad`` is what has to follow it to line its decimal point up."""

    text: str
    pad: str = ""


def magnitude(x: float, digits: int = SIGNIFICANT_DIGITS) -> int:
    """The power of ten of ``x`` once rounded to ``digits`` significant digits; 0 for zero."""
    if x == 0 or not math.isfinite(x):
        return 0
    return int(f"{x:.{digits - 1}e}".rsplit("e", 1)[1])


def _group(plain: str) -> str:
    sign, body = ("-", plain[1:]) if plain.startswith("-") else ("", plain)
    whole, point, fraction = body.partition(".")
    groups: list[str] = []
    while len(whole) > 3:
        groups.insert(0, whole[-3:])
        whole = whole[:-3]
    groups.insert(0, whole)
    if not (whole + "".join(groups) + fraction).strip("0"):
        sign = ""
    return (MINUS if sign else "") + THIN.join(groups) + point + fraction


def _special(x: float | None) -> str | None:
    if x is None or math.isnan(x):
        return ABSENT
    if math.isinf(x):
        return "∞" if x > 0 else MINUS + "∞"
    return None


def fixed(x: float | None, decimals: int) -> str:
    """``x`` with so many decimals; past 10⁹ in scientific form. Never a negative zero."""
    special = _special(x)
    if special is not None or x is None:
        return special or ABSENT
    if abs(x) >= _LARGE:
        return scientific(x, SIGNIFICANT_DIGITS)
    return _group(f"{x:.{max(0, decimals)}f}")


def significant(x: float | None, digits: int = SIGNIFICANT_DIGITS) -> str:
    """``x`` to so many significant digits; in scientific form below 10⁻⁴ or past 10⁹."""
    special = _special(x)
    if special is not None or x is None:
        return special or ABSENT
    if x == 0:
        return "0"
    power = magnitude(x, digits)
    if power < _SMALLEST_POWER or abs(x) >= _LARGE:
        return scientific(x, digits)
    return _group(f"{x:.{max(0, digits - 1 - power)}f}")


def short(x: float | None, digits: int = SIGNIFICANT_DIGITS) -> str:
    """Like :func:`significant` without trailing zeros after the point: for single values in sentences."""
    text = significant(x, digits)
    if "×" in text:
        head, tail = text.split("×")
        return (head.rstrip("0").rstrip(".") if "." in head else head) + "×" + tail
    return text.rstrip("0").rstrip(".") if "." in text else text


def scientific(x: float | None, digits: int = 2) -> str:
    """``x`` as a mantissa of so many digits and a power of ten; errors have two (JCGM 100, 7.2.6)."""
    special = _special(x)
    if special is not None or x is None:
        return special or ABSENT
    if x == 0:
        return "0"
    mantissa, exponent = f"{x:.{digits - 1}e}".split("e")
    return mantissa.replace("-", MINUS) + "×10" + str(int(exponent)).translate(SUPERSCRIPTS)


def ten_to(exponent: int) -> str:
    """A power of ten, such as 10⁻³."""
    return "10" + str(exponent).translate(SUPERSCRIPTS)


def common_decimals(values: Iterable[float | None], digits: int = SIGNIFICANT_DIGITS) -> int:
    """Decimals that show the largest of ``values`` to ``digits`` significant digits, at most six.

    Used for quantities that are added and subtracted by hand (h, s, heat, work): one number of decimals
    for the whole document, so that every difference can be checked with what is printed.
    """
    finite = [abs(v) for v in values if v is not None and math.isfinite(v)]
    largest = max(finite, default=0.0)
    if largest == 0:
        return 3
    return min(6, max(0, digits - 1 - magnitude(largest, digits)))


def decimals_within(error: float) -> int:
    """Decimals of which the last is not smaller than ``error``; none at all for an error of one and more."""
    return max(0, math.floor(-math.log10(error))) if error > 0.0 else 6


def align(texts: Iterable[str]) -> list[Number]:
    """Give each text the invisible tail that lines its decimal point up with the others of the column."""
    items = list(texts)
    tails = [_tail(t) for t in items]
    longest = max((len(t) for t in tails if t is not None), default=0)
    out = []
    for text, tail in zip(items, tails, strict=True):
        if tail is None or not longest:
            out.append(Number(text))
        else:
            out.append(Number(text, ("." + "0" * (longest - 1))[len(tail) :]))
    return out


def _tail(text: str) -> str | None:
    if "×" in text or "\u00a0" in text or not any(c.isdigit() for c in text):
        return None
    _, point, fraction = text.partition(".")
    return point + fraction
