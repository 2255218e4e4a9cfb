"""What the fluid was taken to be, for the report and for ``explain``."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from pathcalc.equations.ideal_gas_text import coefficients
from pathcalc.equations.ideal_gas_text import formula as formula_of
from pathcalc.path.steps import Basis, Constant
from pathcalc.substances import Card

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution

_CONSTANTS = (
    ("molar_mass", "M", "molar mass", "kg/mol"),
    ("T_c", "T_c", "critical temperature", "K"),
    ("p_c", "p_c", "critical pressure", "Pa"),
    ("rho_c", r"\rho_c", "critical density", "mol/m3"),
    ("acentric", r"\omega", "acentric factor", "1"),
    ("T_triple", "T_t", "triple-point temperature", "K"),
    ("p_triple", "p_t", "triple-point pressure", "Pa"),
    ("T_nbp", "T_b", "boiling point at 101 325 Pa", "K"),
)


_FORMS = {
    "nasa9": "polynomial of nine constants",
    "planck-einstein": "Planck–Einstein terms",
    "polynomial": "polynomial",
    "constant": "constant",
    "hyperbolic": "hyperbolic terms",
}
"""Names of the forms of the ideal-gas heat capacity in words."""

_PARAMETERS = {
    "N": "number of terms",
    "T_r": "reducing temperature",
    r"\rho_r": "reducing density",
    r"\rho_c": "critical density",
    "R": "molar gas constant",
    "T_c": "critical temperature",
    "p_c": "critical pressure",
    r"\omega": "acentric factor",
    "m": "slope of the attraction function",
    "a_c": "attraction at the critical temperature",
    "b": "co-volume",
    "c": "volume shift, v = v(equation) - c",
}


def basis_of(solution: Solution) -> Basis:
    """Constants of the card, the equation with its parameters, the heat capacity, each with its source."""
    card, model = solution.path.card, solution.path.model
    constants = []
    for key, symbol, text, unit in _CONSTANTS:
        if card.has(key):
            item = getattr(card, key)
            source = card.citation(item.source)
            if item.note:
                source = f"{source} ({item.note})"
            constants.append(Constant(symbol, text, item.value, unit, source))
    info = model.info
    assert info is not None
    parameters = tuple(
        Constant(p.symbol, _PARAMETERS.get(p.symbol, "parameter of the equation"), p.value, p.unit, p.source)
        for p in info.parameters
    )
    ideal = model.ideal
    formula, rows = _ideal_gas(card, ideal)
    source, form = getattr(ideal, "source", ""), str(getattr(ideal, "form", "given"))
    low, high = ideal.T_min, ideal.T_max
    reach = "constant, no range stated" if not high < 1e9 else f"{low:.6g} K to {high:.6g} K"
    return Basis(
        substance=card.name,
        formula=card.formula,
        hazards=tuple(card.hazards),
        constants=tuple(constants),
        equation_title=info.title,
        equation_formula=info.formula,
        parameters=parameters,
        equation_source=info.source,
        range_text=info.range_text,
        ideal_gas_text=_FORMS.get(form, form),
        ideal_gas_source=card.sources.get(source, source) or "given in the case",
        ideal_gas_range=reach,
        ideal_gas_formula=formula,
        ideal_gas_parameters=rows,
        remarks=tuple(card.remarks),
        uncertainty=info.uncertainty,
    )


def _ideal_gas(card: Card, ideal: Any) -> tuple[str, tuple[Constant, ...]]:
    """Formula and coefficients of the ideal-gas heat capacity; the R of its source among them."""
    name = getattr(ideal, "name", "")
    if name not in [item.name for item in card.ideal_gas]:
        value = float(ideal.cp0_R(np.array([298.15]))[0])
        return r"\frac{c_p^\circ}{R} = c_1", (Constant("c_1", "constant", value, "1", "given in the case"),)
    item = card.correlation(name)
    source = card.citation(item.source)
    rows = [Constant("R", "gas constant of the source", item.gas_constant, "J/(mol K)", source)]
    several = len(item.ranges) > 1
    for c in coefficients(item):
        reach = f"{c.T_min:g} K to {c.T_max:g} K" if several else "coefficient"
        rows.append(Constant(c.symbol, reach, c.value, c.unit, source))
    return formula_of(item), tuple(rows)
