"""The diagrams the case asks for and the bars of heat, work and exergy, each with a caption and a description."""

from __future__ import annotations

from collections.abc import Sequence

from pathcalc.report.context import Context, pick
from pathcalc.report.drawing import bars
from pathcalc.report.drawing.diagram import Diagram
from pathcalc.report.drawing.plane import AXES, ISOLINES, KINDS
from pathcalc.report.exergy_balance import STREAMS, ExergyBalance, balance
from pathcalc.report.numbers import short
from pathcalc.report.units import STATE_KINDS
from pathcalc.report.view import Block, Figure, Paragraph, Section
from pathcalc.report.words import SYMBOLS, say


def section(ctx: Context) -> Section:
    """One figure for each diagram of the case's report block, then heat and work, then the exergy balance."""
    blocks: list[Block] = []
    if ctx.solution.curves:
        blocks.append(Paragraph(say("diagrams.lead")))
        blocks += [_figure(ctx, name) for name in asked(ctx)]
    if ctx.legs:
        blocks.append(_heat_and_work(ctx))
        blocks += _exergy(ctx)
    return Section("diagrams", say("diagrams.title"), tuple(blocks) or (Paragraph(say("diagrams.none")),))


def asked(ctx: Context) -> list[str]:
    """The diagrams of the case; where it names none T–s and p–h of a flow, p–v and T–s of a closed mass,

    and p–h as well where a closed mass boils or condenses.
    """
    own = pick(pick(ctx.case, "report"), "diagrams")
    names = [n for n in dict.fromkeys(str(n) for n in own or ()) if n in AXES]
    if names:
        return names
    if ctx.flow:
        return ["T-s", "p-h"]
    boils = any("two" in str(piece.phase) for curve in ctx.solution.curves for piece in curve.pieces)
    return ["p-v", "T-s", "p-h"] if boils else ["p-v", "T-s"]


def _figure(ctx: Context, name: str) -> Figure:
    x, y = AXES[name]
    caption = say("diagrams.curve", x=SYMBOLS[x], y=SYMBOLS[y])
    diagram = Diagram(ctx, name)
    alt = _described(ctx, diagram, name)
    return Figure(name, caption, alt, diagram.svg(caption, alt), ctx.number_figure())


def _described(ctx: Context, diagram: Diagram, name: str) -> str:
    plane = diagram.plane
    x, y = plane.x, plane.y
    log = [SYMBOLS[key] for key, scale in zip((x, y), plane.scales, strict=True) if scale.log]
    states = "; ".join(
        f"{i} {s['name']} ({SYMBOLS[x]} = {ctx.measure(STATE_KINDS[x], s[x])}, "
        f"{SYMBOLS[y]} = {ctx.measure(STATE_KINDS[y], s[y])})"
        for i, s in enumerate(ctx.states, 1)
    )
    sentences = [
        say(
            "diagrams.alt",
            x=say(f"q.{x}"),
            y=say(f"q.{y}"),
            scales=say("diagrams.alt.log", axes=_and(log)) if log else "",
            states=states,
            dome=say("diagrams.alt.dome" if plane.dome_shown else "diagrams.alt.nodome"),
        )
    ]
    far = [str(ctx.legs[i]["name"]) for i, leg in enumerate(plane.legs) if not leg.states]
    if far:
        sentences.append(say("diagrams.alt.nostates", legs=_and(far)))
    if plane.isolines:
        key = ISOLINES[name]
        values = _and([short(value, 4) for value, _ in plane.isolines])
        sentences.append(say(f"diagrams.alt.iso.{key}", values=values, unit=ctx.units[KINDS[key]].unit))
    if plane.others:
        sentences.append(say("diagrams.alt.others", equations=_and([e for e, _ in plane.others])))
    return " ".join(sentences)


def _and(items: Sequence[str]) -> str:
    if len(items) == 1:
        return items[0]
    return say("diagrams.and", first=", ".join(items[:-1]), last=items[-1])


def _heat_and_work(ctx: Context) -> Figure | Paragraph:
    rows, kind = bars.flows(ctx)
    if not any(row.heat or row.work for row in rows):
        return Paragraph(say("diagrams.bars.none"))
    listed = "; ".join(
        say(
            "diagrams.bars.alt.leg",
            leg=row.name,
            heat=ctx.measure(kind, row.heat),
            work=ctx.measure(kind, row.work),
        )
        for row in rows
    )
    whole = say("diagrams.bars.whole", heat=ctx.measure(kind, sum(r.heat for r in rows)),
                work=ctx.measure(kind, sum(r.work for r in rows)))  # fmt: skip
    if kind == "e" and any(leg["path"] in STREAMS for leg in ctx.legs):
        whole = ""
    caption = " ".join(part for part in (say(f"diagrams.bars.{kind}"), whole) if part)
    alt = say("diagrams.bars.alt", rows=listed)
    return Figure(
        "heat-work", caption, alt, bars.heat_and_work(ctx, say("diagrams.bars.title"), alt), ctx.number_figure()
    )


def _exergy(ctx: Context) -> list[Block]:
    found = balance(ctx.result)
    if found is None:
        return [Paragraph(say("diagrams.exergy.none"))]
    title, alt = say("diagrams.exergy.title"), _exergy_in_words(ctx, found)
    caption = say("diagrams.exergy.caption.flow" if ctx.flow else "diagrams.exergy.caption.closed")
    return [Figure("exergy", caption, alt, bars.exergy(ctx, found, title, alt), ctx.number_figure())]


def _exergy_in_words(ctx: Context, found: ExergyBalance) -> str:
    kind = "total" if found.total else "e"
    rows = bars.rungs(found, "1", str(len(ctx.states)))
    parts = [
        (say("diagrams.exergy.alt.destroyed", leg=row.words) if row.kind == "destroyed" else row.words)
        + " "
        + ctx.measure(kind, row.value)
        for row in rows
    ]
    return say("diagrams.exergy.alt", rows="; ".join(parts))
