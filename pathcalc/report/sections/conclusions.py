"""What was found, what the author concludes, and the history of the revisions."""

from __future__ import annotations

from pathcalc.report import numbers
from pathcalc.report.context import Context, pick
from pathcalc.report.sections.front import limits_outcome
from pathcalc.report.sections.results import per_unit
from pathcalc.report.view import Block, Bullets, Cell, Column, Heading, Paragraph, Section
from pathcalc.report.words import say


def section(ctx: Context) -> Section:
    """Figures of the whole path and the verdict on the limits, drawn up by the program; then the author's words."""
    blocks: list[Block] = [Heading(say("conclusions.figures")), Bullets(tuple(_figures(ctx)))]
    blocks.append(Heading(say("conclusions.author")))
    stated = pick(pick(ctx.case, "record"), "conclusions", [])
    if stated:
        blocks.append(Bullets(tuple(str(text) for text in stated)))
    else:
        blocks.append(Paragraph(say("conclusions.none"), blank=True))
    return Section("conclusions", say("conclusions.title"), tuple(blocks))


def _figures(ctx: Context) -> list[str]:
    found = []
    totals = ctx.result["totals"] or {}
    if totals.get("work") is not None:
        found.append(
            say(
                "conclusions.totals",
                heat=ctx.measure("total", totals["heat"]),
                work=ctx.measure("total", totals["work"]),
                entropy=ctx.measure("total_entropy", totals["entropy_generated"]),
                exergy=ctx.measure("total", totals["exergy_destroyed"]),
            )
        )
    else:
        legs = "; ".join(
            say(
                "conclusions.leg",
                name=leg["name"],
                heat=ctx.measure("e", leg["heat"]),
                work=ctx.measure("e", leg["work"]),
            )
            for leg in ctx.legs
        )
        found.append(say("conclusions.legs", per=per_unit(ctx), legs=legs))
    cycle = {key: value for key, value in (ctx.result["cycle"] or {}).items() if value is not None}
    if cycle:
        figures = ", ".join(f"{say(f'cycle.{key}')} {numbers.significant(value)}" for key, value in cycle.items())
        found.append(say("conclusions.cycle", figures=figures))
    limits = limits_outcome(ctx)
    found.append(f"{limits.label}: {limits.text}")
    return found


def revisions(ctx: Context) -> Section | None:
    """The history of the revisions; left out where the case states none."""
    history = pick(pick(ctx.case, "record"), "revisions", [])
    if not history:
        return None
    columns = [Column(say(f"col.{key}")) for key in ("revision", "date", "change")]
    rows = [
        (
            Cell(str(pick(entry, "revision", ""))),
            Cell(str(pick(entry, "date", numbers.ABSENT))),
            Cell(str(pick(entry, "text", ""))),
        )
        for entry in history
    ]
    table = ctx.table(say("revisions.caption"), columns, rows)
    return Section("revisions", say("revisions.title"), (table,))
