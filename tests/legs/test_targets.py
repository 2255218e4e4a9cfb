"""Every target of every leg kind, by value and relative, for a flow and a closed mass.

A leg is solved to a plain target first; then each other way of writing the end must lead to the same end.
"""

import pytest
from solving import failed_checks, solve

FLUID = "substance: propane, equation: peng-robinson"
START = "T: 340 K, p: 10 bar"
SAME = 1e-9

# what fixes the leg, the targets by value, and the boundaries
KINDS = {
    "isothermal": ("path: isothermal", "p: 4 bar", ("p", "v", "rho", "s"), ("flow", "closed")),
    "isobaric": ("path: isobaric", "T: 400 K", ("T", "v", "rho", "h", "s"), ("flow", "closed")),
    "isochoric": ("path: isochoric", "T: 420 K", ("T", "p", "u", "s"), ("flow", "closed")),
    "adiabatic": ("path: adiabatic", "p: 4 bar", ("p", "T", "v", "rho"), ("flow", "closed")),
    "efficiency": ("path: adiabatic, efficiency: 0.8", "p: 20 bar", ("p", "T", "v", "rho"), ("flow",)),
    "efficiency of a closed mass": ("path: adiabatic, efficiency: 0.8", "p: 20 bar", ("p", "T"), ("closed",)),
    "polytropic efficiency": (
        "path: adiabatic, polytropic_efficiency: 0.8", "p: 20 bar", ("p", "T", "v", "rho"), ("flow",)
    ),
    "against": ("path: adiabatic, against: 4 bar", "p: 4 bar", ("p", "T", "v", "rho"), ("closed",)),
    "throttling": ("path: throttling", "p: 4 bar", ("p", "T"), ("flow",)),
    "free expansion": ("path: free-expansion", "p: 4 bar", ("p", "v", "rho"), ("closed",)),
    "polytropic": ("path: polytropic, exponent: 1.2", "p: 20 bar", ("p", "T", "v", "rho"), ("flow", "closed")),
    "workless": ("path: workless, pressure_drop: 0.5 bar", "T: 400 K", ("T", "h"), ("flow",)),
}  # fmt: skip
UNITS = {
    "p": "Pa", "T": "K", "v": "m3/kg", "rho": "kg/m3", "h": "J/kg", "u": "J/kg", "s": "J/(kg K)",
}  # fmt: skip
TARGETS = [
    (kind, key, boundary) for kind, (_, _, keys, boundaries) in KINDS.items() for key in keys for boundary in boundaries
]


def ends(kind, boundary, target, more=""):
    return solve(FLUID, START, f"name: a, {KINDS[kind][0]}, to: {{{target}}}", boundary=boundary, more=more)


def assert_same_end(first, second):
    a, b = first.states["a"], second.states["a"]
    for key in ("T", "p", "v"):
        assert b[key] == pytest.approx(a[key], rel=SAME)
    assert failed_checks(second) == []


@pytest.mark.parametrize(("kind", "key", "boundary"), TARGETS)
def test_by_value(kind, key, boundary):
    first = ends(kind, boundary, KINDS[kind][1])
    value = first.states["a"][key]
    assert_same_end(first, ends(kind, boundary, f"{key}: {value!r} {UNITS[key]}"))


@pytest.mark.parametrize(("kind", "key", "boundary"), TARGETS)
def test_relative_to_the_inlet(kind, key, boundary):
    first = ends(kind, boundary, KINDS[kind][1])
    before, after = first.states["start"][key], first.states["a"][key]
    unit = UNITS[key]
    word, amount = ("rise", after - before) if after >= before else ("drop", before - after)
    assert_same_end(first, ends(kind, boundary, f"{key}: {{{word}: {amount!r} {unit}}}"))
    if key in ("p", "T", "v", "rho"):
        assert_same_end(first, ends(kind, boundary, f"{key}: {{ratio: {after / before!r}}}"))


@pytest.mark.parametrize(("kind", "key", "boundary"), TARGETS)
def test_same_as_an_earlier_state(kind, key, boundary):
    """Away and back by a polytropic leg between two targets, then to the value of the first end."""
    first = ends(kind, boundary, KINDS[kind][1])
    there = f"name: there, {KINDS[kind][0]}, to: {{{KINDS[kind][1]}}}"
    back = "name: back, path: polytropic, to: {p: 10 bar, T: 340 K}"
    if kind == "isochoric":
        back = "name: back, path: isochoric, to: {T: 340 K}"
    solution = solve(
        FLUID,
        START,
        there,
        back,
        f"name: a, {KINDS[kind][0]}, to: {{{key}: {{same_as: there}}}}",
        boundary=boundary,
    )
    for name in ("T", "p"):
        assert solution.states["a"][name] == pytest.approx(first.states["a"][name], rel=1e-8)


HEATED = [
    ("isobaric", "heat", "flow"),
    ("isobaric", "heat", "closed"),
    ("isochoric", "heat", "closed"),
    ("workless", "heat", "flow"),
    ("adiabatic", "work", "flow"),
    ("adiabatic", "work", "closed"),
    ("efficiency", "work", "flow"),
    ("polytropic efficiency", "work", "flow"),
    ("against", "work", "closed"),
]


@pytest.mark.parametrize(("kind", "key", "boundary"), HEATED)
def test_heat_and_work_specific_and_total(kind, key, boundary):
    """Per mass, per mole, and in total for 2 kg or 2 kg/s."""
    amount, unit = ("2 kg/s", "W") if boundary == "flow" else ("2 kg", "J")
    first = ends(kind, boundary, KINDS[kind][1])
    value, M = first.legs["a"][key], first.path.model.M
    assert abs(value) > 1e3
    assert_same_end(first, ends(kind, boundary, f"{key}: {value / 1e3!r} kJ/kg"))
    assert_same_end(first, ends(kind, boundary, f"{key}: {value * M!r} J/mol"))
    total = ends(kind, boundary, f"{key}: {2.0 * value!r} {unit}", more=f"amount: {amount}\n")
    assert_same_end(first, total)
    assert total.legs["a"].total[key] == pytest.approx(2.0 * value, rel=1e-9)


@pytest.mark.parametrize(("ratio", "factor"), [(0.6, 1.0 / 0.8), (3.0, 0.8)])
@pytest.mark.parametrize("key", ["v", "rho"])
def test_efficiency_of_a_closed_mass_to_a_volume(ratio, factor, key):
    """The ideal leg it is measured by ends at the same volume."""
    value = ratio if key == "v" else 1.0 / ratio
    leg = f"name: a, path: adiabatic, to: {{{key}: {{ratio: {value!r}}}}}"
    ideal = solve(FLUID, START, leg, boundary="closed")
    real = solve(FLUID, START, f"{leg}, efficiency: 0.8", boundary="closed")
    assert real.legs["a"].work == pytest.approx(ideal.legs["a"].work * factor, rel=1e-10)
    assert real.states["a"].v == pytest.approx(ideal.states["a"].v, rel=1e-10)
    assert failed_checks(real) == []


SATURATION = [
    ("path: isobaric", "flow"),
    ("path: isobaric", "closed"),
    ("path: workless, pressure_drop: 0.5 bar", "flow"),
]


@pytest.mark.parametrize(("path", "boundary"), SATURATION)
def test_quality_superheat_and_subcooling(path, boundary):
    """Superheat and subcooling count from the saturation temperature at the outlet pressure."""

    def state(target):
        return solve(FLUID, START, f"name: a, {path}, to: {{{target}}}", boundary=boundary).states["a"]

    liquid, vapour = state("x: 0"), state("x: 1")
    assert liquid["T"] == pytest.approx(vapour.T, rel=1e-12)
    assert state("x: 0.25").h == pytest.approx(0.75 * liquid.h + 0.25 * vapour.h, rel=1e-10)
    hot, cold = state("superheat: 12 K"), state("subcooling: 7 K")
    assert hot["T"] == pytest.approx(vapour.T + 12.0, rel=1e-12)
    assert hot.phase == "vapour"
    assert cold["T"] == pytest.approx(liquid.T - 7.0, rel=1e-12)
    assert cold.phase == "liquid"
    assert hot.p == cold.p == liquid.p


@pytest.mark.parametrize("boundary", ["flow", "closed"])
@pytest.mark.parametrize("path", ["isothermal", "isochoric"])
def test_quality_target_from_inside_the_dome(path, boundary):
    solution = solve(FLUID, "T: 320 K, x: 0.4", f"name: a, path: {path}, to: {{x: 0.6}}", boundary=boundary)
    assert solution.states["a"].x == pytest.approx(0.6, rel=1e-9)
    key = "T" if path == "isothermal" else "v"
    assert solution.states["a"][key] == pytest.approx(solution.states["start"][key], rel=1e-12)
    assert failed_checks(solution) == []


@pytest.mark.parametrize(("pair", "key"), [("p: 20 bar, T: 380 K", "T"), ("p: 20 bar, v: 0.025 m3/kg", "v"),
                                           ("T: 380 K, rho: 40 kg/m3", "rho")])  # fmt: skip
@pytest.mark.parametrize("boundary", ["flow", "closed"])
def test_polytropic_to_two_targets(pair, key, boundary):
    """Both are met, and the exponent they imply, given with one of them, leads there too."""
    from math import log

    solution = solve(FLUID, START, f"name: a, path: polytropic, to: {{{pair}}}", boundary=boundary)
    a, b = solution.states["start"], solution.states["a"]
    assert b[key] == pytest.approx(float(pair.split(f"{key}: ")[1].split()[0]), rel=1e-10)
    n = log(b.p / a.p) / log(a.v / b.v)
    again = solve(
        FLUID,
        START,
        f"name: a, path: polytropic, exponent: {n!r}, to: {{v: {b.v!r} m3/kg}}",
        boundary=boundary,
    )
    assert_same_end(solution, again)
    assert again.legs["a"].work == pytest.approx(solution.legs["a"].work, rel=1e-8)
