"""Many lanes in one solve: the same numbers as one at a time, and a lane that fails disturbs no other."""

import numpy as np
import pytest
from lane_cases import CASES, arrays
from solving import solve

import pathcalc.errors

N = 10_000
LEG_KEYS = ("heat", "work", "entropy_generated", "exergy_destroyed")
STATE_KEYS = ("T", "p", "v", "h", "s", "cp", "exergy")


def run(name, lanes):
    case = CASES[name]
    return solve(case.fluid, case.start, *case.legs, boundary=case.boundary, lanes=lanes)


def numbers(solution):
    """All results, by address."""
    found = {}
    for name, state in solution.states.items():
        found |= {f"{name}.{key}": state[key] for key in STATE_KEYS}
    for name, leg in solution.legs.items():
        found |= {f"{name}.{key}": leg[key] for key in LEG_KEYS}
        found |= {f"{name}.delta.{key}": leg.delta[key] for key in ("s", "h", "g")}
    return found


@pytest.fixture(scope="module", params=CASES)
def many(request):
    """Name, lane values and the solution of 10,000 lanes."""
    lanes = arrays(CASES[request.param], N)
    return request.param, lanes, run(request.param, lanes)


def test_all_lanes_are_solved(many):
    _, _, solution = many
    assert solution.n_lanes == N
    assert solution.ok.all(), [r for r in solution.reasons if r][:3]
    for address, values in numbers(solution).items():
        assert values.shape == (N,)
        if not address.endswith(".cp"):  # c_p has no value inside the dome
            assert np.isfinite(values).all(), address


def test_lanes_are_what_single_solves_are(many):
    """Twenty of them, each alone: equal to 1e-13 of the sizes involved."""
    name, lanes, solution = many
    together = numbers(solution)
    for lane in range(17, N, N // 20):
        alone = numbers(run(name, {address: values[lane : lane + 1] for address, values in lanes.items()}))
        for address, values in together.items():
            size = np.nanmax(np.abs(values)) if "delta" in address or address.startswith("a.e") else 0.0
            assert alone[address][0] == pytest.approx(values[lane], rel=1e-13, abs=1e-13 * size, nan_ok=True), (
                address,
                lane,
            )


def test_a_bad_lane_leaves_the_others_alone(many):
    """9,999 lanes are the same to the last bit; the bad one is marked, is NaN, and says why."""
    name, lanes, solution = many
    place = 4321
    worse = {address: values.copy() for address, values in lanes.items()}
    for address, value in CASES[name].bad.items():
        worse[address][place] = value
    other = run(name, worse)
    rest = np.arange(N) != place
    assert not other.ok[place]
    assert other.ok[rest].all()
    assert other.reasons[place] is not None
    assert "; " in other.reasons[place]
    assert all(reason is None for lane, reason in enumerate(other.reasons) if lane != place)
    first, second = numbers(solution), numbers(other)
    for address in first:
        assert np.array_equal(first[address][rest], second[address][rest], equal_nan=True), address
        assert np.isnan(second[address][place]), address


def test_closure_holds_in_every_lane(many):
    """1e-9 of the sizes along the leg: the error estimate and rounding, with room for saturation cuts."""
    _, _, solution = many
    for leg in solution.legs.values():
        assert (leg.maxwell.closure <= leg.maxwell.error + 1e-9).all()


def test_order_of_lanes_does_not_matter():
    name = "isobaric through the dome"
    lanes = arrays(CASES[name], 700)
    order = np.random.default_rng(5).permutation(700)
    straight = numbers(run(name, lanes))
    mixed = numbers(run(name, {address: values[order] for address, values in lanes.items()}))
    for address, values in straight.items():
        assert mixed[address] == pytest.approx(values[order], rel=1e-12, abs=1e-9, nan_ok=True)


COMPRESSION = CASES["compression with efficiency"]


@pytest.mark.parametrize("address", ["a.temperature", "b.p", "start.x", "stop.T", "a.to.T", "T", "totals.work"])
def test_unknown_address(address):
    with pytest.raises(pathcalc.errors.UsageError, match="lanes name"):
        run("compression with efficiency", {address: np.array([1.0, 2.0])})


@pytest.mark.parametrize("lanes", [
    {"start.T": np.array([300.0, 310.0]), "start.p": np.array([1e5, 2e5, 3e5])},
    {"start.T": np.ones((2, 2)) * 300.0},
])  # fmt: skip
def test_lanes_of_unlike_lengths(lanes):
    with pytest.raises(pathcalc.errors.UsageError):
        run("compression with efficiency", lanes)


def test_one_value_is_for_all_lanes():
    spread = run("compression with efficiency", {"start.T": np.array([330.0, 350.0]), "a.efficiency": 0.7})
    for lane, T in enumerate((330.0, 350.0)):
        alone = solve(
            COMPRESSION.fluid,
            f"T: {T} K, p: 5 bar",
            "name: a, path: adiabatic, to: {p: 12 bar}, efficiency: 0.7",
        )
        assert spread.legs["a"].work[lane] == pytest.approx(alone.legs["a"].work, rel=1e-13)


def test_lanes_of_the_surroundings_move_gauge_pressures():
    """Gauge pressures follow the ambient pressure, absolute ones do not; exergy follows both."""
    p0 = np.array([0.9e5, 1.0e5, 1.1e5])
    T0 = np.array([280.0, 290.0, 300.0])
    solution = solve(
        COMPRESSION.fluid,
        "T: 340 K, p: 4 barg",
        "name: a, path: adiabatic, to: {p: 12 barg}, efficiency: 0.8",
        "name: b, path: isothermal, to: {p: 5 bar}",
        lanes={"surroundings.p": p0, "surroundings.T": T0},
    )
    assert solution.states["start"].p == pytest.approx(4e5 + p0, rel=1e-14)
    assert solution.states["a"].p == pytest.approx(12e5 + p0, rel=1e-14)
    assert solution.states["b"].p == pytest.approx(np.full(3, 5e5), rel=1e-14)
    destroyed = solution.legs["a"].exergy_destroyed
    assert destroyed == pytest.approx(T0 * solution.legs["a"].entropy_generated, rel=1e-13)
    for lane in range(3):
        alone = solve(
            COMPRESSION.fluid,
            "T: 340 K, p: 4 barg",
            "name: a, path: adiabatic, to: {p: 12 barg}, efficiency: 0.8",
            more=f"surroundings: {{T: {T0[lane]} K, p: {p0[lane]} Pa}}\n",
        )
        assert alone.states["a"].exergy == pytest.approx(solution.states["a"].exergy[lane], rel=1e-11)


def test_lanes_of_the_amount():
    solution = solve(
        COMPRESSION.fluid,
        COMPRESSION.start,
        *COMPRESSION.legs,
        more="amount: 1 kg/s\n",
        lanes={"amount": np.array([0.5, 2.0])},
    )
    leg = solution.legs["a"]
    assert solution.totals.work == pytest.approx(leg.work * np.array([0.5, 2.0]), rel=1e-14)
    assert leg.total.work == pytest.approx(leg.work * np.array([0.5, 2.0]), rel=1e-14)


def test_a_result_object_is_of_one_solve():
    with pytest.raises(pathcalc.errors.UsageError):
        run("throttling", arrays(CASES["throttling"], 3)).to_dict()


@pytest.mark.parametrize("efficiency", [-1.0, 2.0])
def test_an_efficiency_that_cannot_be_is_refused_in_its_lane(efficiency):
    """A case file may not say so either: above 0 and at most 1."""
    solution = run("compression with efficiency", {"a.efficiency": np.array([0.8, efficiency])})
    assert solution.ok.tolist() == [True, False]


def test_limits_of_many_lanes():
    """Either a value a lane, or a refusal that says so."""
    solution = solve(
        COMPRESSION.fluid,
        COMPRESSION.start,
        *COMPRESSION.legs,
        more="limits:\n  - {quantity: a.T, max: 380 K}\n",
        lanes={"start.T": np.array([330.0, 350.0])},
    )
    try:
        (row,) = solution.limits
    except pathcalc.errors.UsageError as refusal:
        row = {"passed": None, "why": str(refusal)}
    assert row["passed"] is None or np.shape(row["passed"]) == (2,)
