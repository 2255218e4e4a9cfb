"""A fluid for Python users who want states without a case file."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np

from pathcalc.equations.build import build_model
from pathcalc.equations.contract import Model
from pathcalc.equilibrium.datum import with_datum
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.points import PHASES
from pathcalc.equilibrium.reasons import REASONS, trouble
from pathcalc.equilibrium.states import state_properties
from pathcalc.errors import NoSolutionError, UsageError
from pathcalc.path.values import PER_MASS, STATE_KEYS, Record
from pathcalc.substances import Card, read_card

_PAIR_KEYS = ("T", "p", "v", "rho", "u", "h", "s", "x", "superheat", "subcooling")


class FluidHandle:
    """A substance with an equation; ``state`` gives its properties, SI per kilogram."""

    def __init__(self, card: Card, model: Model) -> None:
        self.card = card
        self.model = model

    def __repr__(self) -> str:
        return f"<fluid {self.card.name}, {self.model.equation}>"

    def state(self, **pair: Any) -> Record:
        """Properties at two of T p v rho u h s x superheat subcooling; scalars or arrays that broadcast.

        SI per kilogram. With scalars the values are plain numbers and NoSolutionError is raised where there is no
        state; with arrays such lanes hold NaN, and ``reason`` (text, or None) tells why.
        """
        if len(pair) != 2 or any(key not in _PAIR_KEYS for key in pair):
            raise UsageError(f"give two of {', '.join(_PAIR_KEYS)}; got {', '.join(pair) or 'nothing'}")
        scalar = all(np.ndim(value) == 0 for value in pair.values())
        arrays = np.broadcast_arrays(*(np.asarray(value, dtype=float) for value in pair.values()))
        shape, M = arrays[0].shape, self.model.M
        molar = {}
        for key, value in zip(pair, arrays, strict=True):
            flat = np.ascontiguousarray(value).reshape(-1)
            molar[key] = flat * M if key in ("v", *PER_MASS) else flat / M if key == "rho" else flat
        points = flash(self.model, molar)
        if scalar and points.reason[0] != 0:
            raise NoSolutionError(trouble(int(points.reason[0]), self.card.name))
        states = state_properties(self.model, points)
        values: dict[str, Any] = {}
        for key in STATE_KEYS[:-1]:
            if key == "phase":
                out: Any = np.array([PHASES[int(k)] for k in points.phase], dtype=object)
            elif key == "v":
                out = points.v / M
            elif key == "rho":
                out = M / points.v
            else:
                out = getattr(states, key) / (M if key in PER_MASS else 1.0)
            values[key] = _shaped(out, shape, scalar)
        if not scalar:
            texts = [None if r == 0 else REASONS[int(r)].text for r in points.reason]
            values["reason"] = _shaped(np.array(texts, dtype=object), shape, False)
        return Record(values)


def _shaped(value: Any, shape: tuple[int, ...], scalar: bool) -> Any:
    if scalar:
        return value[0] if value.dtype == object else float(value[0])
    return value.reshape(shape)


def fluid(
    name: str | Path, equation: str = "peng-robinson", datum: str = "ideal-gas-298", **options: Any
) -> FluidHandle:
    """A built-in substance (by name) or a card file with an equation of state.

    ``options`` are those of :func:`pathcalc.equations.build.build_model` (``heat_capacity``, ``volume_shift``, …),
    molar SI. Raises UsageError or InvalidCaseError for unknown names.
    """
    card = read_card(name)
    return FluidHandle(card, with_datum(build_model(card, equation, **options), datum))
