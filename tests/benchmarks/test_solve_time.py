"""Time of one solve, of its parts, and of many lanes. Printed; the assertions are only that it solved."""

import time

import numpy as np
from five_legs import FIVE_LEGS

import pathcalc


def best_of(times, action):
    """Shortest of several runs, s."""
    found = []
    for _ in range(times):
        began = time.perf_counter()
        action()
        found.append(time.perf_counter() - began)
    return min(found)


def lanes_of(n):
    """Seeded start temperatures and efficiencies."""
    rng = np.random.default_rng(1)
    return {"start.superheat": rng.uniform(3.0, 15.0, n), "low stage.efficiency": rng.uniform(0.6, 0.9, n)}


def test_one_solve():
    """Loading, solving, the results with checks and warnings."""
    case = pathcalc.loads(FIVE_LEGS, name="five-legs")
    assert pathcalc.solve(case).passed
    load = best_of(10, lambda: pathcalc.loads(FIVE_LEGS, name="five-legs"))
    solve = best_of(10, lambda: pathcalc.solve(case))
    results = best_of(10, lambda: pathcalc.solve(case).to_dict())
    print(f"\nload {1e3 * load:.1f} ms, solve {1e3 * solve:.1f} ms, solve and results {1e3 * results:.1f} ms")


def test_many_lanes():
    """Ratio of 10,000 lanes to one, and time a lane."""
    case = pathcalc.loads(FIVE_LEGS.replace("T: {same_as: start}", "superheat: 4 K"), name="five-legs")
    one = best_of(10, lambda: pathcalc.solve(case, lanes_of(1)))
    for n in (10, 100, 1000, 10_000):
        many = best_of(3, lambda n=n: pathcalc.solve(case, lanes_of(n)))
        print(f"\n{n} lanes {many:.3f} s: {many / one:.1f} times one lane, {1e6 * many / n:.1f} us a lane", end="")
    assert pathcalc.solve(case, lanes_of(1000)).ok.all()
    print()
