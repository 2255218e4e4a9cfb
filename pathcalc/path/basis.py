"""What the fluid was taken to be, for the report and for ``explain``."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pathcalc.path.steps import Basis, Constant

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


_PARAMETERS = {
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
    form = getattr(ideal, "form", "given")
    source = getattr(ideal, "source", "")
    formula = getattr(ideal, "formula", "")
    text = f"{form}" + (f": {formula}" if isinstance(formula, str) and formula else "")
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
        ideal_gas_text=text,
        ideal_gas_source=card.sources.get(source, source) or "given in the case",
        ideal_gas_range=reach,
        uncertainty=info.uncertainty,
    )
