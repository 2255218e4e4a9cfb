"""The sums of :mod:`pathcalc.path.hand_sums` as worked steps."""

from __future__ import annotations

from pathcalc.path.hand_sums import Integrand, total_of, values_of
from pathcalc.path.maths import number, rough, signed
from pathcalc.path.steps import HandSum, Step, StepTable
from pathcalc.words import say, say_of

HEADS = (
    r"\xi",
    r"T/\mathrm{K}",
    r"p/\mathrm{kPa}",
    r"v/(\mathrm{m^3/kg})",
    r"c_v/(\mathrm{kJ/(kg\,K)})",
    r"p_T/(\mathrm{kPa/K})",
    r"T_\xi/\mathrm{K}",
    r"v_\xi/(\mathrm{m^3/kg})",
    r"s_\xi/(\mathrm{kJ/(kg\,K)})",
)
DIGITS = 6
UNIT = r"\ \mathrm{kJ/(kg\,K)}"


def hand_steps(sums: tuple[HandSum, ...]) -> list[Step]:
    """A step for every stretch of a leg: points and Simpson's rule, or Clapeyron's product."""
    several = len(sums) > 1
    steps = [_clapeyron(item, several) if item.clapeyron else _simpson(item, several) for item in sums]
    if several:
        steps.append(
            Step(
                title=say("step.hand.sum"),
                formula=r"\Delta s=\sum_k \Delta s_k",
                numbers="+".join(signed(item.simpson, DIGITS) for item in sums),
                result=rf"{number(sum(item.simpson for item in sums), DIGITS)}{UNIT}",
            )
        )
    return steps


def by_hand(sums: tuple[HandSum, ...], integrand: Integrand, formula: str, known: float) -> list[Step]:
    """An energy (kJ/kg) from the same points, one term a stretch. Nothing where they do not make up the ``known`` one,

    as where a stretch without change of entropy is not among them.
    """
    found = [values_of(item, integrand) for item in sums]
    terms = [total_of(values) for values in found]
    total = sum(terms)
    if not terms or abs(total - known) > 0.01 * sum(abs(term) for term in terms):
        return []
    numbers = "+".join(signed(term, DIGITS) for term in terms)
    if len(found) == 1 and len(found[0]) > 1:
        numbers = _weighted(found[0])
    note = say("note.hand.energy", quadrature=f"{known:.7g}")
    return [Step(say("step.hand.energy"), formula, numbers, rf"{number(total, DIGITS)}\ \mathrm{{kJ/kg}}", note=note)]


def _weighted(values: list[float]) -> str:
    """Simpson's rule with the values put in."""
    count = len(values)
    weights = [1, *((4, 2) * (count // 2))[: count - 2], 1]
    terms = [
        signed(value, DIGITS) if weight == 1 else rf"{weight}\times {signed(value, DIGITS)}"
        for weight, value in zip(weights, values, strict=True)
    ]
    return rf"\frac{{1}}{{{3 * (count - 1)}}}\times\left({'+'.join(terms)}\right)"


def _titled(title: str, item: HandSum, several: bool) -> str:
    if not several:
        return title
    return say("step.hand.piece", title=title, n=item.number, phase=say_of("phase", item.phase))


def _clapeyron(item: HandSum, several: bool) -> Step:
    assert item.clapeyron is not None
    T, slope, v_a, v_b, _p = item.clapeyron
    return Step(
        title=_titled(say("step.hand.clapeyron"), item, several),
        formula=r"\Delta s=\frac{\mathrm{d}p_\mathrm{sat}}{\mathrm{d}T}\,\Delta v",
        numbers=rf"{number(slope)}\times({number(v_b)}-{number(v_a)})",
        result=rf"{number(item.simpson)}{UNIT}",
        note=say("note.hand.clapeyron", T=f"{T:.7g}"),
    )


def _simpson(item: HandSum, several: bool) -> Step:
    count = len(item.rows)
    apart = abs(item.simpson - item.quadrature)
    rows = tuple(tuple(number(value, DIGITS) for value in row) for row in item.rows)
    return Step(
        title=_titled(say("step.hand.simpson", n=count), item, several),
        formula=r"\Delta s\approx\frac{1}{3\,n}\left(s_{\xi,0}+4\,s_{\xi,1}+2\,s_{\xi,2}+\dots+s_{\xi,n}\right),\quad "
        r"s_\xi=\frac{c_v}{T}\,T_\xi+p_T\,v_\xi",
        numbers=_weighted([row[-1] for row in item.rows]),
        result=rf"{number(item.simpson, DIGITS)}{UNIT}",
        source=say("source.simpson"),
        note=say("note.hand.simpson", quadrature=f"{item.quadrature:.7g}", apart=rough(apart)),
        table=StepTable(HEADS, rows),
    )
