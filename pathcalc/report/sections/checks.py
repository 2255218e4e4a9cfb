"""The program's checks on itself, the integrals along the legs, and other equations on the same path."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import groupby
from typing import Any

from pathcalc.report import numbers
from pathcalc.report.context import Context, phase_words
from pathcalc.report.units import STATE_KINDS, kind_of
from pathcalc.report.view import Block, Bullets, Cell, Column, Heading, Paragraph, Section, Table
from pathcalc.report.words import SYMBOLS, say

_SAME = 1e-9
_ABREAST = 2
"""Other equations in one table, so that it fits a printed page."""


def section(ctx: Context) -> Section:
    """Checks and Maxwell integrals."""
    blocks: list[Block] = [Paragraph(say("checks.lead")), _checks(ctx), Heading(say("checks.maxwell"))]
    blocks += [Paragraph(say("checks.error")), _integrals(ctx)]
    if any(len(leg["pieces"]) > 1 for leg in ctx.legs):
        blocks.append(_pieces(ctx))
    return Section("checks", say("checks.title"), tuple(blocks))


def _small(value: float | None) -> Cell:
    text = numbers.scientific(value)
    return Cell(text, "absent" if text == numbers.ABSENT else "number")


def _checks(ctx: Context) -> Table | Paragraph:
    if not ctx.result["checks"]:
        return Paragraph(say("checks.none"), blank=True)
    columns = [Column(say("col.check")), Column(say("col.at"))]
    columns += [Column(say("col.value"), numeric=True), Column(say("col.tolerance"), numeric=True)]
    columns.append(Column(say("col.outcome")))
    rows = [
        (
            Cell(str(c["name"])),
            Cell(str(c["at"] or numbers.ABSENT)),
            _small(c["value"]),
            _small(c["tolerance"]),
            Cell(say("checks.passed"), "good") if c["passed"] else Cell(say("checks.failed"), "bad"),
        )
        for c in ctx.result["checks"]
    ]
    return ctx.table(say("checks.caption"), columns, rows)


def _integrals(ctx: Context) -> Table:
    columns = [
        Column(say("col.leg")),
        ctx.column("d.s", "∫ds", "s"),
        ctx.column("d.u", "∫du", "e"),
        ctx.column("d.h", "∫dh", "e"),
        Column(say("col.error"), numeric=True),
        Column(say("col.closure"), numeric=True),
        Column(say("col.phase")),
    ]
    rows = []
    for leg in ctx.legs:
        m = leg["maxwell"] or {}
        runs = [phase for phase, _ in groupby(phase_words(p["phase"]) for p in leg["pieces"])]
        phases = ", ".join(runs) or numbers.ABSENT
        rows.append(
            [
                Cell(str(leg["name"])),
                ctx.cell("s", m.get("ds")),
                ctx.cell("e", m.get("du")),
                ctx.cell("e", m.get("dh")),
                _small(m.get("error")),
                _small(m.get("closure")),
                Cell(phases),
            ]
        )
    return ctx.table(say("checks.caption.maxwell"), columns, rows)


def _pieces(ctx: Context) -> Table:
    columns = [Column(say("col.leg")), Column(say("col.piece"), numeric=True), Column(say("col.phase"))]
    ends = ("T", "p", "h", "s")
    columns += [ctx.column("d.s", "∫ds", "s"), ctx.column("d.h", "∫dh", "e")]
    columns += [ctx.column(f"q.{key}", SYMBOLS[key], STATE_KINDS[key]) for key in ends]
    lines = {curve.leg: curve.pieces for curve in ctx.solution.curves}
    rows = []
    for leg in ctx.legs:
        ways = lines.get(str(leg["name"]), ())
        for i, piece in enumerate(leg["pieces"]):
            way = ways[i] if len(ways) == len(leg["pieces"]) else None
            row = [Cell(str(leg["name"])), Cell(str(i + 1), "number"), Cell(phase_words(piece["phase"]))]
            row += [ctx.cell("s", piece["ds"]), ctx.cell("e", piece["dh"])]
            row += [ctx.cell(STATE_KINDS[k], None if way is None else float(getattr(way, k)[-1])) for k in ends]
            rows.append(row)
    return ctx.table(say("checks.caption.pieces"), columns, rows)


def comparison(ctx: Context) -> Section | None:
    """The same path by other equations; left out where the case asks for none."""
    rows: Sequence[Mapping[str, Any]] = ctx.result["comparison"]
    if not rows:
        return None
    blocks: list[Block] = [Paragraph(say("comparison.lead"))]
    others = [row for row in rows if any(v is not None for v in (row["quantities"] or {}).values())]
    for i in range(0, len(others), _ABREAST):
        blocks.append(_compared(ctx, others[i : i + _ABREAST]))
    failed = [str(w["text"]) for w in ctx.warnings if w["code"] == "comparison-failed"]
    if failed:
        blocks += [Paragraph(say("comparison.failed")), Bullets(tuple(failed))]
    return Section("comparison", say("comparison.title"), tuple(blocks))


def _compared(ctx: Context, others: Sequence[Mapping[str, Any]]) -> Table:
    addresses = [
        a for a in dict.fromkeys(a for o in others for a in (o["quantities"] or {})) if _differs(ctx, a, others)
    ]
    columns = [Column(say("col.quantity")), Column(say("col.unit"))]
    columns.append(Column(ctx.solution.basis.equation_title, numeric=True))
    for other in others:
        columns.append(Column(str(other["equation"]), numeric=True))
        columns.append(Column(say("comparison.difference"), numeric=True))
    rows = []
    for address in addresses:
        kind = kind_of(address)
        own = ctx.value(address)
        row = [Cell(address, "code"), Cell(ctx.units[kind].unit), ctx.cell(kind, own)]
        for other in others:
            value = (other["quantities"] or {}).get(address)
            gap = None if value is None or own is None else value - own
            row.append(ctx.cell(kind, value) if value is not None else Cell(say("comparison.absent"), "absent"))
            row.append(_gap(ctx, kind, own, gap))
        rows.append(row)
    return ctx.table(say("comparison.caption"), columns, rows)


def _differs(ctx: Context, address: str, others: Sequence[Mapping[str, Any]]) -> bool:
    """Whether a row tells anything: not where the value is given and all equations have the same."""
    own = ctx.value(address)
    values = [(other["quantities"] or {}).get(address) for other in others]
    if own is None:
        return any(value is not None for value in values)
    return any(value is None or abs(value - own) > _SAME * max(abs(own), abs(value)) for value in values)


def _gap(ctx: Context, kind: str, own: float | None, gap: float | None) -> Cell:
    """A difference, to the decimals of the values it is between."""
    if gap is None:
        return Cell(numbers.ABSENT, "absent")
    text = ctx.number(kind, own)
    if "×" in text:
        return ctx.cell(ctx.margin(kind), gap)
    decimals = len(text.partition(".")[2])
    return Cell(numbers.fixed(ctx.units[ctx.margin(kind)].of(gap), decimals), "number")
