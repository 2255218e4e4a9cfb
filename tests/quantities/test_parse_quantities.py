"""Texts and mappings to quantities."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from pathcalc.case.codes import CODES
from pathcalc.quantities import ATM, UNITS, Quantity, QuantityError, convert, parse, parse_text
from pathcalc.quantities.relative import parse_relative
from pathcalc.quantities.units import advice, spellings


@pytest.mark.parametrize(
    ("text", "dimension", "value"),
    [
        ("15 degC", "temperature", 288.15),
        ("-40 degF", "temperature", 233.15),
        ("1.013 bar", "pressure", 101300.0),
        ("1.2 bara", "pressure", 120000.0),
        ("0.15 bar", "pressure-difference", 15000.0),
        ("40 K", "temperature-difference", 40.0),
        ("18 delta_degF", "temperature-difference", 10.0),
        ("0.35 kg/s", "mass-flow", 0.35),
        ("3.6 t/h", "mass-flow", 1.0),
        ("6.8 kJ/(kg K)", "specific-entropy", 6800.0),
        ("6.8 kJ/kg/K", "specific-entropy", 6800.0),
        ("1 Btu/lb", "specific-energy", 2326.0),
        ("76 %", "fraction", 0.76),
        ("76%", "fraction", 0.76),
        ("1e5 Pa", "pressure", 1e5),
        ("+.5e1 bar", "pressure", 5e5),
        ("  15   degC ", "temperature", 288.15),
        ("010 bar", "pressure", 1e6),
    ],
)
def test_values_are_exact(text: str, dimension: str, value: float) -> None:
    assert parse_text(text, (dimension,)).value == value


def test_gauge_counts_from_the_ambient_pressure() -> None:
    q = parse_text("4.5 barg", ("pressure",), ambient=101300.0)
    assert (q.value, q.gauge, q.unit, q.text) == (551300.0, True, "barg", "4.5 barg")
    assert parse_text("0 psig", ("pressure",)).value == ATM
    assert convert(551300.0, "barg", 101300.0) == pytest.approx(4.5, rel=1e-15)


def test_per_mass_and_per_mole_are_kept_apart() -> None:
    assert parse_text("1 kJ/kg", ("specific-energy",)).per == "mass"
    assert parse_text("1 kJ/mol", ("specific-energy",)).per == "mole"
    assert parse_text("1 K", ("temperature",)).per is None


SPREADS = [
    ({"value": "350 bar", "u": "2 bar"}, 2e5, "normal", None),
    ({"value": "350 bar", "U": "2 bar", "k": "2"}, 1e5, "normal", 2.0),
    (
        {"value": "9 bar", "half_width": "3 bar", "shape": "rectangular"},
        3e5 / math.sqrt(3),
        "rectangular",
        None,
    ),
    (
        {"value": "9 bar", "half_width": "3 bar", "shape": "triangular"},
        3e5 / math.sqrt(6),
        "triangular",
        None,
    ),
    ({"value": "350 barg", "u": "2 bar"}, 2e5, "normal", None),
]


@pytest.mark.parametrize(("data", "u", "shape", "k"), SPREADS)
def test_standard_uncertainty(data: dict[str, str], u: float, shape: str, k: float | None) -> None:
    """JCGM 100:2008: 4.3.3 (expanded), 4.3.7 (rectangular), 4.3.9 (triangular)."""
    q = parse(data, ("pressure",))
    assert (q.u, q.shape, q.k) == (pytest.approx(u, rel=1e-15), shape, k)


def test_uncertainty_of_a_temperature_is_a_difference() -> None:
    q = parse(
        {"value": "20 degC", "u": "0.9 delta_degF", "source": "lab", "note": "n"},
        ("temperature",),
        sources=["lab"],
    )
    assert (q.value, q.source, q.note) == (293.15, "lab", "n")
    assert q.u == pytest.approx(0.5, rel=1e-15)


def test_uncertainty_must_be_per_what_the_value_is_per() -> None:
    with pytest.raises(QuantityError, match="u must be per mass, as the value is"):
        parse({"value": "3 kJ/kg", "u": "1 kJ/mol"}, ("specific-energy",))


def test_all_problems_of_a_mapping_at_once() -> None:
    with pytest.raises(QuantityError) as caught:
        parse({"value": "3 Bar", "sigma": "1", "source": "x"}, ("pressure",), sources=[])
    assert [(p.code, p.at) for p in caught.value.problems] == [
        ("unknown-key", ("sigma",)),
        ("bad-unit", ("value",)),
        ("unknown-source", ("source",)),
    ]


@pytest.mark.parametrize(
    ("spelling", "say"),
    [
        ("bar(g)", "write barg"), ("bar g", "write barg"), ("BARG", "write barg"), ("kPa a", "write kPaa"),
        ("psi(a)", "write psia"), ("MPa(gauge)", "write MPag"), ("C", "for a temperature write degC"),
        ("F", "for a temperature write degF"), ("R", "for a temperature write degR"),
        ("celsius", "write degC"),
        ("deg C", "write degC"), ("m³/kg", "write m3/kg"), ("kg/m^3", "write kg/m3"), ("kg/hr", "write kg/h"),
        ("kJ/kgK", "write kJ/(kg K)"), ("kJ/kg-K", "write kJ/(kg K)"), ("kJ/(kg·K)", "write kJ/(kg K)"),
        ("kcal", "there are two calories"), ("lbm", "write lb"), ("gal", "several gallons"),
        ("ton", "several tons"),
        ("barr", "did you mean bar"), ("furlongs per fortnight", "list of units"),
    ],
)  # fmt: skip
def test_advice(spelling: str, say: str) -> None:
    assert spelling not in UNITS
    assert say in advice(spelling)


@pytest.mark.parametrize(
    "text",
    [
        "nan",
        "inf bar",
        "-.inf",
        "1e999 bar",
        "1_000 bar",
        "1,5 bar",
        "−5 degC",
        "1:30",
        "1.2.3",
        "1e-999 bar",
    ],
)
def test_bad_numbers(text: str) -> None:
    with pytest.raises(QuantityError) as caught:
        parse_text(text, ("pressure", "temperature", "fraction"))
    assert [p.code for p in caught.value.problems] == ["bad-number"]


@pytest.mark.parametrize("value", [True, None, ["5 bar"], object(), float("nan"), float("inf")])
def test_what_is_no_quantity_at_all(value: object) -> None:
    with pytest.raises(QuantityError):
        parse(value, ("pressure", "fraction"))


def read(text: str, *dimensions: str) -> tuple[Quantity | None, set[str]]:
    try:
        return parse_text(text, dimensions), set()
    except QuantityError as error:
        return None, {p.code for p in error.problems}


@given(st.text(max_size=40))
def test_any_text_is_a_quantity_or_an_error(text: str) -> None:
    q, codes = read(text, "pressure", "temperature", "fraction")
    assert codes <= CODES.keys()
    assert codes if q is None else math.isfinite(q.value)


@given(st.sampled_from(sorted(UNITS)), st.floats(1e-3, 1e3))
def test_round_trip_through_every_unit(spelling: str, number: float) -> None:
    unit = UNITS[spelling]
    q, codes = read(f"{number!r} {spelling}", unit.dimension)
    if q is None:
        assert codes == {"implausible"}
        assert unit.factor * number > 1e3
    else:
        assert convert(q.value, spelling) == pytest.approx(number, rel=1e-9, abs=1e-9)


def test_spellings_for_differences() -> None:
    assert spellings("temperature-difference") == ["K", "degR", "delta_degC", "delta_degF"]
    assert "barg" not in spellings("pressure-difference")
    assert "bara" not in spellings("pressure-difference")
    assert "bar" in spellings("pressure-difference")


def test_relative_targets() -> None:
    ratio = parse_relative({"ratio": {"value": "3.1", "u": "0.1"}}, ("pressure",), True)
    assert (ratio.kind, ratio.amount and ratio.amount.value, ratio.amount and ratio.amount.u) == (
        "ratio",
        3.1,
        0.1,
    )
    drop = parse_relative({"drop": "5 delta_degC"}, ("temperature",), True)
    assert (drop.kind, drop.amount and drop.amount.value) == ("drop", 5.0)
    same = parse_relative({"same_as": "start"}, ("temperature",), True)
    assert (same.kind, same.state, same.amount) == ("same_as", "start", None)


def test_a_relative_target_may_name_its_source() -> None:
    target = parse_relative({"ratio": "3.1", "source": "lab", "note": "n"}, ("pressure",), True, sources=["lab"])
    assert target.amount is not None
    assert (target.amount.value, target.amount.source, target.amount.note) == (3.1, "lab", "n")
    with pytest.raises(QuantityError) as caught:
        parse_relative({"ratio": "x", "source": "lob"}, ("pressure",), True, sources=["lab"])
    assert [p.at for p in caught.value.problems] == [("ratio",), ("source",)]
    with pytest.raises(QuantityError, match="same_as stands alone"):
        parse_relative({"same_as": "start", "note": "n"}, ("pressure",), True)
