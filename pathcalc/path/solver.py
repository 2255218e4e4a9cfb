"""The path solver: hands the state from leg to leg, over all lanes at once."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from importlib import import_module
from typing import Any

import numpy as np

from pathcalc.case.leg_model import LegModel
from pathcalc.case.model import Case
from pathcalc.equations.contract import Array, Model
from pathcalc.errors import Trouble, UsageError
from pathcalc.legs.integration.segments import BoundaryOf, Integrals, integrate_segments
from pathcalc.legs.run import Exchange, LegRun, Outcome, Place, Setting, Status
from pathcalc.path.fluid import card_of, model_of
from pathcalc.path.lanes import lane_arrays, mark_out_of_range
from pathcalc.path.start import moles_of, start_place
from pathcalc.substances import Card

ROUGH = 1e-7
"""An error estimate above this part of the magnitudes along a leg is no result."""
CYCLE_TOLERANCE = 1e-7
"""How far the last state of a cycle may be from the first, relative in T, p and v."""


@dataclass(frozen=True)
class SolvedLeg:
    """One leg with its inlet, its end, its integrals and what it exchanged; molar SI, arrays (n,)."""

    leg: LegModel
    inlet_name: str
    inlet: Place
    outcome: Outcome
    integrals: Integrals
    exchange: Exchange
    ds: Array
    entropy_generated: Array
    moles: Array | None

    @property
    def end(self) -> Place:
        """Where the leg ends."""
        return self.outcome.end


@dataclass(frozen=True)
class SolvedPath:
    """All that was solved, molar SI."""

    case: Case
    card: Card
    model: Model
    setting: Setting
    start: Place
    legs: tuple[SolvedLeg, ...]


def solve_path(case: Case, lanes: Mapping[str, Any] | None = None, equation: str | None = None) -> SolvedPath:
    """Solve a case; ``lanes`` maps addresses to arrays of one length, SI per kilogram (see :func:`pathcalc.solve`).

    A lane that fails is marked in ``setting.status`` and never stops the others. Raises UsageError for lanes that
    name nothing, InvalidCaseError and NoSolutionError from the choice of fluid and datum.
    """
    arrays, n = lane_arrays(lanes)
    card = card_of(case)
    model = model_of(case, card, equation)
    setting = _setting(case, model, arrays, n)
    mark_out_of_range(arrays, setting.status)
    with np.errstate(invalid="ignore", divide="ignore", over="ignore", under="ignore"):
        start = start_place(case, setting)
        setting.moles = moles = moles_of(case, start, setting)
        setting.places["start"] = start
        place, name = start, "start"
        solved: list[SolvedLeg] = []
        for leg in case.legs:
            done = _solve_leg(setting, leg, place, name, moles)
            solved.append(done)
            place, name, moles = done.end, leg.name, done.moles
            setting.places[name] = place
        if case.cycle:
            _check_cycle(setting, start, place)
    unused = [address for address in arrays if address not in setting.used]
    if unused:
        raise UsageError(
            f"lanes name {unused[0]!r}, which the case does not have; "
            "name start.<key>, surroundings.T, surroundings.p, amount, or <leg>.<key> for a key the leg gives"
        )
    return SolvedPath(case, card, model, setting, start, tuple(solved))


def _setting(case: Case, model: Model, arrays: dict[str, Array], n: int) -> Setting:
    surroundings = case.surroundings
    setting = Setting(
        model=model,
        n=n,
        flow=case.boundary == "flow",
        T0=np.full(n, surroundings.T.value),
        p0=np.full(n, surroundings.p.value),
        ambient_shift=np.zeros(n),
        moles=None,
        boundary=BoundaryOf(model),
        status=Status(n),
        lanes=arrays,
    )
    T0, p0 = setting.override("surroundings.T"), setting.override("surroundings.p")
    if T0 is not None:
        setting.T0 = T0
    if p0 is not None:
        setting.p0 = p0
        setting.ambient_shift = p0 - surroundings.p.value
    return setting


Solver = Callable[[Any, LegRun], Outcome]


def leg_solver(leg: LegModel) -> Solver:
    """The ``solve`` function that stands in the module of a leg's model."""
    solver: Solver = import_module(type(leg).__module__).solve
    return solver


def _solve_leg(setting: Setting, leg: LegModel, inlet: Place, inlet_name: str, moles: Array | None) -> SolvedLeg:
    run = LegRun(setting, leg, inlet, inlet_name, moles)
    outcome = leg_solver(leg)(leg, run)
    integrals = integrate_segments(setting.model, setting.boundary, outcome.segments, setting.n)
    setting.status.fail(
        np.isnan(integrals["ds"]) & np.isfinite(outcome.end.T),
        Trouble(
            "path-leaves-range",
            leg.name,
            "between its ends the leg passes through states that the equation does not have",
            "end the leg before it leaves the range (triple point, highest temperature, density), or go another way",
        ),
    )
    rough = (integrals.error[:3] > ROUGH * np.maximum(integrals.magnitude[:3], _least(setting, inlet))).any(axis=0)
    setting.status.fail(
        (~integrals.converged | rough) & np.isfinite(outcome.end.T),
        Trouble(
            "integral-not-converged",
            leg.name,
            "the integrals along the leg did not reach their accuracy",
            "split the leg, or keep it away from the critical point",
        ),
    )
    exchange = outcome.exchange(integrals)
    ds = integrals["ds"]
    own_temperature = outcome.reversible and getattr(leg, "reservoir", None) is None
    generated = np.zeros(setting.n) if own_temperature else ds - exchange.entropy_in
    if outcome.other is not None:
        generated = generated - outcome.carried(inlet, "s")
    noise = 64.0 * np.finfo(float).eps * integrals.magnitude[0]
    generated = np.where(np.isfinite(ds), np.where(np.abs(generated) <= noise, 0.0, generated), np.nan)
    moles = moles if outcome.moles is None else outcome.moles
    return SolvedLeg(leg, inlet_name, inlet, outcome, integrals, exchange, ds, generated, moles)


def _least(setting: Setting, inlet: Place) -> Array:
    """Magnitudes below which the integrals of ds, du, dh are not judged: a thousandth of R, of R T."""
    R = 1e-3 * setting.model.R
    return np.stack([R + 0.0 * inlet.T, R * inlet.T, R * inlet.T])


def _check_cycle(setting: Setting, start: Place, last: Place) -> None:
    gap = np.zeros(setting.n)
    apart = []
    for key, unit in (("T", "K"), ("p", "Pa"), ("v", "m3/kg")):
        a, b = getattr(start, key), getattr(last, key)
        gap = np.maximum(gap, np.abs(b / a - 1.0))
        if setting.n == 1 and abs(float(b[0] / a[0]) - 1.0) > CYCLE_TOLERANCE:
            scale = 1.0 / setting.model.M if key == "v" else 1.0
            apart.append(f"{key} {float(b[0]) * scale:.6g} {unit} against {float(a[0]) * scale:.6g} {unit}")
    detail = f" ({', '.join(apart)})" if apart else ""
    setting.status.fail(
        gap > CYCLE_TOLERANCE,
        Trouble(
            "cycle-not-closed",
            "cycle",
            "the last state is not the first one" + detail,
            "end the last leg at the start (such as `to: {T: {same_as: start}}` where the pressure is that of the "
            "start), or leave `cycle` out",
        ),
    )
