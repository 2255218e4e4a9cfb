"""The first state and the amount of a path, from the case to molar SI."""

from __future__ import annotations

from pathcalc.case.model import Case
from pathcalc.equations.contract import Array
from pathcalc.legs.run import Place, Setting
from pathcalc.quantities.values import Quantity


def start_place(case: Case, setting: Setting) -> Place:
    """The state that ``start`` gives; lanes that have none are marked."""
    return setting.place(setting.flash("start", **setting.pair(case.start, "start")))


def moles_of(case: Case, start: Place, setting: Setting) -> Array | None:
    """Amount of substance (mol, or mol/s in flow), or None where the case gives none."""
    if case.amount is None and "amount" not in setting.lanes:
        return None
    q = case.amount if case.amount is not None else Quantity(0.0, "mass")
    return setting.amount(q, "amount", start.v)
