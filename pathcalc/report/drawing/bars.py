"""Bar charts: heat and work of the legs, and the exergy balance as steps from the first state to the last."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from pathcalc.report.context import Context
from pathcalc.report.drawing import style, text
from pathcalc.report.drawing.canvas import Canvas
from pathcalc.report.drawing.scale import Scale
from pathcalc.report.exergy_balance import ExergyBalance
from pathcalc.report.textsafe import clean
from pathcalc.report.words import SYMBOLS, say

_EDGE = 6.0
_LOOSE, _TIGHT = 14, 40
"""Up to so many legs each has a line for its name; past the second number, names are left out."""


@dataclass(frozen=True)
class Flow:
    """Heat and work of one leg in SI; ``label`` is its way between states, ``name`` its name."""

    label: str
    name: str
    heat: float
    work: float


def flows(ctx: Context) -> tuple[list[Flow], str]:
    """Heat and work of each leg and the kind they are printed as: totals where the case gives an amount."""
    whole = all(leg["total"] and leg["total"].get("heat") is not None for leg in ctx.legs)
    found = []
    for leg in ctx.legs:
        source = leg["total"] if whole else leg
        way = f"{ctx.state_number(leg['from'])} → {ctx.state_number(leg['to'])}"
        found.append(Flow(way, clean(leg["name"]), float(source["heat"] or 0.0), float(source["work"] or 0.0)))
    return found, "total" if whole else "e"


def heat_and_work(ctx: Context, title: str, description: str) -> str:
    """Two bars a leg: heat filled, work hatched; to the right into the fluid, to the left out of it."""
    rows, kind = flows(ctx)
    canvas = Canvas("d-heat-work", style.WIDTH)
    fills = {"heat": style.HEAT, "work": canvas.hatch("work", style.WORK)}
    edges = {"heat": style.HEAT, "work": style.WORK}
    scale = ctx.units[kind]
    values = [float(scale.of(v) or 0.0) for row in rows for v in (row.heat, row.work)]
    words = [ctx.number(kind, v) for row in rows for v in (row.heat, row.work)]
    loose = len(rows) <= _LOOSE
    left = _EDGE + 2.0 if loose else _EDGE + max(text.width(row.label, style.SMALLEST) for row in rows) + 8.0
    axis = _signed_axis(values, words, left)
    y = _legend(canvas, fills, edges, scale.unit, whole=kind == "total", flow=ctx.flow)
    zero = float(axis(0.0))
    for row in rows:
        found = [(key, value) for key, value in (("heat", row.heat), ("work", row.work)) if value]
        name = (
            text.shortened(f"{row.label}\u2002{row.name}", style.SMALLEST, style.WIDTH - 2 * _EDGE)
            if loose
            else row.label
        )
        base = y + (13.0 if loose else 11.5)
        canvas.text(_EDGE, base, name)
        if not found:
            after = _EDGE + text.width(name, style.SMALLEST) + 12.0
            canvas.text(after, base, say("diagrams.bars.nothing"), fill=style.SOFT)
        y += 18.0 if loose else 0.0
        for key, value in found:
            _bar(canvas, axis, y, float(scale.of(value) or 0.0), ctx.number(kind, value), fills[key], edges[key])
            canvas.line(np.array([[zero, y - 1.0], [zero, y + 15.0]]), stroke=style.INK)
            y += 15.0
        y += 15.0 if not found and not loose else 0.0
        y += 5.0 if loose else 3.0
    return canvas.render(y + 4.0, title, description)


def _legend(
    canvas: Canvas, fills: dict[str, str], edges: dict[str, str], unit: str, *, whole: bool, flow: bool
) -> float:
    x = _EDGE
    for key in ("heat", "work"):
        symbol = SYMBOLS[f"total.{key}" if whole else key]
        canvas.rect(x, 5.0, 22.0, 11.0, fill=fills[key], stroke=edges[key], stroke_width=1)
        canvas.text(x + 29.0, 15.0, say(f"col.{key}"), symbol=symbol, unit=unit)
        x += 29.0 + text.width(f"{say(f'col.{key}')} {symbol}, {unit}", style.SMALLEST) + 22.0
    words = say("diagrams.bars.sign")
    canvas.text(style.WIDTH - _EDGE, 33.0, words, anchor="end", fill=style.SOFT)
    return 40.0


def _signed_axis(values: Sequence[float], words: Sequence[str], left: float) -> Scale:
    """An axis with room for the numbers beyond the ends of the bars, on both sides of zero."""
    widths = [text.width(w, style.SMALLEST) + 8.0 for w in words]
    room = style.WIDTH - _EDGE - left
    low, high = min(0.0, *values), max(0.0, *values)
    span = high - low or 1.0
    unit = room / span
    for _ in range(60):
        before = max([-(min(v, 0.0)) * unit + w for v, w in zip(values, widths, strict=True) if v < 0] or [0.0])
        after = max([max(v, 0.0) * unit + w for v, w in zip(values, widths, strict=True) if v >= 0] or [0.0])
        if before + after <= room:
            break
        unit *= 0.97
    spare = max(0.0, room - before - after)
    zero = left + before + (0.0 if not before else min(spare, 0.5 * spare))
    return Scale(0.0, 1.0, False, zero, zero + unit)


def _bar(canvas: Canvas, axis: Scale, y: float, value: float, words: str, fill: str, edge: str) -> None:
    zero, end = float(axis(0.0)), float(axis(value))
    if abs(end - zero) > 0.3:
        canvas.rect(
            min(zero, end), y + 1.0, abs(end - zero), 12.0, fill=fill, stroke=edge, stroke_width=1, data_bar=words
        )
    anchor, gap = ("end", -5.0) if value < 0 else ("start", 5.0)
    canvas.text(end + gap, y + 11.5, words, anchor=anchor)


@dataclass(frozen=True)
class Rung:
    """One row of the balance: a level (start, end) or a step from the level above; SI."""

    kind: str
    words: str
    value: float


def rungs(found: ExergyBalance, first: str, last: str) -> list[Rung]:
    """The rows from the first state to the last: levels, then gains, then losses, destroyed exergy leg by leg."""
    rows = [Rung("level", say("diagrams.exergy.at", state=first), found.start)]
    for key in ("work", "heat", "stream"):
        if gained := found.gained(key):
            rows.append(Rung(key, say(f"diagrams.exergy.{key}.in"), gained))
    for key in ("work", "heat", "stream"):
        if given := found.given(key):
            rows.append(Rung(key, say(f"diagrams.exergy.{key}.out"), -given))
    lost = [leg for leg in found.legs if leg.destroyed]
    shown = lost if len(lost) <= _LOOSE else sorted(lost, key=lambda leg: -abs(leg.destroyed))[: _LOOSE - 1]
    rows += [Rung("destroyed", clean(leg.name), -leg.destroyed) for leg in lost if leg in shown]
    if rest := sum(leg.destroyed for leg in lost if leg not in shown):
        rows.append(Rung("destroyed", say("diagrams.exergy.rest"), -rest))
    rows.append(Rung("level", say("diagrams.exergy.at", state=last), found.end))
    return rows


def exergy(ctx: Context, found: ExergyBalance, title: str, description: str) -> str:
    """The balance as bars that hang on each other: gains to the right, losses to the left of the level before."""
    rows = rungs(found, "1", str(len(ctx.states)))
    kind = "total" if found.total else "e"
    scale = ctx.units[kind]
    canvas = Canvas("d-exergy", style.WIDTH)
    fills = {
        "level": style.INK,
        "work": canvas.hatch("work", style.WORK),
        "heat": style.HEAT,
        "stream": canvas.hatch("stream", style.SOFT),
        "destroyed": style.PAPER,
    }
    edges = {"work": style.WORK, "heat": style.HEAT, "stream": style.SOFT}
    words = [ctx.number(kind, row.value) for row in rows]
    right = max(text.width(w, style.SMALLEST) for w in words)
    indents = {"destroyed": 12.0}
    ways = {clean(leg["name"]): f"{ctx.state_number(leg['from'])} → {ctx.state_number(leg['to'])}" for leg in ctx.legs}
    names = [
        f"{ways[row.words]}\u2002{row.words}" if row.kind == "destroyed" and row.words in ways else row.words
        for row in rows
    ]
    head = say("diagrams.exergy.destroyed")
    wide = [text.width(n, style.SMALLEST) + indents.get(row.kind, 0.0) for n, row in zip(names, rows, strict=True)]
    left = _EDGE + min(230.0, max(*wide, text.width(head, style.SMALLEST)) + 10.0)
    spans = _spans([float(scale.of(row.value) or 0.0) for row in rows], [row.kind for row in rows])
    low, high = min(0.0, *(min(s) for s in spans)), max(0.0, *(max(s) for s in spans))
    stop = style.WIDTH - _EDGE - right - 12.0
    axis = Scale(low, high if high > low else low + 1.0, False, left, stop)
    canvas.text(style.WIDTH - _EDGE, 15.0, say("diagrams.exergy.unit", unit=scale.unit), anchor="end", fill=style.SOFT)
    y, top = 22.0, 22.0
    destroyed = False
    for row, name, (a, b), number in zip(rows, names, spans, words, strict=True):
        if row.kind == "destroyed" and not destroyed:
            destroyed = True
            canvas.text(_EDGE, y + 14.0, head, fill=style.SOFT)
            y += 19.0
        indent = indents.get(row.kind, 0.0)
        label = text.shortened(name, style.SMALLEST, left - _EDGE - indent - 6.0)
        canvas.text(_EDGE + indent, y + 14.0, label)
        x0, x1 = sorted((float(axis(a)), float(axis(b))))
        edge = edges.get(row.kind, style.INK)
        long = max(x1 - x0, 0.6)
        canvas.rect(x0, y + 3.0, long, 13.0, fill=fills[row.kind], stroke=edge, stroke_width=1, data_bar=number)
        canvas.text(style.WIDTH - _EDGE, y + 14.0, number, anchor="end")
        step = float(axis(b))
        if row is not rows[-1]:
            canvas.line(np.array([[step, y + 16.0], [step, y + 22.0]]), stroke=style.SOFT, stroke_width=0.8)
        y += 19.0
    zero = float(axis(0.0))
    canvas.line(np.array([[zero, top], [zero, y]]), stroke=style.INK, stroke_width=0.8)
    return canvas.render(y + 5.0, title, description)


def _spans(values: Sequence[float], kinds: Sequence[str]) -> list[tuple[float, float]]:
    """From where to where each bar reaches: levels from zero, steps from where the one before ended."""
    spans = []
    level = 0.0
    for value, kind in zip(values, kinds, strict=True):
        begin = 0.0 if kind == "level" else level
        level = begin + value
        spans.append((begin, level))
    return spans
