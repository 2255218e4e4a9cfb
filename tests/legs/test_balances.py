"""What must hold along any leg, over random legs, substances and cubic equations (hypothesis, derandomized).

Tolerances are relative to the sizes that a balance is made of. 1e-9: the two routes are both in double
precision, and ends are iterated to 1e-12; near saturation cuts their error is magnified.
"""

import pytest
from hypothesis import given, settings
from random_legs import KINDS, REVERSIBLE, legs
from solving import R

from pathcalc.path.values import scales

TOLERANCE = 1e-9
quick = settings(max_examples=50, deadline=None, derandomize=True)


def molar(solution):
    """Leg values per mole and the sizes of s and energy along the leg."""
    M, solved = solution.path.model.M, solution.path.legs[0]
    size = scales(solution.path, solved)
    leg = solution.legs["a"]
    T = max(solution.states["start"].T, solution.states["a"].T)
    return leg, M, float(size[0, 0]) + R, float(size[1:, 0].max()) + R * T


@pytest.mark.parametrize("kind", KINDS)
def test_every_leg(kind):
    """Closure, first law, second law, exergy balance and the sum of the pieces."""

    @quick
    @given(legs((kind,)))
    def holds(random):
        solution = random.solve()
        if solution is None:
            return
        leg, M, s_size, e_size = molar(solution)
        start, end = solution.states["start"], solution.states["a"]
        assert leg.maxwell.closure <= leg.maxwell.error + TOLERANCE
        energy = "h" if random.boundary == "flow" else "u"
        gained = (end[energy] - start[energy]) * M
        assert (leg.heat + leg.work) * M == pytest.approx(gained, abs=TOLERANCE * e_size)
        assert leg.entropy_generated * M >= -TOLERANCE * s_size
        change = (end.exergy - start.exergy) * M
        if change == change:
            T0, p0 = 298.15, 101325.0
            useful = leg.work + (0.0 if random.boundary == "flow" else p0 * leg.delta.v)
            with_heat = leg.heat - T0 * (leg.delta.s - leg.entropy_generated)
            balance = (useful + with_heat - leg.exergy_destroyed) * M
            assert balance == pytest.approx(change, abs=TOLERANCE * (e_size + T0 * s_size))
        pieces = solution.pieces("a")
        assert sum(piece["ds"] for piece in pieces) * M == pytest.approx(leg.delta.s * M, abs=TOLERANCE * s_size)
        assert sum(piece["dh"] for piece in pieces) * M == pytest.approx(leg.delta.h * M, abs=TOLERANCE * e_size)

    holds()


def test_a_leg_without_heat_has_none():
    @quick
    @given(legs(("adiabatic", "efficiency", "polytropic-efficiency", "throttling", "free-expansion")))
    def holds(random):
        solution = random.solve()
        if solution is not None:
            assert solution.legs["a"].heat == 0.0

    holds()


@quick
@given(legs(("throttling",)))
def test_throttling_keeps_enthalpy(random):
    solution = random.solve()
    if solution is None:
        return
    _, M, _, e_size = molar(solution)
    start, end = solution.states["start"], solution.states["a"]
    assert end.h * M == pytest.approx(start.h * M, abs=TOLERANCE * e_size)
    assert end.p < start.p
    assert solution.legs["a"].entropy_generated > 0.0


@quick
@given(legs(("free-expansion",)))
def test_free_expansion_keeps_energy(random):
    solution = random.solve()
    if solution is None:
        return
    _, M, _, e_size = molar(solution)
    start, end = solution.states["start"], solution.states["a"]
    assert end.u * M == pytest.approx(start.u * M, abs=TOLERANCE * e_size)
    assert solution.legs["a"].entropy_generated > 0.0


@quick
@given(legs(("isothermal",)))
def test_isothermal_flow_work_is_the_change_of_gibbs_energy(random):
    """And for a closed mass that of the Helmholtz energy; state functions from the other route."""
    solution = random.solve()
    if solution is None:
        return
    leg, M, _, e_size = molar(solution)
    key = "g" if random.boundary == "flow" else "a"
    change = (solution.states["a"][key] - solution.states["start"][key]) * M
    assert leg.work * M == pytest.approx(change, abs=TOLERANCE * e_size)


@quick
@given(legs(REVERSIBLE))
def test_a_reversible_leg_backwards_is_its_negative(random):
    """Back along the same family to the first volume (temperature on an isochore)."""
    kind = random.leg.split(",")[0]
    extra = random.leg.split(", to:")[0].removeprefix(kind).removeprefix(",").strip()
    key = "T" if "isochoric" in kind else "v"
    fields = f"{extra}, " if extra else ""
    back = f"name: b, {kind}, {fields}to: {{{key}: {{same_as: start}}}}"
    solution = random.solve(back)
    if solution is None:
        return
    leg, M, s_size, e_size = molar(solution)
    other = solution.legs["b"]
    assert other.heat * M == pytest.approx(-leg.heat * M, abs=10 * TOLERANCE * e_size)
    assert other.work * M == pytest.approx(-leg.work * M, abs=10 * TOLERANCE * e_size)
    assert other.delta.s * M == pytest.approx(-leg.delta.s * M, abs=10 * TOLERANCE * s_size)
    assert solution.states["b"]["T"] == pytest.approx(random.T, rel=1e-8)


@quick
@given(legs(("isothermal", "isobaric", "polytropic", "adiabatic", "throttling", "polytropic-efficiency")))
def test_two_legs_in_a_row_are_one(random):
    """The leg split at half way (in ln v or ln p) gives the same end, heat and work."""
    whole = random.solve()
    if whole is None:
        return
    key = "v" if "{v:" in random.leg else "p"
    ratio = float(random.leg.split("ratio: ")[1].split("}")[0])
    half = random.leg.replace(f"ratio: {random.leg.split('ratio: ')[1].split('}')[0]}", f"ratio: {ratio**0.5!r}")
    halves = type(random)(**{**random.__dict__, "leg": half}).solve(f"name: b, {half}")
    if halves is None:
        return
    leg, M, s_size, e_size = molar(whole)
    sums = {k: halves.legs["a"][k] + halves.legs["b"][k] for k in ("heat", "work", "entropy_generated")}
    assert sums["heat"] * M == pytest.approx(leg.heat * M, abs=10 * TOLERANCE * e_size)
    assert sums["work"] * M == pytest.approx(leg.work * M, abs=10 * TOLERANCE * e_size)
    assert sums["entropy_generated"] * M == pytest.approx(leg.entropy_generated * M, abs=10 * TOLERANCE * s_size)
    assert halves.states["b"][key] == pytest.approx(whole.states["a"][key], rel=1e-9)
    assert halves.states["b"]["T"] == pytest.approx(whole.states["a"].T, rel=1e-8)
