"""Cautions by fluid and state, what produced the document, the case as written."""

from __future__ import annotations

from collections.abc import Iterator

from pathcalc.report import numbers
from pathcalc.report.context import Context, pick
from pathcalc.report.units import pretty
from pathcalc.report.view import Block, Cell, Column, Heading, Listing, Notice, Paragraph, Section
from pathcalc.report.words import say

_P_EQUIPMENT = 0.5e5
"""Pa above the surroundings, where pressure equipment rules begin: Directive 2014/68/EU, Article 1."""
_P_HIGH = 100e5
"""Pa above the surroundings; common practice, no source."""
_T_COLD = 233.15
"""−40 °C; common practice, no source."""
_T_AIR = 90.2
"""Normal boiling point of oxygen, K; from memory, rounded."""
_T_HOT = 333.15
"""60 °C, to be guarded against touch; common practice, no source."""


def cautions(ctx: Context) -> Section:
    """Standard cautions that the fluid's hazards and the states call for."""
    blocks: list[Block] = [Paragraph(say("cautions.lead"))]
    found = [Notice(say(f"caution.{key}") + ".", text, "caution") for key, text in _cautions(ctx)]
    blocks += found or [Paragraph(say("caution.none"))]
    return Section("cautions", say("cautions.title"), tuple(blocks))


def _cautions(ctx: Context) -> Iterator[tuple[str, str]]:
    pressures = [s["p"] for s in ctx.states if s["p"] is not None]
    temperatures = [s["T"] for s in ctx.states if s["T"] is not None]
    hazards = {h.lower() for h in ctx.solution.basis.hazards}
    if hazards & {"oxidizer", "oxidising", "oxidizing"}:
        hazards.add("oxidiser")
    top, low = max(pressures, default=0.0), min(pressures, default=ctx.ambient)
    if top - ctx.ambient > _P_EQUIPMENT:
        yield "pressure", say("caution.pressure.text", p=ctx.brief("dp", top - ctx.ambient, 4))
        if top - ctx.ambient > _P_HIGH:
            yield "high-pressure", say("caution.high-pressure.text")
        yield "test", say("caution.test.text")
    if low < 0.99 * ctx.ambient:
        yield "vacuum", say("caution.vacuum.text", p=ctx.brief("dp", low, 4))
    coldest, hottest = min(temperatures, default=300.0), max(temperatures, default=300.0)
    if coldest < _T_COLD:
        yield "cold", say("caution.cold.text", T=ctx.brief("T", coldest, 4))
        if coldest < _T_AIR:
            yield "air", say("caution.air.text")
    wet = any("liquid" in str(s.get("phase")) or "two" in str(s.get("phase")) for s in ctx.states)
    if wet and (coldest < _T_COLD or not ctx.flow):
        yield "trapped", say("caution.trapped.text")
    if hottest > _T_HOT:
        yield "hot", say("caution.hot.text", T=ctx.brief("T", hottest, 4))
    for hazard in (
        "oxidiser",
        "flammable",
        "hydrogen",
        "toxic",
        "corrosive",
        "asphyxiant",
        "decomposes",
        "greenhouse",
    ):
        if hazard in hazards:
            yield hazard, say(f"caution.{hazard}.text")


def made(ctx: Context) -> Section:
    """Versions, digest and sources: what it takes to make the document again."""
    case, fluid = ctx.result["case"], ctx.result["fluid"]
    software = ", ".join(f"{name} {version}" for name, version in ctx.result["software"].items())
    rows = [
        (Cell(say("made.software")), Cell(software)),
        (Cell(say("made.id")), Cell(str(case["id"]), "code")),
        (Cell(say("made.digest")), Cell(str(case["sha256"]), "code")),
        (Cell(say("made.equation")), Cell(str(fluid["equation"]))),
    ]
    sources = pick(ctx.solution, "sources_in_words", fluid["sources"])
    rows += [(Cell(say("made.sources")), Cell(_source(s))) for s in sources]
    columns = [Column(say("col.item")), Column(say("col.value"))]
    blocks = (ctx.table(say("made.caption"), columns, rows), Paragraph(say("made.repeat")), *_verified(ctx))
    return Section("made", say("made.title"), blocks)


def _verified(ctx: Context) -> list[Block]:
    """The equation against published values, computed while this document was made."""
    found = ctx.solution.verified
    blocks: list[Block] = [Heading(say("made.verified"))]
    if not found:
        return [*blocks, Paragraph(say("made.verified.none"))]
    columns = [Column(say(f"col.{key}")) for key in ("quantity", "at")]
    columns += [Column(say(f"col.{key}"), numeric=True) for key in ("printed", "computed")]
    columns += [Column(say(f"col.{key}")) for key in ("outcome", "source")]
    rows = []
    for item in found:
        unit = item.printed.partition(" ")[2]
        outcome = Cell(say("made.agrees"), "good") if item.agrees else Cell(say("made.differs"), "bad")
        rows.append(
            (
                Cell(say(f"q.{item.quantity}")),
                Cell(pretty(item.at)),
                Cell(pretty(item.printed), "number"),
                Cell(f"{numbers.significant(item.computed, 10)}\u00a0{pretty(unit)}", "number"),
                outcome,
                Cell(item.source),
            )
        )
    return [*blocks, Paragraph(say("made.verified.lead")), ctx.table(say("made.caption.verified"), columns, rows)]


def _source(source: object) -> str:
    if isinstance(source, dict):
        return ": ".join(str(v) for v in source.values())
    return str(source)


def appendix(ctx: Context) -> Section:
    """The case file and what it includes, as text."""
    listings = [Listing(say("appendix.main"), str(pick(ctx.case, "text", "")))]
    for name, text in pick(ctx.case, "includes", []):
        listings.append(Listing(say("appendix.include", name=name), str(text)))
    return Section("appendix", say("appendix.title"), tuple(listings))
