"""State diagrams and bar charts as small, deterministic SVG with text that stays text.

The drawings are written element by element: no drawing library, no plotting state, no fonts, no clock. Coordinates
are rounded to a tenth of a unit, a drawing is :data:`WIDTH` units wide, and no text is smaller than
:data:`SMALLEST`, which is 6.6 points where the drawing is 85 mm wide.
"""

from __future__ import annotations

from pathcalc.report.drawing.style import SMALLEST, WIDTH

__all__ = ["SMALLEST", "WIDTH"]
