"""What changed since an earlier revision, from a comparison of the two."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from pathcalc.report import numbers
from pathcalc.report.context import Context
from pathcalc.report.units import kind_of
from pathcalc.report.view import Block, Bullets, Cell, Column, Heading, Paragraph, Section
from pathcalc.report.words import say

MOST = 60
"""Changed results listed; the others are counted."""
_FIRST = frozenset({"T", "p", "x", "heat", "work", "entropy_generated", "exergy_destroyed"})
"""What a reader looks for; the other properties of changed states follow from it and are counted."""


def section(ctx: Context) -> Section | None:
    """Inputs, results, limits and checks that differ from the earlier revision; None where none was given."""
    changes = ctx.changes
    if changes is None:
        return None
    old = changes["old"]
    earlier = old["revision"] or old["label"]
    blocks: list[Block] = [Paragraph(say("changes.lead", label=old["label"], sha256=old["sha256"] or numbers.ABSENT))]
    if old["trouble"]:
        blocks.append(Paragraph(say("changes.unsolved", trouble=old["trouble"])))
    if changes["same"]:
        blocks.append(Paragraph(say("changes.same")))
    blocks += _inputs(ctx, changes) + _results(ctx, changes["results"]) + _sides(changes)
    if changes["software"]:
        blocks += [Heading(say("changes.software")), Bullets(tuple(str(text) for text in changes["software"]))]
    return Section("changes", say("changes.title", revision=earlier), tuple(blocks))


def _inputs(ctx: Context, changes: Mapping[str, Any]) -> list[Block]:
    if not changes["inputs_known"]:
        return [Paragraph(say("changes.inputs.unknown"))]
    rows = [
        (
            Cell(str(row["address"]), "code"),
            Cell(say(f"changes.kind.{row['kind']}")),
            *(Cell(*_written(row[side])) for side in ("old", "new")),
        )
        for row in changes["inputs"]
    ]
    if not rows:
        return []
    columns = [Column(say(f"col.{key}")) for key in ("input", "change.kind", "before", "now")]
    return [Heading(say("changes.inputs")), ctx.table(say("changes.caption.inputs"), columns, rows)]


def _written(item: Mapping[str, Any] | None) -> tuple[str, Any]:
    return (numbers.ABSENT, "absent") if item is None else (str(item["written"]), "code")


def _results(ctx: Context, changes: Sequence[Mapping[str, Any]]) -> list[Block]:
    if not changes:
        return []
    columns = [Column(say("col.quantity")), Column(say("col.unit"))]
    columns += [Column(say(f"col.{key}"), numeric=True) for key in ("before", "now", "relative")]
    rows = []
    shown = [row for row in changes if _is_first(ctx, str(row["address"]))][:MOST]
    for row in shown:
        kind = kind_of(str(row["address"]))
        rows.append(
            (
                Cell(str(row["address"]), "code"),
                Cell(ctx.units[kind].unit),
                _value(ctx, kind, row["old"]),
                _value(ctx, kind, row["new"]),
                _share(ctx, kind, row),
            )
        )
    blocks: list[Block] = [Heading(say("changes.results")), ctx.table(say("changes.caption.results"), columns, rows)]
    if len(changes) > len(shown):
        blocks.append(Paragraph(say("changes.more", n=len(changes) - len(shown))))
    return blocks


def _is_first(ctx: Context, address: str) -> bool:
    head, _, key = address.partition(".")
    return (
        head in ("totals", "cycle") or key in _FIRST or any(row["quantity"] == address for row in ctx.result["limits"])
    )


def _value(ctx: Context, kind: str, value: Any) -> Cell:
    if isinstance(value, str):
        return Cell(value)
    return ctx.cell(kind, value)


def _share(ctx: Context, kind: str, row: Mapping[str, Any]) -> Cell:
    """The relative change; of a temperature, which has no natural zero in the case's unit, the difference."""
    relative = row["relative"]
    if kind == "T" and isinstance(row["old"], float) and isinstance(row["new"], float):
        return Cell(ctx.measure("dT", row["new"] - row["old"]), "number")
    if relative is None:
        return Cell(numbers.ABSENT, "absent")
    text = numbers.significant(100.0 * relative, 3) if abs(relative) >= 1e-6 else numbers.scientific(100.0 * relative)
    return Cell(f"{text}\u00a0%", "number")


def _sides(changes: Mapping[str, Any]) -> list[Block]:
    lines = [
        say("changes.limit", quantity=row["quantity"], old=_side(row["old"]), new=_side(row["new"]))
        for row in changes["limits"]
    ]
    lines += [say("changes.check", check=r["check"], old=r["old"], new=r["new"]) for r in changes["checks"]]
    lines += [say("changes.warning.new", code=r["code"], at=r["at"]) for r in changes["warnings_new"]]
    lines += [say("changes.warning.gone", code=r["code"], at=r["at"]) for r in changes["warnings_gone"]]
    return [Heading(say("changes.sides")), Bullets(tuple(lines))] if lines else []


def _side(side: str | None) -> str:
    return say(f"limits.{side}") if side else say("changes.nolimit")
