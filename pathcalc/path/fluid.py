"""From the fluid block of a case to a model, and the handle that Python users ask for states."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

from pathcalc.equations.build import build_model
from pathcalc.equations.contract import Model
from pathcalc.equations.virial import Coefficient
from pathcalc.equilibrium.datum import with_datum
from pathcalc.errors import Finding, InvalidCaseError
from pathcalc.substances import Card, read_card

if TYPE_CHECKING:
    from pathcalc.case.model import Case
    from pathcalc.quantities.values import Quantity


def card_of(case: Case) -> Card:
    """The substance card of a case: built in, or the user's own."""
    fluid = case.fluid
    if fluid.card_path is not None:
        return read_card(Path(fluid.card_path))
    assert fluid.substance is not None
    return read_card(fluid.substance)


def model_of(case: Case, card: Card, equation: str | None = None) -> Model:
    """The model of a case, or of the same fluid with another equation.

    With another equation a volume shift and virial coefficients of the case are left out. Raises
    InvalidCaseError where the card lacks what the equation needs, NoSolutionError where the equation has no
    liquid at the datum.
    """
    fluid = case.fluid
    own = equation is None or equation == fluid.equation
    name = fluid.equation if equation is None else equation
    options: dict[str, Any] = {}
    if own and fluid.volume_shift is not None:
        options["volume_shift"] = _molar(fluid.volume_shift, card)
    if own and fluid.virial is not None:
        T_ref = 300.0 if fluid.virial.T_ref is None else fluid.virial.T_ref.value
        options["virial"] = {
            key: None if series is None else _series(series, T_ref)
            for key, series in (("B", fluid.virial.B), ("C", fluid.virial.C))
        }
    heat = fluid.heat_capacity
    if heat is not None:
        if heat.correlation is not None:
            _check_correlation(case, card, heat.correlation)
            options["heat_capacity"] = heat.correlation
        elif heat.value is not None:
            options["heat_capacity"] = _molar(heat.value, card)
        else:
            options["heat_capacity"] = _constant_at_start(case, card, name)
    try:
        built = build_model(card, name, **options)
    except InvalidCaseError as error:
        if fluid.card_path is None:
            raise
        where = _place(case, "fluid", "equation")
        text = "; ".join(finding.message for finding in error.findings)
        message = f"the equation {name} cannot be used with this card: {text}"
        raise InvalidCaseError([Finding(*where, message, error.findings[0].code)]) from error
    return with_datum(built, fluid.datum)


def _molar(q: Quantity, card: Card) -> float:
    return q.value if q.per == "mole" else q.value * card.molar_mass.value


def _series(coefficients: tuple[Quantity, ...], T_ref: float) -> Coefficient:
    terms = tuple((q.value, float(k)) for k, q in enumerate(coefficients))
    named = [q.source for q in coefficients if q.source is not None]
    return Coefficient(T_ref, terms, named[0] if named else "given in the case")


def _place(case: Case, *keys: str) -> tuple[str, int, int]:
    for length in range(len(keys), 0, -1):
        mark = case.positions.get(keys[:length])
        if mark is not None:
            return mark.file, mark.line, mark.column
    return str(case.path or case.id), 1, 1


def _constant_at_start(case: Case, card: Card, equation: str) -> float:
    T = case.start.get("T")
    if T is None or isinstance(T, str):
        where = _place(case, "fluid", "heat_capacity")
        text = "a constant heat capacity is taken at start.T; give T in start, or the heat capacity as a value"
        raise InvalidCaseError([Finding(*where, text, "missing-key")])
    import numpy as np

    model = build_model(card, equation)
    return float(model.R * model.ideal.cp0_R(np.array([T.value]))[0])


def _check_correlation(case: Case, card: Card, name: str) -> None:
    known = [c.name for c in card.ideal_gas]
    if name not in known:
        where = _place(case, "fluid", "heat_capacity", "correlation")
        text = f"the card of {card.name} has no heat capacity {name!r}; it has {', '.join(known)}"
        raise InvalidCaseError([Finding(*where, text, "unknown-name")])
