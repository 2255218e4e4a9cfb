"""Inputs with their sources and uncertainties, defaults the program applied, assumptions."""

from __future__ import annotations

import dataclasses
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from pathcalc.quantities import Quantity, Relative
from pathcalc.report import numbers
from pathcalc.report.context import P_AMBIENT, Context, pick
from pathcalc.report.units import pretty, si_unit
from pathcalc.report.view import Block, Bullets, Cell, Column, Heading, Paragraph, Section
from pathcalc.report.words import say

_SI_DIGITS = 8


_WITH_HEAT = frozenset({"isothermal", "isobaric", "isochoric", "polytropic", "workless"})


@dataclass(frozen=True)
class Input:
    """One input of the case as the input table shows it."""

    address: str
    written: str
    si: str
    uncertainty: str
    source: str
    note: str


def inputs(ctx: Context) -> list[Input]:
    """Every quantity the case gives, in the order of the file."""
    case = ctx.case
    found: list[Input] = []
    groups: list[tuple[str, Any]] = [("fluid", pick(case, "fluid")), ("amount", pick(case, "amount"))]
    around = pick(case, "surroundings")
    for key in ("T", "p"):
        if pick(around, f"{key}_given", True):
            groups.append((f"surroundings.{key}", pick(around, key)))
    start = pick(case, "start", {})
    groups.append(("start", start))
    for address, thing in groups:
        found += _inputs_in(address, thing, None)
    found += [Input(f"start.{k}", v, "", "", "", "") for k, v in start.items() if isinstance(v, str)]
    for leg in pick(case, "legs", []):
        found += _inputs_in(str(pick(leg, "name")), leg, pick(leg, "source"))
    for limit in pick(case, "limits", []):
        address = f"limit {pick(limit, 'quantity')}"
        found += _inputs_in(address, limit, pick(limit, "source"))
    return found


def _inputs_in(address: str, thing: Any, source: str | None) -> Iterator[Input]:
    for place, value in _walk(address, thing):
        if isinstance(value, Quantity):
            yield _of_quantity(place, value, source)
        elif value.amount is not None:
            written = say(f"basis.relative.{value.kind}", amount=_text(value.amount))
            yield dataclasses.replace(_of_quantity(place, value.amount, source), written=written)
        else:
            written, own = say("basis.relative.same_as", state=value.state), say("basis.source.state")
            yield Input(place, written, "", "", source or own, "")


def _walk(address: str, thing: Any) -> Iterator[tuple[str, Quantity | Relative]]:
    if isinstance(thing, Quantity | Relative):
        yield address, thing
    elif isinstance(thing, Mapping):
        for key, value in thing.items():
            yield from _walk(f"{address}.{key}", value)
    elif isinstance(thing, list | tuple):
        for i, value in enumerate(thing, 1):
            yield from _walk(f"{address}.{i}", value)
    else:
        for key in _fields(thing):
            yield from _walk(f"{address}.{key}", getattr(thing, key, None))


def _fields(thing: Any) -> list[str]:
    if dataclasses.is_dataclass(thing):
        return [f.name for f in dataclasses.fields(thing)]
    return list(getattr(type(thing), "model_fields", {}))


def _text(q: Quantity) -> str:
    return q.text or f"{numbers.short(q.value, _SI_DIGITS)} {si_unit(q.dimension, q.per)}".rstrip()


def _of_quantity(place: str, q: Quantity, source: str | None) -> Input:
    unit = si_unit(q.dimension, q.per)
    si = f"{numbers.short(q.value, _SI_DIGITS)}\u00a0{unit}".rstrip("\u00a0")
    return Input(place, _text(q), si, _uncertainty(q, unit), q.source or source or "", q.note or "")


def _uncertainty(q: Quantity, unit: str) -> str:
    if q.u is None:
        return ""

    def show(x: float) -> str:
        return f"{numbers.short(x, 2)}\u00a0{unit}".rstrip("\u00a0")

    if q.shape == "rectangular":
        return say("basis.u.rectangular", half=show(q.u * 3**0.5))
    if q.shape == "triangular":
        return say("basis.u.triangular", half=show(q.u * 6**0.5))
    if q.k:
        return say("basis.u.expanded", U=show(q.u * q.k), k=numbers.short(q.k, 3))
    return say("basis.u.normal", u=show(q.u))


def section(ctx: Context) -> Section:
    """Inputs, defaults and assumptions."""
    found = inputs(ctx)
    blocks: list[Block] = [Heading(say("basis.inputs"))]
    bare = sum(1 for i in found if not i.source)
    ambient = ctx.brief("dp", ctx.ambient)
    blocks.append(
        Paragraph(
            say("basis.count", n=len(found), sourced=len(found) - bare, unsourced=bare)
            + " "
            + say("basis.pressure", ambient=ambient)
            + " "
            + say("basis.uncertainty")
        )
    )
    columns = [Column(say(f"col.{c}")) for c in ("input", "written", "si", "uncertainty", "source")]
    rows = [_row(i) for i in found]
    blocks.append(ctx.table(say("basis.caption.inputs"), columns, rows))
    if bare:
        names = ", ".join(i.address for i in found if not i.source)
        blocks += [Heading(say("basis.unsourced")), Paragraph(say("basis.unsourced.lead", names=names))]
    sources = pick(pick(ctx.case, "record"), "sources", {})
    if sources:
        columns = [Column(say("col.source")), Column(say("col.citation"))]
        cited = [(Cell(str(k), "code"), Cell(str(v))) for k, v in sources.items()]
        blocks.append(ctx.table(say("basis.caption.sources"), columns, cited))
    blocks.append(Heading(say("basis.defaults")))
    defaults = list(_defaults(ctx))
    if defaults:
        columns = [Column(say(f"col.{c}")) for c in ("item", "meaning", "reading")]
        blocks.append(
            ctx.table(
                say("basis.caption.defaults"),
                columns,
                [(Cell(item, "code"), Cell(meaning), Cell(reading)) for item, meaning, reading in defaults],
            )
        )
    else:
        blocks.append(Paragraph(say("basis.defaults.none")))
    blocks.append(Heading(say("basis.assumptions")))
    stated = pick(pick(ctx.case, "record"), "assumptions", [])
    if stated:
        blocks.append(Bullets(tuple(str(a) for a in stated)))
    else:
        blocks.append(Paragraph(say("basis.assumptions.none"), blank=True))
    open_ones = pick(pick(ctx.case, "record"), "unconfirmed", [])
    if open_ones:
        blocks += [Heading(say("basis.unconfirmed")), Bullets(tuple(str(a) for a in open_ones))]
    return Section("basis", say("basis.title"), tuple(blocks))


def _row(i: Input) -> tuple[Cell, ...]:
    source = Cell(i.source) if i.source else Cell(say("basis.nosource"), "absent")
    spread = Cell(i.uncertainty) if i.uncertainty else Cell(say("basis.nouncertainty"), "absent")
    written = Cell(i.written, "code", mark=i.note)
    return Cell(i.address, "code"), written, Cell(i.si or numbers.ABSENT), spread, source


def _given(ctx: Context, *path: str) -> bool:
    """Whether the case says this itself; taken as said where the case keeps no positions."""
    positions = pick(ctx.case, "positions", {})
    return not positions or tuple(path) in positions


def _defaults(ctx: Context) -> Iterator[tuple[str, str, str]]:
    around = pick(ctx.case, "surroundings")
    if not pick(around, "T_given", True):
        t = pick(ctx.result["surroundings"], "T", 298.15)
        yield "surroundings.T", say("default.surroundings.T"), f"{numbers.short(t, _SI_DIGITS)}\u00a0K"
    if not pick(around, "p_given", True):
        p = pick(ctx.result["surroundings"], "p", P_AMBIENT)
        yield "surroundings.p", say("default.surroundings.p"), f"{numbers.short(p, _SI_DIGITS)}\u00a0Pa"
    if not _given(ctx, "fluid", "datum"):
        yield "fluid.datum", say("default.datum"), str(ctx.result["fluid"]["datum"])
    if not _given(ctx, "fluid", "heat_capacity"):
        yield "fluid.heat_capacity", say("default.heat_capacity"), say("default.heat_capacity.value")
    if pick(ctx.case, "amount") is None:
        yield "amount", say("default.amount"), say("default.amount.value")
    for leg in pick(ctx.case, "legs", []):
        yield from _leg_defaults(ctx, leg)
    heated = [leg for leg in pick(ctx.case, "legs", []) if pick(leg, "path") in _WITH_HEAT]
    if any(pick(leg, "reservoir") is None for leg in heated):
        yield (
            "reservoir",
            say("default.boundary_temperature"),
            say("default.boundary_temperature.value"),
        )
    given = pick(ctx.case, "units", {})
    missing = [k for k in ctx.units.chosen if k not in given or not _given(ctx, "units", k)]
    if missing:
        reading = ", ".join(f"{k}: {pretty(ctx.units.chosen[k])}" for k in missing)
        yield "units", say("default.units"), reading


def _leg_defaults(ctx: Context, leg: Any) -> Iterator[tuple[str, str, str]]:
    name, path = str(pick(leg, "name")), str(pick(leg, "path"))
    to = pick(leg, "to")
    lossy = ("efficiency", "polytropic_efficiency", "against")
    if path == "adiabatic" and pick(to, "work") is None and all(pick(leg, k) is None for k in lossy):
        yield f"{name}.efficiency", say("default.reversible"), say("default.reversible.value")
    if path == "workless" and pick(leg, "pressure_drop") is None and pick(to, "p") is None:
        yield f"{name}.pressure_drop", say("default.pressure_drop"), say("default.pressure_drop.value")
