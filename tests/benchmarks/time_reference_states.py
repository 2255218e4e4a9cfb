"""Times of states by reference equations against a loop over CoolProp, run by hand:

    python tests/benchmarks/time_reference_states.py [SUBSTANCE…]

The loop is what a user would write: one low-level state object, an update and a few properties a state. Both sides
run in this process one after the other; imports, tables and first calls are left out.
"""

from __future__ import annotations

import statistics
import sys
import time
from collections.abc import Callable

import CoolProp.CoolProp as CP
import numpy as np

from pathcalc.equations.build import build_model
from pathcalc.equations.contract import Model
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.saturation import saturation_at_T
from pathcalc.equilibrium.states import state_properties
from pathcalc.substances import read_card

LANES = 10_000
LOOP = 500
"""States the loop is timed over; its cost a state does not depend on their number."""

SUBSTANCES = {
    "nitrogen": "Nitrogen",
    "water": "Water",
    "carbon-dioxide": "CarbonDioxide",
    "methane": "Methane",
    "propane": "n-Propane",
    "r-134a": "R134a",
    "helium": "Helium",
}


def seconds(call: Callable[[], object], times: int) -> float:
    call()
    took = []
    for _ in range(times):
        start = time.perf_counter()
        call()
        took.append(time.perf_counter() - start)
    return statistics.median(took)


def loop(state: CP.AbstractState, pair: int, a: np.ndarray, b: np.ndarray, names: tuple[int, ...]) -> float:
    """Seconds a state; states the library gives up are left out."""
    good = []
    for one, two in zip(a.tolist(), b.tolist(), strict=True):
        try:
            state.update(pair, one, two)
        except ValueError:
            continue
        good.append((one, two))
        if len(good) == LOOP:
            break

    def run() -> None:
        for one, two in good:
            state.update(pair, one, two)
            for name in names:
                state.keyed_output(name)

    return seconds(run, 3) / len(good)


def saturation_loop(state: CP.AbstractState, T: np.ndarray) -> float:
    """Seconds a temperature: pressure and both densities."""

    def run() -> None:
        for t in T.tolist():
            state.update(CP.QT_INPUTS, 0.0, t)
            state.p()
            state.saturated_liquid_keyed_output(CP.iDmolar)
            state.saturated_vapor_keyed_output(CP.iDmolar)

    return seconds(run, 3) / T.size


def rows(m: Model, state: CP.AbstractState) -> list[tuple[str, float, float, float]]:
    """Name, our seconds a state, the loop's, our seconds for one state alone."""
    rng = np.random.default_rng(7)
    ref = m.residual.reference
    low, high = m.T_limits[0], min(ref.valid.T_max, state.Tmax())
    T, p = rng.uniform(low, high, LANES), np.exp(rng.uniform(np.log(1e4), np.log(min(1e8, ref.valid.p_max)), LANES))
    points = flash(m, {"T": T, "p": p})
    T, p = T[points.ok], p[points.ok]
    s = state_properties(m, flash(m, {"T": T, "p": p}))
    anchor = int(np.argmax(T))
    state.update(CP.PT_INPUTS, p[anchor], T[anchor])
    dh, ds = state.hmolar() - s.h[anchor], state.smolar() - s.s[anchor]
    wet = rng.uniform(low, 0.999 * m.T_c, LANES)
    two = state_properties(m, flash(m, {"T": wet, "x": rng.uniform(0.0, 1.0, LANES)}))
    out = []

    def add(name: str, ours: Callable[[slice], object], lanes: int, theirs: float) -> None:
        every, one = slice(None), slice(0, 1)
        out.append((name, seconds(lambda: ours(every), 9) / lanes, theirs, seconds(lambda: ours(one), 30)))

    caloric = (CP.iDmolar, CP.iHmolar, CP.iSmolar, CP.iCpmolar, CP.ispeed_sound)
    add(
        "(p, T), all properties",
        lambda k: state_properties(m, flash(m, {"T": T[k], "p": p[k]})),
        T.size,
        loop(state, CP.PT_INPUTS, p, T, caloric),
    )
    add(
        "(p, T)",
        lambda k: flash(m, {"T": T[k], "p": p[k]}),
        T.size,
        loop(state, CP.PT_INPUTS, p, T, (CP.iDmolar,)),
    )
    add(
        "(p, s), one phase",
        lambda k: flash(m, {"p": p[k], "s": s.s[k]}),
        T.size,
        loop(state, CP.PSmolar_INPUTS, p, s.s + ds, (CP.iT, CP.iDmolar)),
    )
    add(
        "(p, h), one phase",
        lambda k: flash(m, {"p": p[k], "h": s.h[k]}),
        T.size,
        loop(state, CP.HmolarP_INPUTS, s.h + dh, p, (CP.iT, CP.iDmolar)),
    )
    add(
        "(p, h), two phases",
        lambda k: flash(m, {"p": two.p[k], "h": two.h[k]}),
        LANES,
        loop(state, CP.HmolarP_INPUTS, two.h + dh, two.p, (CP.iT, CP.iQ)),
    )
    add("saturation at T", lambda k: saturation_at_T(m, wet[k]), LANES, saturation_loop(state, wet[:LOOP]))
    return out


def main() -> None:
    for name in sys.argv[1:] or SUBSTANCES:
        m = build_model(read_card(name), "reference")
        for what, ours, theirs, alone in rows(m, CP.AbstractState("HEOS", SUBSTANCES[name])):
            print(
                f"{name:15s} {what:24s} {1e6 * ours:7.2f} us a state, loop {1e6 * theirs:7.2f} us: "
                f"{theirs / ours:5.1f} times faster; one state alone {1e3 * alone:.3f} ms"
            )


if __name__ == "__main__":
    main()
