"""The result object: keys and their order as the format fixes them, plain numbers, the same bytes twice."""

import json
import math

import pytest
from solving import case_text, solve

import pathcalc

TOP = [
    "pathcalc",
    "case",
    "software",
    "fluid",
    "boundary",
    "amount",
    "surroundings",
    "states",
    "legs",
    "totals",
    "cycle",
    "checks",
    "limits",
    "comparison",
    "warnings",
]
STATE = [
    "name",
    "T",
    "p",
    "v",
    "rho",
    "u",
    "h",
    "s",
    "a",
    "g",
    "cv",
    "cp",
    "sound_speed",
    "Z",
    "x",
    "phase",
    "expansivity",
    "compressibility",
    "joule_thomson",
    "fugacity_coefficient",
    "exergy",
]
LEG = [
    "name",
    "path",
    "from",
    "to",
    "delta",
    "heat",
    "work",
    "entropy_generated",
    "exergy_destroyed",
    "amount",
    "total",
    "maxwell",
    "pieces",
]
DELTA = ["T", "p", "v", "u", "h", "s", "a", "g"]
EXCHANGE = ["heat", "work", "entropy_generated", "exergy_destroyed"]

FLUID = "substance: propane, equation: peng-robinson"
LEGS = (
    "name: up, path: adiabatic, to: {p: 12 bar}, efficiency: 0.8",
    "name: cool, path: workless, to: {subcooling: 4 K}, pressure_drop: 0.1 bar",
    "name: valve, path: throttling, to: {p: 5 bar}",
    "name: boil, path: isobaric, to: {superheat: 10 K}",
)
MORE = """amount: 0.2 kg/s
surroundings: {T: 20 degC, p: 1.013 bar}
limits:
  - {quantity: up.T, max: 100 degC}
  - {quantity: totals.work, min: 1 kW, max: 1.2 kW}
report:
  compare_with: [soave, ideal-gas]
"""


@pytest.fixture(scope="module")
def result():
    return solve(FLUID, "superheat: 10 K, p: 5 bar", *LEGS, more=MORE).to_dict()


def test_keys_in_order(result):
    assert list(result) == TOP
    assert list(result["case"]) == ["id", "title", "sha256"]
    assert list(result["software"]) == ["pathcalc", "numpy", "scipy"]
    assert list(result["fluid"]) == ["substance", "equation", "molar_mass", "datum", "sources"]
    assert list(result["amount"]) == ["value", "unit"]
    assert list(result["surroundings"]) == ["T", "p"]
    for state in result["states"]:
        assert list(state) == STATE
    for leg in result["legs"]:
        assert list(leg) == LEG
        assert list(leg["delta"]) == DELTA
        assert list(leg["total"]) == EXCHANGE
        assert list(leg["maxwell"]) == ["ds", "du", "dh", "error", "closure"]
        assert leg["pieces"]
        for piece in leg["pieces"]:
            assert list(piece) == ["phase", "ds", "dh"]
    assert list(result["totals"]) == [*EXCHANGE, "delta"]
    assert list(result["totals"]["delta"]) == DELTA
    for check in result["checks"]:
        assert list(check) == ["name", "at", "passed", "value", "tolerance"]
    for limit in result["limits"]:
        assert list(limit) == ["quantity", "value", "min", "max", "passed", "margin"]
    for row in result["comparison"]:
        assert list(row) == ["equation", "quantities"]
    for warning in result["warnings"]:
        assert list(warning) == ["code", "at", "text"]


def numbers_in(value):
    if isinstance(value, dict):
        for item in value.values():
            yield from numbers_in(item)
    elif isinstance(value, list):
        for item in value:
            yield from numbers_in(item)
    elif not isinstance(value, str | bool) and value is not None:
        yield value


def test_only_plain_finite_numbers(result):
    for number in numbers_in(result):
        assert type(number) in (float, int)
        assert math.isfinite(number)
    json.dumps(result, allow_nan=False)


def test_no_negative_zero(result):
    assert not any(number == 0.0 and math.copysign(1.0, number) < 0.0 for number in numbers_in(result))


def test_same_bytes_twice(result):
    again = solve(FLUID, "superheat: 10 K, p: 5 bar", *LEGS, more=MORE).to_dict()
    assert json.dumps(again) == json.dumps(result)


def test_numbers_come_back_from_the_text(result):
    assert json.loads(json.dumps(result)) == result


def test_names_and_undefined_values(result):
    states = {state["name"]: state for state in result["states"]}
    assert list(states) == ["start", "up", "cool", "valve", "boil"]
    assert [(leg["from"], leg["to"]) for leg in result["legs"]] == [
        ("start", "up"), ("up", "cool"), ("cool", "valve"), ("valve", "boil"),
    ]  # fmt: skip
    assert states["start"]["x"] is None
    assert states["valve"]["phase"] == "two-phase"
    assert 0.0 < states["valve"]["x"] < 1.0
    assert states["valve"]["cp"] is None
    assert result["cycle"] is None
    assert result["amount"] == {"value": pytest.approx(0.2, rel=1e-14), "unit": "kg/s"}
    assert result["surroundings"] == {"T": 293.15, "p": 101300.0}


def test_totals_are_the_sums_of_the_legs(result):
    for key in EXCHANGE:
        total = sum(leg["total"][key] for leg in result["legs"])
        assert result["totals"][key] == pytest.approx(total, rel=1e-12)
        for leg in result["legs"]:
            assert leg["total"][key] == pytest.approx(0.2 * leg[key], rel=1e-12)
    for key in DELTA:
        factor = 1.0 if key in ("T", "p") else 0.2
        first, last = result["states"][0], result["states"][-1]
        size = factor * max(abs(first[key]), abs(last[key]))
        assert result["totals"]["delta"][key] == pytest.approx(
            factor * (last[key] - first[key]), rel=1e-9, abs=1e-9 * size
        )


def test_limits(result):
    hot, work = result["limits"]
    assert hot["min"] is None
    assert hot["max"] == 373.15
    assert hot["passed"] is True
    assert hot["margin"] == pytest.approx(373.15 - hot["value"], rel=1e-12)
    assert work["value"] == pytest.approx(result["totals"]["work"], rel=1e-14)
    assert work["passed"] is (1e3 <= work["value"] <= 1.2e3)
    assert work["margin"] == pytest.approx(min(work["value"] - 1e3, 1.2e3 - work["value"]), rel=1e-12)


def test_comparison_is_the_case_with_another_equation(result):
    soave, ideal = result["comparison"]
    assert (soave["equation"], ideal["equation"]) == ("soave", "ideal-gas")
    other = solve(
        "substance: propane, equation: soave", "superheat: 10 K, p: 5 bar", *LEGS, more=MORE.split("limits")[0]
    )
    assert soave["quantities"]["up.T"] == pytest.approx(other.states["up"].T, rel=1e-13)
    assert soave["quantities"]["totals.work"] == pytest.approx(other.totals.work, rel=1e-13)
    assert set(ideal["quantities"].values()) == {None}  # an ideal gas has no superheat
    assert any(w["code"] == "comparison-failed" for w in result["warnings"])


def test_totals_without_an_amount_are_null():
    result = solve(FLUID, "T: 340 K, p: 5 bar", "name: a, path: isobaric, to: {T: 350 K}").to_dict()
    assert result["amount"] == {"value": None, "unit": "kg/s"}
    assert result["totals"] == {**dict.fromkeys(EXCHANGE), "delta": dict.fromkeys(DELTA)}
    assert result["legs"][0]["total"] == dict.fromkeys(EXCHANGE)
    assert result["surroundings"] == {"T": 298.15, "p": 101325.0}


def test_digest_is_of_the_text():
    import hashlib

    text = case_text(FLUID, "T: 340 K, p: 5 bar", "name: a, path: isobaric, to: {T: 350 K}")
    case = pathcalc.loads(text, name="b")
    other = pathcalc.loads(text + "# a remark\n", name="b")
    assert case.sha256 == hashlib.sha256(text.encode()).hexdigest()
    assert other.sha256 != case.sha256
    assert pathcalc.solve(case).to_dict()["case"]["id"] == "b"


@pytest.mark.parametrize("address", ["a.T", "start.rho", "a.work", "a.delta.s"])
def test_addresses(address):
    solution = solve(FLUID, "T: 340 K, p: 5 bar", "name: a, path: isobaric, to: {T: 350 K}")
    place, _, key = address.partition(".")
    if address == "a.delta.s":
        expected = solution.legs["a"].delta.s
    else:
        expected = solution.legs["a"].work if key == "work" else solution.states[place][key]
    assert solution.quantity(address) == expected


@pytest.mark.parametrize("address", ["a.temperature", "b.T", "T", "totals.efficiency", "a.name", "a.delta.q"])
def test_unknown_addresses(address):
    solution = solve(FLUID, "T: 340 K, p: 5 bar", "name: a, path: isobaric, to: {T: 350 K}")
    with pytest.raises(pathcalc.errors.UsageError, match="no result"):
        solution.quantity(address)
