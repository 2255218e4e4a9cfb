"""How wide a text is set: advance widths of the sans-serif the page asks for.

Widths in thousandths of the size for printable ASCII are those of the Helvetica metrics file of the PostScript
core fonts, with which Arial and Liberation Sans agree; from memory. Other signs count as a digit, East Asian wide
ones as a full square.
"""

from __future__ import annotations

import unicodedata

FAMILY = "Liberation Sans, Arial, Helvetica, sans-serif"

_ASCII = (
    278, 278, 355, 556, 556, 889, 667, 191, 333, 333, 389, 584, 278, 333, 278, 278, 556, 556, 556, 556, 556, 556, 556,
    556, 556, 556, 278, 278, 584, 584, 584, 556, 1015, 667, 667, 722, 722, 667, 611, 778, 722, 278, 500, 667, 556, 833,
    722, 778, 667, 778, 722, 667, 611, 722, 667, 944, 667, 667, 611, 278, 278, 278, 469, 556, 333, 556, 556, 500, 556,
    556, 278, 556, 556, 222, 222, 500, 222, 833, 556, 556, 556, 556, 333, 500, 278, 556, 500, 722, 500, 500, 500, 334,
    260, 334, 584,
)  # fmt: skip
_OTHERS = {"\u2212": 584, "→": 1000, "…": 1000, "\u202f": 200, "\u00a0": 278, "°": 400, "³": 333, "²": 333, "·": 278}
_SPARE = 1.16
"""What DejaVu Sans, the usual stand-in where none of the family is installed, is wider; measured on labels."""


def width(text: str, size: float, *, bold: bool = False) -> float:
    """The width of a line of text in the units of ``size``, rather too wide than too narrow."""
    total = 0.0
    for sign in text:
        code = ord(sign)
        if 32 <= code < 127:
            total += _ASCII[code - 32]
        elif sign in _OTHERS:
            total += _OTHERS[sign]
        elif unicodedata.combining(sign):
            continue
        else:
            total += 1000 if unicodedata.east_asian_width(sign) in "WF" else 600
    return total * size * _SPARE * (1.07 if bold else 1.0) / 1000.0


def shortened(text: str, size: float, room: float) -> str:
    """The text, cut with an ellipsis where it is wider than ``room``."""
    if width(text, size) <= room:
        return text
    while text and width(text + "…", size) > room:
        text = text[:-1]
    return text.rstrip() + "…"
