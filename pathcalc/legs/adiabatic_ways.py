"""How an adiabatic leg is solved: reversible, with an efficiency, or against a constant pressure."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equilibrium.flash import flash
from pathcalc.legs.integration.bracket import scanned_root
from pathcalc.legs.integration.segments import Integrals
from pathcalc.legs.polytropic_path import follow
from pathcalc.legs.run import Exchange, LegRun, Outcome, Place, machine_work
from pathcalc.legs.trail import Trail
from pathcalc.legs.ways import constant, isobar, isochore, isotherm

Targets = dict[str, Array]

_SCAN = np.sinh(np.linspace(-3.0, 3.0, 49)) / 1.6
"""Where a pressure is looked for, as offsets of ln p: within a factor of 500 either way."""


def _energy_key(run: LegRun) -> str:
    return "h" if run.flow else "u"


def _no_heat(run: LegRun) -> Callable[[Integrals], Exchange]:
    """The work is the change of enthalpy (flow) or internal energy (closed)."""

    def exchange(i: Integrals) -> Exchange:
        work = i["dh"] if run.flow else i["du"]
        return Exchange(work, 0.0 * work, 0.0 * work)

    return exchange


def reversible(run: LegRun, targets: Targets) -> Outcome:
    """Along the isentrope of the inlet."""
    a, energy = run.inlet, _energy_key(run)
    if "work" in targets:
        targets = {energy: getattr(a, energy) + targets["work"]}
    b = run.reach(s=a.s, **targets)
    return Outcome(b, [constant("s", a, b)], _no_heat(run), reversible=True)


def isentropic_efficiency(run: LegRun, targets: Targets) -> Outcome:
    """The reversible leg to the same pressure (to the same volume for a closed mass with a volume target).

    A machine that takes work needs the reversible work divided by the efficiency, one that gives work delivers
    the reversible work times it. The way of integration is the isentrope, then the isobar (isochore).
    """
    a, energy = run.inlet, _energy_key(run)
    efficiency = run.value("efficiency")
    assert efficiency is not None
    start: Array = getattr(a, energy)
    by_volume = "v" in targets and not run.flow
    if "work" in targets:
        work = targets["work"]
        ideal_work = np.where(work > 0.0, work * efficiency, work / efficiency)
        ideal = run.reach(s=a.s, **{energy: start + ideal_work})
        b = run.reach(p=ideal.p, **{energy: start + work})
        return _in_two_steps(run, ideal, b, by_volume=False)
    if "p" not in targets and not by_volume:
        targets = {"p": _pressure_with_efficiency(run, targets, efficiency)}
    ideal = run.reach(s=a.s, **targets)
    change = machine_work(getattr(ideal, energy) - start, efficiency)
    b = run.reach(**targets, **{energy: start + change})
    return _in_two_steps(run, ideal, b, by_volume=by_volume)


def _in_two_steps(run: LegRun, ideal: Place, b: Place, *, by_volume: bool) -> Outcome:
    second = isochore(ideal, b, own=False) if by_volume else isobar(ideal, b, own=False)
    way = [constant("s", run.inlet, ideal, own=False), second]
    return Outcome(b, way, _no_heat(run), reversible=False, ideal=ideal)


def _pressure_with_efficiency(run: LegRun, targets: Targets, efficiency: Array) -> Array:
    """End pressure at which a leg with this efficiency meets a temperature or a volume."""
    a, energy, model = run.inlet, _energy_key(run), run.model
    ((key, goal),) = targets.items()
    start: Array = getattr(a, energy)

    def miss(log_p: Array) -> Array:
        p = np.exp(log_p)
        ideal = run.place(flash(model, {"p": p, "s": a.s}))
        change = machine_work(getattr(ideal, energy) - start, efficiency)
        points = flash(model, {"p": p, energy: start + change})
        value: Array = getattr(points, key) / goal - 1.0
        return value

    return _found(run, scanned_root(miss, np.log(a.p), _SCAN), key)


def _found(run: LegRun, log_p: Array, key: str) -> Array:
    run.wrong_side(
        np.isnan(log_p) & np.isfinite(run.inlet.p),
        f"no end pressure gives the target {key} within the equation's range",
        "give the end by its pressure, or a target nearer to the inlet",
    )
    return np.exp(log_p)


def polytropic_efficiency(run: LegRun, targets: Targets) -> Outcome:
    """Along dh = c v dp, c = 1/eta_p in compression and eta_p in expansion."""
    a = run.inlet
    efficiency = run.value("polytropic_efficiency")
    assert efficiency is not None
    if "p" in targets:
        p = targets["p"]
    else:
        ((key, goal),) = targets.items()
        wanted = a.h + goal if key == "work" else goal
        trail = Trail(run, efficiency)

        def miss(log_p: Array) -> Array:
            end = trail.end(log_p)
            if key == "work":
                value: Array = (end.h - wanted) / (model_scale + np.abs(goal))
                return value
            return np.asarray(getattr(end, key) / wanted - 1.0)

        model_scale = 1e-3 * run.model.R * a.T
        p = _found(run, scanned_root(miss, np.log(a.p), _SCAN, rtol=1e-15), key)
    course = follow(run, p, efficiency)
    return Outcome(course.end, course.segments, _no_heat(run), reversible=False)


def against_pressure(run: LegRun, targets: Targets) -> Outcome:
    """A closed mass working against a constant pressure: du = -p_ext dv."""
    a, model = run.inlet, run.model
    against = run.value("against")
    assert against is not None
    total = a.u + against * a.v
    if "work" in targets:
        targets = {"v": a.v - targets["work"] / against}
        run.wrong_side(
            targets["v"] <= 0.0, "the work is larger than that of pushing the volume to nothing", "give less work"
        )
    if "v" in targets:
        b = run.reach(v=targets["v"], u=total - against * targets["v"])
    elif "p" in targets and bool((targets["p"] == against).all()):
        b = run.reach(p=targets["p"], h=total)
    else:
        ((key, goal),) = targets.items()

        def miss(log_v: Array) -> Array:
            v = np.exp(log_v)
            points = flash(model, {"v": v, "u": total - against * v})
            return np.asarray(getattr(points, key) / goal - 1.0)

        log_v = scanned_root(miss, np.log(a.v), _SCAN)
        v = _found(run, log_v, key)
        b = run.reach(v=v, u=total - against * v)

    def exchange(i: Integrals) -> Exchange:
        work = -against * (b.v - a.v)
        return Exchange(work, 0.0 * work, 0.0 * work)

    corner = run.reach(T=a.T, v=b.v)
    run.wrong_side(
        b.s < a.s - 1e-9 * model.R,
        "the entropy would fall: the fluid cannot move this way against that pressure",
        "expand against a pressure below the fluid's own, compress against one above it",
    )
    way = [isotherm(a, corner, own=False), isochore(corner, b, own=False)]
    return Outcome(b, way, exchange, reversible=False)
