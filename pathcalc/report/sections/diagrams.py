"""The diagrams the case asks for, each with its caption and a description in words."""

from __future__ import annotations

from pathcalc.report import diagrams
from pathcalc.report.context import Context, pick
from pathcalc.report.units import STATE_KINDS
from pathcalc.report.view import Block, Figure, Paragraph, Section
from pathcalc.report.words import SYMBOLS, say

DEFAULT = ("T-s", "p-v", "p-h")


def section(ctx: Context) -> Section:
    """One figure for each diagram of the case's report block; T–s, p–v and p–h where it names none."""
    asked = pick(pick(ctx.case, "report"), "diagrams")
    names = list(dict.fromkeys(str(n) for n in asked or DEFAULT))
    names = [n for n in names if n in diagrams.AXES]
    if not names or not ctx.solution.curves:
        return Section("diagrams", say("diagrams.title"), (Paragraph(say("diagrams.none")),))
    blocks: list[Block] = [Paragraph(say("diagrams.lead"))]
    blocks += [_figure(ctx, name) for name in names]
    return Section("diagrams", say("diagrams.title"), tuple(blocks))


def _figure(ctx: Context, name: str) -> Figure:
    x, y = diagrams.AXES[name]
    caption = say("diagrams.curve", x=SYMBOLS[x], y=SYMBOLS[y])
    drawing = diagrams.Drawing(ctx, x, y)
    log = [SYMBOLS[k] for k, on in ((x, drawing.log_x), (y, drawing.log_y)) if on]
    states = "; ".join(
        f"{i} {s['name']} ({SYMBOLS[x]} = {ctx.measure(STATE_KINDS[x], s[x])}, "
        f"{SYMBOLS[y]} = {ctx.measure(STATE_KINDS[y], s[y])})"
        for i, s in enumerate(ctx.states, 1)
    )
    alt = say(
        "diagrams.alt",
        x=say(f"q.{x}"),
        y=say(f"q.{y}"),
        scales=say("diagrams.alt.log", axes=say("diagrams.and", first=log[0], last=log[1]) if len(log) > 1 else log[0])
        if log
        else "",
        states=states,
        dome=say("diagrams.alt.dome" if drawing.dome_shown else "diagrams.alt.nodome"),
    )
    return Figure(name, caption, alt, drawing.svg(name, caption, alt), ctx.number_figure())
