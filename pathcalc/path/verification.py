"""The equation of the case held against states that a publication prints for it: a check of the program in use."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

import numpy as np

from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.states import States, state_properties
from pathcalc.path.steps import Verified
from pathcalc.quantities import Quantity, convert, parse_text
from pathcalc.substances.reference import CHECK_GIVEN, CHECK_PRINTED, CheckValue

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution


def verified_values(solution: Solution) -> tuple[Verified, ...]:
    """Every printed value of the card's check values, computed now; empty for equations without any.

    A value agrees where it rounds to the printed digits, one unit in the last place allowed.
    """
    path = solution.path
    if path.model.equation != "reference":
        return ()
    from pathcalc.substances.reference_reader import read_reference

    found: list[Verified] = []
    for check in read_reference(path.card).check_values:
        found += _of_one(solution, check)
    return tuple(found)


def _of_one(solution: Solution, check: CheckValue) -> list[Verified]:
    model = solution.path.model
    M = model.M
    pair: dict[str, np.ndarray] = {}
    for key, text in check.given.items():
        q = parse_text(text, (CHECK_GIVEN[key],))
        if key == "rho":
            pair["v"] = np.array([1.0 / _molar(q, M)])
        else:
            pair[key] = np.array([q.value])
    with np.errstate(all="ignore"):
        states = state_properties(model, flash(model, pair))
    at = ", ".join(f"{key} = {text}" for key, text in check.given.items())
    rows = []
    for key, text in check.printed.items():
        q = parse_text(text, (CHECK_PRINTED[key],))
        computed = _in_unit(states, key, q, M)
        printed, digits = _number(text)
        rows.append(Verified(key, at, text, computed, abs(computed - printed) <= 1.0001 * 10.0**-digits, check.source))
    return rows


def _molar(q: Quantity, M: float) -> float:
    """A density in mol/m3."""
    return q.value if q.per == "mole" else q.value / M


def _in_unit(states: States, key: str, q: Quantity, M: float) -> float:
    """The computed property in the unit of the printed one."""
    value = float(getattr(states, key)[0])
    if key in ("cv", "cp") and q.per != "mole":
        value /= M
    if key == "rho" and q.per != "mole":
        value *= M
    return float(convert(value, q.unit))


def _number(text: str) -> tuple[float, int]:
    """The number of a quantity's text and how many decimals it has."""
    number = re.match(r"[-+0-9.]+(?:[eE][-+]?\d+)?", text)
    assert number is not None
    mantissa, _, exponent = number[0].lower().partition("e")
    return float(number[0]), len(mantissa.partition(".")[2]) - int(exponent or 0)
