"""Times of the reference equations, run by hand: ``python tests/benchmarks/time_reference.py``."""

from __future__ import annotations

import time
from collections.abc import Callable

import numpy as np

from pathcalc.equations.build import build_model
from pathcalc.substances import read_card

LANES = 10_000
ORDERS = ((0, 1), (0, 2))


def best(call: Callable[[], object], repeats: int) -> float:
    """Seconds a call, the best of five runs."""
    call()
    times = []
    for _ in range(5):
        start = time.perf_counter()
        for _ in range(repeats):
            call()
        times.append((time.perf_counter() - start) / repeats)
    return min(times)


def main() -> None:
    print(f"{'':16}{'terms':>6}{'one state, µs':>15}{'D01, D02':>10}{f'{LANES} states, µs each':>25}{'D01, D02':>10}")
    for name in ("nitrogen", "water", "carbon-dioxide", "R-134a", "propane", "ammonia", "methanol"):
        m = build_model(read_card(name), "reference")
        residual = m.residual
        T, rho = np.array([1.05 * m.T_c]), np.array([0.8 / m.v_c])
        many_T, many_rho = np.linspace(0.7, 2.0, LANES) * m.T_c, np.linspace(0.01, 2.5, LANES) / m.v_c
        one = 1e6 * best(lambda r=residual, t=T, q=rho: r.reduced(t, q), 300)
        short = 1e6 * best(lambda r=residual, t=T, q=rho: r.derivatives(t, q, ORDERS), 300)
        many = 1e6 / LANES * best(lambda r=residual, t=many_T, q=many_rho: r.reduced(t, q), 5)
        newton = 1e6 / LANES * best(lambda r=residual, t=many_T, q=many_rho: r.derivatives(t, q, ORDERS), 5)
        terms = sum(len(table.rows) for table in residual.reference.terms)
        print(f"{name:16}{terms:6d}{one:15.0f}{short:10.0f}{many:25.2f}{newton:10.2f}")


if __name__ == "__main__":
    main()
