"""The sums of :mod:`pathcalc.path.hand_sums` as worked steps."""

from __future__ import annotations

from pathcalc.path.maths import number, rough, signed
from pathcalc.path.steps import HandSum, Step, StepTable

HEADS = (
    "x",
    r"T/\mathrm{K}",
    r"p/\mathrm{kPa}",
    r"v/(\mathrm{m^3/kg})",
    r"c_v/(\mathrm{kJ/(kg\,K)})",
    r"p_T/(\mathrm{kPa/K})",
    r"T_x/\mathrm{K}",
    r"v_x/(\mathrm{m^3/kg})",
    r"s_x/(\mathrm{kJ/(kg\,K)})",
)
DIGITS = 6
UNIT = r"\ \mathrm{kJ/(kg\,K)}"
SIMPSON = "T. Simpson, Mathematical Dissertations (1743); any textbook of numerical methods"


def hand_steps(sums: tuple[HandSum, ...]) -> list[Step]:
    """A step for every stretch of a leg: points and Simpson's rule, or Clapeyron's product."""
    several = len(sums) > 1
    return [_clapeyron(item, several) if item.clapeyron else _simpson(item, several) for item in sums]


def _place(item: HandSum, several: bool) -> str:
    return f", piece {item.number} ({item.phase})" if several else ""


def _clapeyron(item: HandSum, several: bool) -> Step:
    assert item.clapeyron is not None
    T, slope, v_a, v_b = item.clapeyron
    return Step(
        title=f"By hand: Clapeyron's product{_place(item, several)}",
        formula=r"\Delta s=\frac{\mathrm{d}p_\mathrm{sat}}{\mathrm{d}T}\,\Delta v",
        numbers=rf"{number(slope)}\times({number(v_b)}-{number(v_a)})",
        result=rf"{number(item.simpson)}{UNIT}",
        note=f"dp/dT of the saturation line in kPa/K at {T:.7g} K; times T it gives Δh.",
    )


def _simpson(item: HandSum, several: bool) -> Step:
    count = len(item.rows)
    values = [row[-1] for row in item.rows]
    weights = [1, *((4, 2) * (count // 2))[: count - 2], 1]
    terms = [
        signed(value, DIGITS) if weight == 1 else rf"{weight}\times {signed(value, DIGITS)}"
        for weight, value in zip(weights, values, strict=True)
    ]
    apart = abs(item.simpson - item.quadrature)
    rows = tuple(tuple(number(value, DIGITS) for value in row) for row in item.rows)
    return Step(
        title=f"By hand: Simpson's rule over {count} points{_place(item, several)}",
        formula=r"\Delta s\approx\frac{1}{3\,n}\left(s_{x,0}+4\,s_{x,1}+2\,s_{x,2}+\dots+s_{x,n}\right),\quad "
        r"s_x=\frac{c_v}{T}\,T_x+p_T\,v_x",
        numbers=rf"\frac{{1}}{{{3 * (count - 1)}}}\times\left({'+'.join(terms)}\right)",
        result=rf"{number(item.simpson, DIGITS)}{UNIT}",
        source=SIMPSON,
        note=f"The quadrature over this stretch gives {item.quadrature:.7g} kJ/(kg K), {rough(apart)} from the coarse "
        "sum. x runs from 0 to 1, an index x is the slope along it, p_T is (∂p/∂T) at constant v. "
        "From the same points: u_x = T s_x − p v_x.",
        table=StepTable(HEADS, rows),
    )
