"""Worked steps: symbols, then numbers, then result; the states together, then leg by leg."""

from __future__ import annotations

from pathcalc.path.steps import StateParts, Step
from pathcalc.report import numbers
from pathcalc.report.context import Context
from pathcalc.report.units import pretty
from pathcalc.report.view import Block, Formulas, Heading, Paragraph, Section, Symbols, Worked
from pathcalc.report.words import say
from pathcalc.words import say_of

_ABREAST = 5
"""States in one table, so that it fits a printed page."""

_ONE_PHASE = (
    (r"p=\frac{R\,T}{v}\left(1+\delta\alpha^\mathrm{r}_\delta\right)", "p"),
    (r"h=h^\circ+R\,T\left(\tau\alpha^\mathrm{r}_\tau+\delta\alpha^\mathrm{r}_\delta\right)", "h"),
    (
        r"s=s^\circ+R\,\ln\frac{p^\circ v}{R\,T}+R\left(\tau\alpha^\mathrm{r}_\tau-\alpha^\mathrm{r}\right),"
        r"\quad p^\circ=100\ \mathrm{kPa}",
        "s",
    ),
    (
        r"h^\circ=h_c+\int_{298.15\ \mathrm{K}}^{T}c_p^\circ\,\mathrm{d}T,\quad "
        r"s^\circ=s_c+\int_{298.15\ \mathrm{K}}^{T}\frac{c_p^\circ}{T}\,\mathrm{d}T",
        "ideal",
    ),
    (r"u=h-p\,v,\quad a=u-T\,s,\quad g=h-T\,s,\quad Z=\frac{p\,v}{R\,T}", "rest"),
    (r"c_v=c_p^\circ-R-R\,\tau^2\alpha^\mathrm{r}_{\tau\tau},\quad c_p=c_v-T\,\frac{p_T^2}{p_v}", "heat"),
    (
        r"p_T=\frac{R}{v}\left(1+\delta\alpha^\mathrm{r}_\delta-\delta\tau\alpha^\mathrm{r}_{\delta\tau}\right),\quad "
        r"p_v=-\frac{R\,T}{v^2}\left(1+2\,\delta\alpha^\mathrm{r}_\delta"
        r"+\delta^2\alpha^\mathrm{r}_{\delta\delta}\right)",
        "slopes",
    ),
    (r"c=v\sqrt{-\frac{c_p}{c_v}\,p_v}", "sound"),
    (
        r"\mu=-\frac{v}{c_p}\,\frac{\delta\alpha^\mathrm{r}_\delta+\delta\tau\alpha^\mathrm{r}_{\delta\tau}"
        r"+\delta^2\alpha^\mathrm{r}_{\delta\delta}}{1+2\,\delta\alpha^\mathrm{r}_\delta"
        r"+\delta^2\alpha^\mathrm{r}_{\delta\delta}}",
        "throttling",
    ),
    (r"\alpha=-\frac{p_T}{v\,p_v},\quad \kappa_T=-\frac{1}{v\,p_v}", "stretch"),
    (r"\ln\varphi=\alpha^\mathrm{r}+Z-1-\ln Z", "fugacity"),
)
_TWO_PHASES = ((r"x=\frac{v-v'}{v''-v'},\quad h=h'+x\,(h''-h'),\quad s=s'+x\,(s''-s')", "mixed"),)


def section(ctx: Context) -> Section:
    """What the states are put together from, then every explanation under the leg it belongs to."""
    known = ctx.derivations
    if not known.groups:
        return Section("worked", say("worked.title"), (Paragraph(say("worked.none"), blank=True),))
    blocks: list[Block] = [Paragraph(say("worked.lead"))]
    factors = _factors(ctx)
    if factors:
        blocks.append(Paragraph(say("worked.lead.factors", factors="; ".join(factors))))
    if known.parts:
        blocks += _states(ctx)
    for name, groups in known.groups.items():
        blocks.append(Heading(_heading(ctx, name)))
        for group in groups:
            title = say("worked.for", quantities=", ".join(group.addresses))
            blocks.append(Worked(title, group.steps, group.anchor))
    return Section("worked", say("worked.title"), tuple(blocks))


def _heading(ctx: Context, name: str) -> str:
    if name == "totals":
        return say("worked.totals")
    if name == "start":
        return say("worked.start")
    if name == "cycle":
        return say("results.cycle")
    leg = next((leg for leg in ctx.legs if leg["name"] == name), None)
    if leg is None:
        return name
    way = f"{ctx.state_number(leg['from'])}\u2009→\u2009{ctx.state_number(leg['to'])}"
    return say("worked.leg", way=way, name=name, path=say_of("path", leg["path"]))


def _states(ctx: Context) -> list[Block]:
    parts = ctx.derivations.parts
    single, wet = [p for p in parts if not p.wet], [p for p in parts if p.wet]
    blocks: list[Block] = [Heading(say("worked.states")), Paragraph(say("worked.states.lead"))]
    if single:
        blocks.append(Formulas(tuple((latex, say(f"worked.states.{key}")) for latex, key in _ONE_PHASE)))
        h_c, s_c = (numbers.short(value, 8) for value in single[0].datum)
        blocks.append(Paragraph(say("worked.states.datum", h=h_c, s=s_c)))
        blocks += _tables(ctx, "worked.states.caption", single)
    if wet:
        blocks.append(Formulas(tuple((latex, say(f"worked.states.{key}")) for latex, key in _TWO_PHASES)))
        blocks += _tables(ctx, "worked.states.caption.wet", wet)
    full = ctx.derivations.in_full
    steps = _in_full(ctx, full)
    if steps:
        title = say("worked.states.full", n=ctx.state_number(full), name=full)
        blocks.append(Worked(title, steps))
    return blocks


def _in_full(ctx: Context, name: str) -> tuple[Step, ...]:
    """The steps of one state from its temperature and volume to every property."""
    explanations = ctx.solution.explanations
    keys = ("p", "h", "s", "u", "a", "g", "Z", "cv", "cp", "expansivity", "compressibility", "sound_speed",
            "joule_thomson", "fugacity_coefficient")  # fmt: skip
    return tuple(step for key in keys for step in explanations.get(f"{name}.{key}", ()) if step.numbers)


def _tables(ctx: Context, caption: str, states: list[StateParts]) -> list[Block]:
    blocks: list[Block] = []
    for i in range(0, len(states), _ABREAST):
        some = states[i : i + _ABREAST]
        heads = [say("col.symbol"), say("col.meaning"), say("col.unit")]
        heads += [_head(ctx, s.state) for s in some]
        rows = []
        for j, part in enumerate(some[0].parts):
            values = [_shown(s.parts[j].value) for s in some]
            rows.append((part.symbol, say(f"part.{part.key}"), pretty(part.unit), *values))
        anchors = ("", "", "", *(ctx.derivations.state_anchor(s.state) for s in some))
        blocks.append(Symbols(say(caption), tuple(heads), tuple(rows), ctx.number_table(), 3, anchors))
    return blocks


def _factors(ctx: Context) -> list[str]:
    """Conversions from the units of the formulas to those of the tables, where they differ."""
    pairs = [("e", "kJ/kg", 1e3), ("s", "kJ/(kg K)", 1e3), ("dp", "kPa", 1e3), ("v", "m³/kg", 1.0)]
    pairs += [("total", "kW" if ctx.flow else "kJ", 1e3), ("amount", "kg/s" if ctx.flow else "kg", 1.0)]
    found = []
    for kind, unit, si in pairs:
        scale = ctx.units[kind]
        if scale.unit != unit:
            found.append(f"1\u00a0{unit} = {numbers.short(scale.factor * si, 8)}\u00a0{scale.unit}")
    return found


def _head(ctx: Context, name: str) -> str:
    if any(state["name"] == name for state in ctx.states):
        return say("worked.state", n=ctx.state_number(name), name=name)
    return say("worked.dead")


def _shown(value: float) -> str:
    return numbers.short(value, 7)
