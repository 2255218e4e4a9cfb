"""Times of the equilibrium room, run by hand: python tests/benchmarks/time_equilibrium.py"""

from __future__ import annotations

import statistics
import time
from collections.abc import Callable

import numpy as np

from pathcalc.equations.build import build_model
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.saturation import saturation_at_p, saturation_at_T
from pathcalc.equilibrium.states import state_properties
from pathcalc.substances import read_card


def median_ms(call: Callable[[], object], times: int) -> float:
    call()
    took = []
    for _ in range(times):
        start = time.perf_counter()
        call()
        took.append(time.perf_counter() - start)
    return 1e3 * statistics.median(took)


def main() -> None:
    m = build_model(read_card("propane"), "peng-robinson")
    rng = np.random.default_rng(1)
    for n, times in ((1, 200), (10_000, 9)):
        T, p = rng.uniform(120.0, 600.0, n), np.exp(rng.uniform(np.log(1e3), np.log(3e7), n))
        if n == 1:
            T[:], p[:] = 300.0, 5e5
        s = state_properties(m, flash(m, {"T": T, "p": p}))
        cold = rng.uniform(120.0, 365.0, n)
        p_cold = saturation_at_T(m, cold).p
        rows = {
            "T-p, all properties": lambda s=s: state_properties(m, flash(m, {"T": s.T, "p": s.p})),
            "saturation at T": lambda t=cold: saturation_at_T(m, t),
            "saturation at p": lambda q=p_cold: saturation_at_p(m, q),
        }
        for a, b in ("ph", "ps", "pv", "Tv", "Ts", "vu", "vs", "hs", "us"):
            rows[f"{a}-{b}"] = lambda a=a, b=b, s=s: flash(m, {a: getattr(s, a), b: getattr(s, b)})
        for name, call in rows.items():
            print(f"{n:6d} lanes  {name:20s} {median_ms(call, times):9.3f} ms")


if __name__ == "__main__":
    main()
