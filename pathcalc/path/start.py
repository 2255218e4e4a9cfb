"""The first state and the amount of a path, from the case to molar SI."""

from __future__ import annotations

import numpy as np

from pathcalc.case.model import Case
from pathcalc.equations.contract import Array, Model
from pathcalc.legs.run import Place, Setting
from pathcalc.quantities.values import Quantity


def start_place(case: Case, setting: Setting) -> Place:
    """The state that ``start`` gives; lanes that have none are marked."""
    pair: dict[str, Array] = {}
    for key, given in case.start.items():
        lanes = setting.override(f"start.{key}")
        if key == "phase":
            pair["x"] = np.full(setting.n, 0.0 if given == "saturated-liquid" else 1.0)
            continue
        assert isinstance(given, Quantity)
        value = setting.molar(given) if lanes is None else setting.to_molar(lanes, given.dimension)
        if key == "rho":
            key, value = "v", 1.0 / value
        pair[key] = value
    return setting.place(setting.flash("start", **pair))


def moles_of(case: Case, model: Model, start: Place, setting: Setting) -> Array | None:
    """Amount of substance (mol, or mol/s in flow), or None where the case gives none."""
    lanes = setting.override("amount")
    if lanes is not None:
        return lanes / model.M
    q = case.amount
    if q is None:
        return None
    value = np.full(setting.n, q.value)
    if q.dimension.startswith("mass"):
        return value / model.M
    if q.dimension.startswith("mole"):
        return value
    return value / start.v
