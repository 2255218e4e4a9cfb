"""Numbers and units as they are printed. Expected texts are written out by hand from the rules."""

from __future__ import annotations

import math

import pytest

from pathcalc.report import numbers
from pathcalc.report.units import Units, kind_of, pretty


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        (0.0, "0"),
        (-0.0, "0"),
        (1.0, "1.00000"),
        (-273.15, "−273.150"),
        (123456.7, "123\u202f457"),
        (35123456.0, "35\u202f123\u202f456"),
        (0.00123456789, "0.00123457"),
        (9.999999e-5, "0.000100000"),
        (9.9e-6, "9.90000×10⁻⁶"),
        (-1.5e12, "−1.50000×10¹²"),
        (999999.6, "1\u202f000\u202f000"),
        (5e-324, "4.94066×10⁻³²⁴"),
        (1.7976931348623157e308, "1.79769×10³⁰⁸"),
        (math.inf, "∞"),
        (-math.inf, "−∞"),
        (math.nan, "–"),
        (None, "–"),
    ],
)
def test_significant_digits(value: float | None, expected: str) -> None:
    assert numbers.significant(value) == expected


@pytest.mark.parametrize(
    ("value", "decimals", "expected"),
    [
        (1234.5678, 2, "1\u202f234.57"),
        (-0.0004, 3, "0.000"),
        (-0.0006, 3, "−0.001"),
        (0.0, 3, "0.000"),
        (5e-324, 3, "0.000"),
        (2.5e300, 3, "2.50000×10³⁰⁰"),
        (None, 3, "–"),
        (-1234567.0, 0, "−1\u202f234\u202f567"),
    ],
)
def test_fixed_decimals(value: float | None, decimals: int, expected: str) -> None:
    assert numbers.fixed(value, decimals) == expected


def test_error_estimates_have_two_digits() -> None:
    assert numbers.scientific(3.14159e-13) == "3.1×10⁻¹³"
    assert numbers.scientific(-9.99e-9) == "−1.0×10⁻⁸"
    assert numbers.scientific(0.0) == "0"


def test_short_numbers_keep_only_what_is_said() -> None:
    assert numbers.short(28.0134, 12) == "28.0134"
    assert numbers.short(101325.0, 8) == "101\u202f325"
    assert numbers.short(1.5e-9) == "1.5×10⁻⁹"
    assert numbers.short(100.0) == "100"


def test_common_decimals_show_the_largest_to_six_digits() -> None:
    assert numbers.common_decimals([0.1, -350.2, None]) == 3
    assert numbers.common_decimals([1e9]) == 0
    assert numbers.common_decimals([1e-12]) == 6
    assert numbers.common_decimals([]) == 3
    assert numbers.common_decimals([math.nan, math.inf, 2.0]) == 5


def test_columns_line_up() -> None:
    column = numbers.align(["1.25", "12", "−3.5", "–", "1.0×10⁻³"])
    assert [n.pad for n in column] == ["", ".00", "0", "", ""]
    assert [n.pad for n in numbers.align(["1", "2"])] == ["", ""]


def units(flow: bool = True, **block: str) -> Units:
    return Units(block, flow=flow, molar_mass=0.028, ambient=1.0e5)


def test_units_of_the_case() -> None:
    chosen = units(T="degC", p="barg", energy="kJ", mass="kg", time="s")
    assert chosen["T"].of(300.0) == pytest.approx(26.85)
    assert chosen["p"].of(3.0e5) == pytest.approx(2.0)
    assert chosen["dp"].of(3.0e5) == pytest.approx(3.0)
    assert (chosen["p"].unit, chosen["dp"].unit, chosen.gauge) == ("barg", "bar", True)
    assert (chosen["e"].unit, chosen["s"].unit, chosen["v"].unit) == ("kJ/kg", "kJ/(kg K)", "m³/kg")
    assert (chosen["total"].unit, chosen["total"].of(2.0e6)) == ("kW", pytest.approx(2000.0))
    closed = units(flow=False, energy="MJ", mass="g")
    assert (closed["total"].unit, closed["amount"].unit) == ("MJ", "g")
    assert closed["e"].of(1.0e9) == pytest.approx(1.0)  # 1 GJ/kg is 1 MJ/g


def test_customary_units() -> None:
    """1 Btu/lb is 2326 J/kg exactly, 1 psi is 6894.757 Pa: NIST SP 811 (2008), appendix B.8."""
    chosen = units(T="degF", p="psia", energy="Btu", mass="lb", time="h", volume="ft3")
    assert chosen["e"].of(2326.0) == pytest.approx(1.0, rel=1e-12)
    assert chosen["s"].of(4186.8) == pytest.approx(1.0, rel=1e-12)
    assert chosen["p"].of(6894.757293168) == pytest.approx(1.0, rel=1e-9)
    assert chosen["T"].of(273.15) == pytest.approx(32.0)
    assert chosen["dT"].of(5.0) == pytest.approx(9.0)
    assert (chosen["s"].unit, chosen["total"].unit, chosen["v"].unit) == ("Btu/(lb °F)", "Btu/h", "ft³/lb")


def test_values_per_mole() -> None:
    chosen = units(energy="J", mass="mol")
    assert chosen["e"].of(1000.0) == pytest.approx(28.0)
    assert chosen["amount"].of(0.28) == pytest.approx(10.0)
    assert chosen["v"].of(1.0) == pytest.approx(0.028)


@pytest.mark.parametrize(
    ("address", "kind"),
    [
        ("start.T", "T"),
        ("first stage.work", "e"),
        ("totals.work", "total"),
        ("totals.delta.s", "total_entropy"),
        ("cooler.delta.T", "dT"),
        ("cooler.delta.s", "s"),
        ("cooler.maxwell.ds", "s"),
        ("totals.delta.p", "dp"),
        ("start.Z", "one"),
        ("cycle.thermal_efficiency", "one"),
        ("leg.total.heat", "total"),
        ("a.unheard", "one"),
    ],
)
def test_kinds_of_addresses(address: str, kind: str) -> None:
    assert kind_of(address) == kind


def test_pretty_units() -> None:
    assert [pretty(u) for u in ("degC", "m3/kg", "kJ/(kg K)", "delta_degF", "Nm3/h", "kgf/cm2", "m6/mol2")] == [
        "°C",
        "m³/kg",
        "kJ/(kg K)",
        "°F",
        "m³(n)/h",
        "kgf/cm²",
        "m⁶/mol²",
    ]
