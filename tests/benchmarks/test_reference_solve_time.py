"""Time of a case of five legs by a reference equation. Printed; the assertions are only that it solved."""

import time

import pytest
from five_legs import FIVE_LEGS

import pathcalc


@pytest.mark.parametrize("substance", ["r-134a", "propane", "ammonia"])
def test_five_legs(substance):
    """Loaded, solved, and with results and checks; the shortest of several runs."""
    text = FIVE_LEGS.replace("peng-robinson", "reference").replace("r-134a", substance)
    case = pathcalc.loads(text, name="five-legs")
    assert pathcalc.solve(case).passed
    found = {"solve": [], "solve and results": []}
    for _ in range(25):
        for name, action in (
            ("solve", lambda: pathcalc.solve(case)),
            ("solve and results", lambda: pathcalc.solve(case).to_dict()),
        ):
            began = time.perf_counter()
            action()
            found[name].append(time.perf_counter() - began)
    print(f"\n{substance}: " + ", ".join(f"{name} {1e3 * min(times):.1f} ms" for name, times in found.items()))
