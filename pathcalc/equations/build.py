"""From a substance card and the name of an equation to a model.

An equation family is a function ``(card, options) -> Built``. Built-in ones are named here with the module
they live in (imported when asked for); others come in through the entry-point group ``pathcalc.equations``.
"""

from __future__ import annotations

import difflib
import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from importlib import import_module
from importlib.metadata import entry_points
from typing import Any

from pathcalc.equations import ideal_gas
from pathcalc.equations.contract import R_CODATA, EquationInfo, IdealPart, Model, Residual
from pathcalc.errors import UsageError
from pathcalc.substances.card import Card

_BUILT_IN: Mapping[str, str] = {
    "ideal-gas": "pathcalc.equations.families:ideal_gas",
    "van-der-waals": "pathcalc.equations.families:van_der_waals",
    "redlich-kwong": "pathcalc.equations.families:redlich_kwong",
    "soave": "pathcalc.equations.families:soave",
    "peng-robinson": "pathcalc.equations.families:peng_robinson",
    "virial": "pathcalc.equations.families:virial",
    "reference": "pathcalc.equations.helmholtz.reference:reference",
}
_GROUP = "pathcalc.equations"
_T_CEILING = 20000.0
"""Where no correlation sets a limit, nothing is computed above this (K; common practice, no source)."""


@dataclass(frozen=True)
class Options:
    """What a case may say about its equation.

    ``volume_shift``: m3/mol, or "card" for the card's own. ``constants``: "critical" or "card" (van der
    Waals a and b as the card gives them). ``virial``: ``{"B": Coefficient, "C": Coefficient | None}`` in
    place of the correlations.
    """

    volume_shift: float | str = 0.0
    constants: str = "critical"
    virial: Mapping[str, Any] | None = None
    more: Mapping[str, Any] = field(default_factory=dict)


@dataclass(frozen=True)
class Built:
    """What a family hands back: the residual part and the constants that belong to the equation itself.

    ``T_min``/``T_max`` (K) are its own hard limits, ``T_stated`` the range its source states, if it does.
    """

    residual: Residual
    info: EquationInfo
    T_c: float
    p_c: float
    v_c: float
    omega: float
    has_dome: bool
    p_max: float
    R: float = R_CODATA
    T_min: float = 0.0
    T_max: float = math.inf
    T_stated: tuple[float, float] = (0.0, math.inf)
    T_triple: float | None = None
    ideal: IdealPart | None = None
    notes: tuple[str, ...] = ()


Builder = Callable[[Card, Options], Built]


def equation_names() -> list[str]:
    """Names of all equations: built in, then those of installed extensions, sorted within each."""
    extra = sorted({e.name for e in entry_points(group=_GROUP)} - set(_BUILT_IN))
    return [*_BUILT_IN, *extra]


def builder(equation: str) -> Builder:
    """The family called ``equation``; :class:`UsageError` with the nearest name if there is none."""
    place = _BUILT_IN.get(equation)
    if place is not None:
        module, _, name = place.partition(":")
        found: Builder = getattr(import_module(module), name)
        return found
    for entry in entry_points(group=_GROUP):
        if entry.name == equation:
            loaded: Builder = entry.load()
            return loaded
    near = difflib.get_close_matches(equation, equation_names(), 1)
    hint = f"; did you mean {near[0]!r}?" if near else f"; known: {', '.join(equation_names())}"
    raise UsageError(f"unknown equation {equation!r}{hint}")


def build_model(
    card: Card,
    equation: str,
    *,
    heat_capacity: str | float | None = None,
    volume_shift: float | str = 0.0,
    virial: Mapping[str, Any] | None = None,
    constants: str = "critical",
    ideal: IdealPart | None = None,
    more: Mapping[str, Any] | None = None,
) -> Model:
    """A model of the card's substance with the named equation.

    ``heat_capacity``: None (the card's first correlation), the name of another one, or a constant c_p0 in
    J/(mol K); ``ideal`` overrides it with an object. Other arguments: see :class:`Options`. The datum is the
    ideal gas at 298.15 K and 1 bar. Raises :class:`UsageError` for an unknown equation or option and
    :class:`pathcalc.errors.InvalidCaseError` where the card lacks a constant the equation needs.
    """
    plain = virial is None and ideal is None and not more
    key = (id(card), equation, heat_capacity, volume_shift, constants)
    if plain and key in _KEPT:
        return _KEPT[key][1]
    model = _built(card, equation, heat_capacity, ideal, Options(volume_shift, constants, virial, more or {}))
    if plain:
        if len(_KEPT) >= _MOST_KEPT:
            _KEPT.clear()
        _KEPT[key] = (card, model)
    return model


_MOST_KEPT = 64
_KEPT: dict[tuple[Any, ...], tuple[Card, Model]] = {}
"""Models built before, by the card they are of (held, so that its identity stays its own) and the options.

A model does not change; what is worked out for it once (starts of the density roots) is then at hand for the next.
"""


def _built(
    card: Card, equation: str, heat_capacity: str | float | None, ideal: IdealPart | None, options: Options
) -> Model:
    built = builder(equation)(card, options)
    part = _ideal_part(card, built, heat_capacity, ideal)
    T_triple = built.T_triple
    if T_triple is None:
        T_triple = card.T_triple.value if card.has("T_triple") else 0.0
    stated = (max(part.T_min, built.T_stated[0], T_triple), min(part.T_max, built.T_stated[1]))
    lowest = max(T_triple, built.T_min) or max(0.5 * part.T_min, 1.0)
    highest = min(2.0 * part.T_max, built.T_max, _T_CEILING)
    return Model(
        name=card.name,
        equation=equation,
        M=card.molar_mass.value,
        ideal=part,
        residual=built.residual,
        T_c=built.T_c,
        p_c=built.p_c,
        v_c=built.v_c,
        T_triple=T_triple,
        omega=built.omega,
        T_range=(stated[0], min(stated[1], highest)),
        T_limits=(lowest, highest),
        p_max=built.p_max,
        has_dome=built.has_dome,
        R=built.R,
        notes=built.notes,
        info=built.info,
    )


def _ideal_part(card: Card, built: Built, heat_capacity: str | float | None, given: IdealPart | None) -> IdealPart:
    if isinstance(heat_capacity, int | float):
        return ideal_gas.constant(float(heat_capacity) / built.R)
    if heat_capacity is None:
        own = given if given is not None else built.ideal
        if own is not None:
            return own
    return ideal_gas.from_card(card, heat_capacity, built.R)
