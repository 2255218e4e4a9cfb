"""The words of the reports, as this room uses them; they stand in :mod:`pathcalc.words`."""

from __future__ import annotations

from pathcalc.words import SYMBOLS, WORDS, say

__all__ = ["SYMBOLS", "WORDS", "say"]
