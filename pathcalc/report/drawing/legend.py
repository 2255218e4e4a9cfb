"""The legend under a diagram: a sample of each line and what it means, in one column or two."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from pathcalc.report.drawing import style, text
from pathcalc.report.drawing.canvas import Canvas

_ROW, _SAMPLE, _GAP, _EDGE = 17.0, 34.0, 7.0, 4.0


@dataclass(frozen=True)
class Entry:
    """One line of the legend. ``kind``: leg, open, way, band, dome, thin; ``key`` ones explain a way of drawing."""

    kind: str
    words: str
    stroke: style.Stroke
    key: bool = False


def draw(canvas: Canvas, entries: list[Entry], top: float) -> float:
    """Draw the entries below ``top``; the height they take. Two short ones stand side by side."""
    y, half = top, 0.5 * style.WIDTH
    column = 0
    for entry in entries:
        room = half - _EDGE - _SAMPLE - _GAP - 6.0
        wide = text.width(entry.words, style.SMALLEST) > room
        if wide and column == 1:
            y, column = y + _ROW, 0
        x = _EDGE + column * half
        words = (
            text.shortened(entry.words, style.SMALLEST, style.WIDTH - _SAMPLE - _GAP - 2 * _EDGE)
            if wide
            else entry.words
        )
        _sample(canvas, entry, x, y + 0.5 * _ROW)
        canvas.text(x + _SAMPLE + _GAP, y + 0.5 * _ROW + 4.5, words)
        if wide or column == 1:
            y, column = y + _ROW, 0
        else:
            column = 1
    return y + column * _ROW - top


def _sample(canvas: Canvas, entry: Entry, x: float, y: float) -> None:
    line = np.array([[x, y], [x + _SAMPLE, y]])
    colour, dash = entry.stroke.colour, entry.stroke.dash
    if entry.kind == "open":
        canvas.line(line, stroke=colour, stroke_width=style.OPEN_WIDTH, stroke_dasharray=dash)
        canvas.line(line, stroke=style.PAPER, stroke_width=style.OPEN_CORE)
    elif entry.kind == "band":
        canvas.line(line, stroke=colour, stroke_width=style.BAND_WIDTH, stroke_opacity=style.BAND_OPACITY)
        canvas.line(line, stroke=colour, stroke_width=style.LEG_WIDTH)
    elif entry.kind == "way":
        canvas.line(line, stroke=colour, stroke_width=1.1, stroke_dasharray="0.8 3", stroke_linecap="round")
    elif entry.kind == "dome":
        canvas.line(line, stroke=colour, stroke_width=1.1)
    elif entry.kind == "thin":
        canvas.line(line, stroke=colour, stroke_width=1.0, stroke_dasharray=dash)
    else:
        canvas.line(line, stroke=colour, stroke_width=style.LEG_WIDTH, stroke_dasharray=dash)
