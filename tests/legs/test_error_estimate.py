"""The reported ``maxwell.error`` against the true error, for which the closed form stands in.

Both routes are in double precision: beside the estimate, 2e-10 of the sizes along the leg is allowed for
rounding (a leg of no length is measured against a thousandth of R).
Legs that keep away from saturation, where nothing but the quadrature is at work.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from random_legs import KINDS, legs
from solving import solve

ROUNDING = 2e-10


@pytest.mark.parametrize("kind", KINDS)
def test_error_bounds_the_true_error(kind):
    @settings(max_examples=25, deadline=None, derandomize=True)
    @given(legs((kind,), ("vapour", "supercritical")))
    def holds(random):
        solution = random.solve()
        if solution is None or len(solution.pieces("a")) > 1:
            return
        maxwell = solution.legs["a"].maxwell
        assert maxwell.closure <= maxwell.error + ROUNDING
        assert maxwell.error < 1e-6

    holds()


def test_error_bounds_the_true_error_over_many_lanes():
    """4000 starts from dilute gas to dense fluid, seeded; supercritical, so that no leg meets the dome."""
    rng = np.random.default_rng(20)
    n = 4000
    lanes = {
        "start.T": rng.uniform(320.0, 700.0, n),
        "start.p": 7.3773e6 * 10.0 ** rng.uniform(-3.0, 1.0, n),
        "a.p": 10.0 ** rng.uniform(-1.0, 1.0, n),
    }
    legs_ = "name: a, path: isothermal, to: {p: {ratio: 2}}"
    solution = solve("substance: carbon-dioxide, equation: soave", "T: 400 K, p: 1 bar", legs_, lanes=lanes)
    maxwell = solution.legs["a"].maxwell
    assert solution.ok.all()
    assert (maxwell.closure <= maxwell.error + ROUNDING).all()
    assert np.median(maxwell.error) < 1e-11
