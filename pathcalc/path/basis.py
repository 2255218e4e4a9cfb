"""What the fluid was taken to be, for the report and for ``explain``."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from pathcalc.equations.ideal_gas_text import coefficients
from pathcalc.equations.ideal_gas_text import formula as formula_of
from pathcalc.path.steps import Basis, Constant
from pathcalc.substances import Card
from pathcalc.words import say, say_of

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution

_CONSTANTS = (
    ("molar_mass", "M", "kg/mol"),
    ("T_c", "T_c", "K"),
    ("p_c", "p_c", "Pa"),
    ("rho_c", r"\rho_c", "mol/m3"),
    ("acentric", r"\omega", "1"),
    ("T_triple", "T_t", "K"),
    ("p_triple", "p_t", "Pa"),
    ("T_nbp", "T_b", "K"),
)

_PARAMETERS = {
    "N": "terms",
    "T_r": "T_r",
    r"\rho_r": "rho_r",
    r"\rho_c": "rho_c",
    "R": "R",
    "T_c": "T_c",
    "p_c": "p_c",
    r"\omega": "acentric",
    "m": "slope",
    "a_c": "attraction",
    "b": "covolume",
    "c": "shift",
}
"""Symbols of the parameters of the equations, and what they are called in the catalogue of words."""


def basis_of(solution: Solution) -> Basis:
    """Constants of the card, the equation with its parameters, the heat capacity, each with its source."""
    card, model = solution.path.card, solution.path.model
    constants = []
    for key, symbol, unit in _CONSTANTS:
        if card.has(key):
            item = getattr(card, key)
            source = card.citation(item.source)
            if item.note:
                source = f"{source} ({item.note})"
            constants.append(Constant(symbol, say(f"constant.{key}"), item.value, unit, source))
    info = model.info
    assert info is not None
    parameters = tuple(
        Constant(p.symbol, say(f"parameter.{_PARAMETERS.get(p.symbol, 'other')}"), p.value, p.unit, str(p.source))
        for p in info.parameters
    )
    ideal = model.ideal
    formula, rows = _ideal_gas(card, ideal)
    source, form = getattr(ideal, "source", ""), str(getattr(ideal, "form", "given"))
    low, high = ideal.T_min, ideal.T_max
    reach = _range(low, high, 6) if high < 1e9 else say("reach.none")
    return Basis(
        substance=card.name,
        formula=card.formula,
        hazards=tuple(card.hazards),
        constants=tuple(constants),
        equation_title=str(info.title),
        equation_formula=info.formula,
        parameters=parameters,
        equation_source=str(info.source),
        range_text=str(info.range_text),
        ideal_gas_text=say_of("form", form),
        ideal_gas_source=card.sources.get(source, source) or say("source.case"),
        ideal_gas_range=reach,
        ideal_gas_formula=formula,
        ideal_gas_parameters=rows,
        remarks=tuple(card.remarks),
        uncertainty=info.uncertainty,
        equation_note=_coefficients(card) if model.equation == "reference" else "",
    )


def _coefficients(card: Card) -> str:
    """Where the coefficients of an equation of many terms stand."""
    from pathcalc.substances.reference_reader import read_reference

    found = read_reference(card)
    count = sum(len(table.rows) for table in found.terms)
    place = f"{found.citation(found.source)}{'; ' + found.table if found.table else ''}"
    return say("note.coefficients", n=count, place=place)


def _ideal_gas(card: Card, ideal: Any) -> tuple[str, tuple[Constant, ...]]:
    """Formula and coefficients of the ideal-gas heat capacity; the R of its source among them."""
    name = getattr(ideal, "name", "")
    if name not in [item.name for item in card.ideal_gas]:
        value = float(ideal.cp0_R(np.array([298.15]))[0])
        return r"\frac{c_p^\circ}{R} = c_1", (
            Constant("c_1", say("parameter.constant"), value, "1", say("source.case")),
        )
    item = card.correlation(name)
    source = card.citation(item.source)
    rows = [Constant("R", say("parameter.R_source"), item.gas_constant, "J/(mol K)", source)]
    several = len(item.ranges) > 1
    for c in coefficients(item):
        reach = _range(c.T_min, c.T_max, 6) if several else say("parameter.coefficient")
        rows.append(Constant(c.symbol, reach, c.value, c.unit, source))
    return formula_of(item), tuple(rows)


def _range(low: float, high: float, digits: int) -> str:
    return say("reach.range", low=f"{low:.{digits}g} K", high=f"{high:.{digits}g} K")
