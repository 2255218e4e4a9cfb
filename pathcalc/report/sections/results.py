"""States, legs, totals, cycle and limits, with the warnings at their head."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import Any, Literal

from pathcalc.path.warnings import NOTES
from pathcalc.report import numbers
from pathcalc.report.context import Context, phase_words, pick
from pathcalc.report.units import DELTA_KINDS, LEG_KINDS, STATE_KINDS, TOTAL_KINDS, kind_of
from pathcalc.report.view import Block, Cell, Column, Heading, Notice, Paragraph, Section, Table
from pathcalc.report.words import SYMBOLS, say
from pathcalc.words import say_of

_STATE_TABLES = (
    ("results.caption.states", ("T", "p", "v", "rho", "x"), True),
    ("results.caption.energies", ("u", "h", "s", "a", "g", "exergy"), False),
    (
        "results.caption.derived",
        (
            "cv",
            "cp",
            "sound_speed",
            "Z",
            "expansivity",
            "compressibility",
            "joule_thomson",
            "fugacity_coefficient",
        ),
        False,
    ),
)
_ROUNDING = 1e-13
_FLOWS = ("heat", "work", "entropy_generated", "exergy_destroyed")


def section(ctx: Context) -> Section:
    """Warnings, states, legs, totals and the cycle's figures."""
    blocks: list[Block] = [*_warnings(ctx), Heading(say("results.states"))]
    ambient = ctx.brief("dp", ctx.ambient)
    pressure = say("results.gauge", ambient=ambient) if ctx.units.gauge else say("results.absolute")
    blocks.append(Paragraph(pressure + " " + say("results.decimals")))
    blocks += [_states(ctx, *spec) for spec in _STATE_TABLES]
    blocks += [
        Heading(say("results.legs")),
        Paragraph(say("purpose.sign")),
        _legs(ctx),
        _deltas(ctx),
        Heading(say("results.totals")),
        *_totals(ctx),
        *_streams(ctx),
    ]
    cycle = ctx.result["cycle"]
    if cycle:
        columns = [Column(say("col.quantity")), Column(say("col.value"), numeric=True)]
        rows = [(Cell(say(f"cycle.{key}")), _plain(value)) for key, value in cycle.items() if value is not None]
        blocks += [Heading(say("results.cycle")), ctx.table(say("results.caption.cycle"), columns, rows)]
    return Section("results", say("results.title"), tuple(blocks))


def _plain(value: float | None) -> Cell:
    text = numbers.significant(value)
    return Cell(text, "absent" if text == numbers.ABSENT else "number")


def _warnings(ctx: Context) -> list[Block]:
    if not ctx.warnings:
        return [Paragraph(say("results.nowarnings"))]
    blocks: list[Block] = []
    for i, warning in enumerate(ctx.warnings, 1):
        at = warning.get("at")
        title = say("results.warning.at", n=i, at=at) if at else say("results.warning.general", n=i)
        tone: Literal["warning", "note"] = "note" if warning["code"] in NOTES else "warning"
        blocks.append(Notice(title, str(warning["text"]), tone, str(warning["code"])))
    return blocks


def _states(ctx: Context, caption: str, keys: Sequence[str], phase: bool) -> Table:
    shown = [k for k in keys if k != "x" or any(s.get("x") is not None for s in ctx.states)]
    columns = [Column(say("col.no"), numeric=True), Column(say("col.state"))]
    columns += [ctx.column(f"q.{k}", SYMBOLS[k], STATE_KINDS[k]) for k in shown]
    if phase:
        columns.append(Column(say("col.phase")))
    rows = []
    for i, state in enumerate(ctx.states, 1):
        row = [
            Cell(str(i), "number"),
            Cell(str(state["name"]), mark=ctx.mark(state["name"]) if phase else ""),
        ]
        row += [ctx.cell(STATE_KINDS[k], state.get(k), f"{state['name']}.{k}") for k in shown]
        if phase:
            row.append(Cell(phase_words(state.get("phase"))))
        rows.append(row)
    return ctx.table(say(caption), columns, rows, head=1)


def _way(ctx: Context, leg: Mapping[str, Any]) -> Cell:
    return Cell(f"{ctx.state_number(leg['from'])}\u2009→\u2009{ctx.state_number(leg['to'])}")


def per_unit(ctx: Context) -> str:
    """What specific results are counted by: mass or amount of substance."""
    return say("col.per.mole") if "mol" in ctx.units["e"].unit.rpartition("/")[2] else say("col.per.mass")


def _legs(ctx: Context) -> Table:
    columns = [Column(say("col.fromto")), Column(say("col.leg")), Column(say("col.path"))]
    columns += [ctx.column(f"col.{k}", SYMBOLS[k], LEG_KINDS[k]) for k in _FLOWS]
    rows = []
    for leg in ctx.legs:
        row = [
            _way(ctx, leg),
            Cell(str(leg["name"]), mark=ctx.mark(leg["name"])),
            Cell(say_of("path", str(leg["path"]))),
        ]
        rows.append(row + [ctx.cell(LEG_KINDS[k], leg[k], f"{leg['name']}.{k}") for k in _FLOWS])
    return ctx.table(say("results.caption.legs", per=per_unit(ctx)), columns, rows, head=1)


def _deltas(ctx: Context) -> Table:
    keys = ("T", "p", "v", "u", "h", "s", "a", "g")
    columns = [Column(say("col.fromto")), Column(say("col.leg"))]
    columns += [ctx.column(f"d.{k}", "Δ" + SYMBOLS[k], DELTA_KINDS[k]) for k in keys]
    rows = []
    for leg in ctx.legs:
        row = [_way(ctx, leg), Cell(str(leg["name"]))]
        changes = {k: _settled(ctx, leg, k) for k in keys}
        rows.append(row + [ctx.cell(DELTA_KINDS[k], changes[k], f"{leg['name']}.delta.{k}") for k in keys])
    return ctx.table(say("results.caption.delta", per=per_unit(ctx)), columns, rows, head=1)


def _settled(ctx: Context, leg: Mapping[str, Any], key: str) -> float | None:
    """A change of state; zero where it is the rounding of the two values it is the difference of."""
    change: float | None = leg["delta"].get(key)
    first, last = (ctx.states[ctx.state_number(leg[end]) - 1].get(key) for end in ("from", "to"))
    if change is None or first is None or last is None:
        return change
    return 0.0 if abs(change) <= _ROUNDING * (abs(first) + abs(last)) else change


def _totals(ctx: Context) -> list[Block]:
    if ctx.result["amount"] is None or ctx.result["amount"].get("value") is None:
        return [Paragraph(say("results.noamount"))]
    amount = ctx.brief("amount", ctx.result["amount"]["value"])
    columns = [Column(say("col.fromto")), Column(say("col.leg")), ctx.column("col.amount", "", "amount")]
    columns += [ctx.column(f"col.{k}", SYMBOLS[f"total.{k}"], TOTAL_KINDS[k]) for k in _FLOWS]
    rows: list[list[Cell]] = []
    for leg in ctx.legs:
        total = leg["total"] or {}
        row = [_way(ctx, leg), Cell(str(leg["name"])), ctx.cell("amount", leg["amount"])]
        rows.append(row + [ctx.cell(TOTAL_KINDS[k], total.get(k)) for k in _FLOWS])
    whole = ctx.result["totals"] or {}
    last = [Cell(""), Cell(say("results.whole")), Cell("")]
    rows.append(last + [ctx.cell(TOTAL_KINDS[k], whole.get(k), f"totals.{k}") for k in _FLOWS])
    caption = say("results.caption.totals" if ctx.flow else "results.caption.totals.closed")
    blocks: list[Block] = [
        Paragraph(say("results.amountof", amount=amount)),
        ctx.table(caption, columns, rows, head=1),
    ]
    delta = whole.get("delta") or {}
    keys = [k for k in ("u", "h", "s", "a", "g", "v") if delta.get(k) is not None]
    if keys:
        columns = [Column(say("col.leg"))]
        columns += [ctx.column(f"d.{k}", "Δ" + SYMBOLS[k].upper(), TOTAL_KINDS[k]) for k in keys]
        size = {k: sum(abs((leg["delta"].get(k) or 0.0) * (leg["amount"] or 0.0)) for leg in ctx.legs) for k in keys}
        settled = {k: 0.0 if abs(delta[k]) <= 1e-12 * size[k] else delta[k] for k in keys}
        row = [Cell(say("results.whole")), *(ctx.cell(TOTAL_KINDS[k], settled[k]) for k in keys)]
        blocks.append(ctx.table(say("results.caption.sum"), columns, [row]))
    return blocks


def _streams(ctx: Context) -> list[Block]:
    """Streams that leave by separation or join by mixing, with their states."""
    streams = ctx.solution.streams
    found = [leg for leg in ctx.legs if leg["name"] in streams]
    if not found:
        return []
    keys = ("T", "p", "v", "h", "s", "x")
    columns = [Column(say("col.leg")), Column(say("col.stream")), ctx.column("col.amount", "", "amount")]
    columns += [ctx.column(f"q.{k}", SYMBOLS[k], STATE_KINDS[k]) for k in keys]
    rows = []
    for leg in found:
        other = streams[leg["name"]]
        amount = other["amount"]
        way = say("results.stream.joins" if leg["path"] == "mixing" else "results.stream.leaves")
        row = [Cell(str(leg["name"])), Cell(way), ctx.cell("amount", None if amount is None else abs(amount))]
        rows.append(row + [ctx.cell(STATE_KINDS[k], other.get(k)) for k in keys])
    return [Heading(say("results.streams")), ctx.table(say("results.caption.streams"), columns, rows)]


def limits(ctx: Context) -> Section:
    """Acceptance limits with margins; each value carries its own unit, as kinds differ by row."""
    found = ctx.result["limits"]
    if not found:
        return Section("limits", say("limits.title"), (Paragraph(say("limits.none"), blank=True),))
    columns = [Column(say("col.quantity"))]
    columns += [Column(say(f"col.{c}"), numeric=True) for c in ("value", "min", "max", "margin")]
    columns += [Column(say("col.outcome")), Column(say("col.source"))]
    rows = []
    for limit, own in zip(found, _limits_of(ctx, len(found)), strict=True):
        kind = kind_of(limit["quantity"])
        cells = [_measure(ctx, kind, limit["value"])]
        cells += [_bound(ctx, kind, limit[k]) for k in ("min", "max")]
        cells[0] = replace(cells[0], link=ctx.derivations.anchor(limit["quantity"]))
        cells.append(_measure(ctx, ctx.margin(kind), limit["margin"]))
        outcome = Cell(say("limits.met"), "good") if limit["passed"] else Cell(say("limits.missed"), "bad")
        source = pick(own, "source")
        origin = Cell(str(source)) if source else Cell(say("basis.nosource"), "absent")
        note = str(pick(own, "note", ""))
        rows.append([Cell(str(limit["quantity"]), "code", mark=note), *cells, outcome, origin])
    blocks = (ctx.table(say("limits.caption"), columns, rows), Paragraph(say("limits.margin")))
    return Section("limits", say("limits.title"), blocks)


def _limits_of(ctx: Context, n: int) -> list[Any]:
    own = list(pick(ctx.case, "limits", []))
    return own if len(own) == n else [None] * n


def _bound(ctx: Context, kind: str, si: float | None) -> Cell:
    """A bound as the case gives it, without zeros after its last digit."""
    return Cell(numbers.ABSENT, "absent") if si is None else Cell(ctx.brief(kind, si), "number")


def _measure(ctx: Context, kind: str, si: float | None) -> Cell:
    text = ctx.measure(kind, si)
    return Cell(text, "absent" if text == numbers.ABSENT else "number")
