"""What the fluid was taken to be, and how the legs were worked out."""

from __future__ import annotations

import re

from pathcalc.path.steps import Constant
from pathcalc.report import numbers
from pathcalc.report.context import Context
from pathcalc.report.units import pretty
from pathcalc.report.view import Block, Bullets, Cell, Column, Formulas, Paragraph, Section, Symbols
from pathcalc.report.words import WORDS, say

_LOW = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
_D = r"\mathrm{d}"
_ROUTE_1 = (
    (
        rf"{_D}s = \frac{{c_v}}{{T}}\,{_D}T + \left(\frac{{\partial p}}{{\partial T}}\right)_v {_D}v",
        "method.dsT",
    ),
    (
        rf"{_D}s = \frac{{c_p}}{{T}}\,{_D}T - \left(\frac{{\partial v}}{{\partial T}}\right)_p {_D}p",
        "method.dsp",
    ),
    (
        rf"{_D}u = c_v\,{_D}T + \left[T\left(\frac{{\partial p}}{{\partial T}}\right)_v - p\right]{_D}v",
        "method.duT",
    ),
    (
        rf"{_D}h = c_p\,{_D}T + \left[v - T\left(\frac{{\partial v}}{{\partial T}}\right)_p\right]{_D}p",
        "method.dhp",
    ),
    (
        r"c_v(T,v) = c_v^{0}(T) + "
        rf"T\int_{{\infty}}^{{v}}\left(\frac{{\partial^2 p}}{{\partial T^2}}\right)_v {_D}v",
        "method.cv",
    ),
    (rf"\Delta s = \frac{{{_D}p_{{\mathrm{{sat}}}}}}{{{_D}T}}\,\Delta v", "method.clapeyron"),
)
_EXERGY = {
    "flow": r"e_x = (h - h_0) - T_0\,(s - s_0)",
    "closed": r"e_x = (u - u_0) + p_0\,(v - v_0) - T_0\,(s - s_0)",
}
_GENERATED = r"s_{\mathrm{gen}} = \Delta s - \int \frac{\delta q}{T_b}"


def section(ctx: Context) -> Section:
    """Fluid, equation of state, constants, ranges and sources."""
    basis = ctx.solution.basis
    result = ctx.result["fluid"]
    datum = str(result["datum"])
    blocks: list[Block] = [
        Paragraph(
            say(
                "fluid.lead",
                substance=basis.substance,
                formula=subscripted(basis.formula),
                molar_mass=numbers.short(result["molar_mass"] * 1e3, 8),
                equation=basis.equation_title,
            )
        )
    ]
    if basis.equation_formula:
        blocks.append(Formulas(((basis.equation_formula, ""),)))
    if basis.equation_note:
        blocks.append(Paragraph(basis.equation_note))
    columns = [Column(say(f"col.{c}")) for c in ("item", "model", "range", "source")]
    models = (
        ("fluid.equation", basis.equation_title, basis.range_text, basis.equation_source),
        ("fluid.ideal", basis.ideal_gas_text, basis.ideal_gas_range, basis.ideal_gas_source),
    )
    rows = [(Cell(say(words)), *(Cell(t or numbers.ABSENT) for t in texts)) for words, *texts in models]
    blocks.append(ctx.table(say("fluid.caption.models"), columns, rows))
    if basis.uncertainty:
        blocks += [Paragraph(say("fluid.uncertainty")), Bullets(tuple(basis.uncertainty))]
    blocks.append(Paragraph(say("fluid.datum", datum=WORDS.get(f"fluid.datum.{datum}", datum))))
    cited = _Cited()
    if basis.constants:
        blocks.append(_symbols(ctx, "fluid.caption.constants", basis.constants, cited))
    if basis.parameters:
        blocks.append(_symbols(ctx, "fluid.caption.parameters", basis.parameters, cited))
    if basis.ideal_gas_formula:
        blocks.append(Formulas(((basis.ideal_gas_formula, say("fluid.ideal.formula")),)))
    if basis.ideal_gas_parameters:
        blocks.append(_symbols(ctx, "fluid.caption.ideal", basis.ideal_gas_parameters, cited))
    if cited.texts:
        blocks += [Paragraph(say("fluid.sources")), Bullets(tuple(cited.listed()))]
    if basis.remarks:
        blocks += [Paragraph(say("fluid.remarks")), Bullets(tuple(basis.remarks))]
    return Section("fluid", say("fluid.title"), tuple(blocks))


class _Cited:
    """Citations by number, so that a table need not repeat them; a remark after one stays with its row."""

    def __init__(self) -> None:
        self.texts: list[str] = []

    def number(self, source: str) -> str:
        """What stands in the row: ``[1]`` and what the source adds to citation 1."""
        if not source:
            return say("basis.nosource")
        for i, text in enumerate(self.texts, 1):
            if source == text or source.startswith((text + " (", text + "; ")):
                return f"[{i}]{source[len(text) :]}"
        self.texts.append(source)
        return f"[{len(self.texts)}]"

    def listed(self) -> list[str]:
        """The citations with their numbers."""
        return [f"[{i}] {text}" for i, text in enumerate(self.texts, 1)]


def _symbols(ctx: Context, caption: str, constants: tuple[Constant, ...], cited: _Cited) -> Symbols:
    rows = tuple(
        (
            c.symbol,
            c.text,
            numbers.short(c.value, 12),
            "" if c.unit == "1" else pretty(c.unit),
            cited.number(c.source),
        )
        for c in constants
    )
    heads = tuple(say(f"col.{c}") for c in ("symbol", "meaning", "value", "unit", "source"))
    return Symbols(say(caption), heads, rows, ctx.number_table())


def subscripted(formula: str) -> str:
    """A chemical formula with its counts set low (NH3 → NH₃)."""
    return re.sub(r"(?<=[A-Za-z)])\d+", lambda m: m[0].translate(_LOW), formula)


def method(ctx: Context) -> Section:
    """The two routes, their differentials, and the definitions used."""
    mode = "flow" if ctx.flow else "closed"
    blocks: tuple[Block, ...] = (
        Paragraph(say("method.route1")),
        Formulas(tuple((latex, say(words)) for latex, words in _ROUTE_1)),
        Paragraph(say("method.route2")),
        Paragraph(say("method.closure")),
        Formulas(((_EXERGY[mode], say(f"method.exergy.{mode}")), (_GENERATED, say("method.generated")))),
        Paragraph(say("method.source")),
    )
    return Section("method", say("method.title"), blocks)
