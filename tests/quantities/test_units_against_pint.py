"""Every factor of our table against a general units library, by translating each spelling into its words."""

from __future__ import annotations

import re

import pint
import pytest

from pathcalc.quantities.limits import si_unit
from pathcalc.quantities.units import NORMAL_CONDITIONS, R_MOLAR, UNITS, convert

WORDS = {
    "J": "joule", "kJ": "kilojoule", "MJ": "megajoule", "GJ": "gigajoule", "Wh": "watt_hour",
    "kWh": "kilowatt_hour", "MWh": "megawatt_hour", "cal_th": "thermochemical_calorie",
    "kcal_th": "kilothermochemical_calorie", "cal_IT": "international_calorie",
    "kcal_IT": "kilointernational_calorie", "Btu": "international_british_thermal_unit",
    "kBtu": "(1000*international_british_thermal_unit)",
    "MMBtu": "(1e6*international_british_thermal_unit)", "kg": "kilogram", "g": "gram", "mg": "milligram",
    "t": "metric_ton", "lb": "pound", "mol": "mole", "mmol": "millimole", "kmol": "kilomole",
    "lbmol": "(453.59237*mole)", "s": "second", "min": "minute", "h": "hour", "d": "day", "m3": "meter**3",
    "dm3": "decimeter**3", "cm3": "centimeter**3", "mm3": "millimeter**3", "L": "liter", "mL": "milliliter",
    "ft3": "foot**3", "in3": "inch**3", "gal_US": "gallon", "K": "kelvin", "degR": "degree_Rankine",
    "delta_degC": "delta_degree_Celsius", "delta_degF": "delta_degree_Fahrenheit", "Pa": "pascal",
    "hPa": "hectopascal", "kPa": "kilopascal", "MPa": "megapascal", "GPa": "gigapascal", "bar": "bar",
    "mbar": "millibar", "atm": "standard_atmosphere", "psi": "pound_force_per_square_inch",
    "ksi": "(1000*pound_force_per_square_inch)", "Torr": "torr", "mmHg": "millimeter_Hg", "inHg": "inch_Hg",
    "kgf": "kilogram_force", "cm2": "centimeter**2", "mmH2O": "(0.1*centimeter_H2O)", "inH2O": "inch_H2O",
    "hp": "horsepower", "W": "watt", "kW": "kilowatt", "MW": "megawatt", "m": "meter", "ft": "foot",
    "lbf": "force_pound", "1": "1", "%": "percent", "ppm": "ppm", "m6": "meter**6", "dm6": "decimeter**6",
    "cm6": "centimeter**6", "L2": "liter**2", "mol2": "mole**2", "kmol2": "kilomole**2",
}  # fmt: skip
TOKEN = re.compile(r"[A-Za-z_%][A-Za-z_0-9%]*|1")
# conventional columns differ in the seventh digit from one publication to another
TOLERANCE = {"mmHg": 1e-6, "inHg": 1e-6, "inH2O": 5e-5, "mmH2O": 5e-5}


@pytest.fixture(scope="module")
def registry() -> pint.UnitRegistry:
    return pint.UnitRegistry(autoconvert_offset_to_baseunit=True)


def expression(spelling: str) -> str:
    text = spelling.replace("ft lbf", "ft*lbf").replace(" ", "*")
    return TOKEN.sub(lambda m: WORDS[m.group()], text)


CHECKED = [
    s
    for s, u in UNITS.items()
    if not (u.gauge or u.absolute or u.offset) and not s.startswith(tuple(NORMAL_CONDITIONS))
]


def test_nearly_all_spellings_are_checked() -> None:
    left = set(UNITS) - set(CHECKED)
    assert {UNITS[s].dimension for s in left} == {"pressure", "temperature", "mole", "mole-flow"}
    assert len(left) == 12 + 4 + 3 * 5


def test_every_factor(registry: pint.UnitRegistry) -> None:
    si = {u: registry.Unit(expression(u)) if u else registry.Unit("") for u in
          {si_unit(UNITS[s].dimension, UNITS[s].per) for s in CHECKED}}  # fmt: skip
    wrong = []
    for spelling in CHECKED:
        unit = UNITS[spelling]
        theirs = registry.Quantity(1.0, "") * registry.parse_expression(expression(spelling))
        expected = theirs.to(si[si_unit(unit.dimension, unit.per)]).magnitude
        tolerance = next((t for s, t in TOLERANCE.items() if s in spelling), 1e-12)
        if unit.factor != pytest.approx(expected, rel=tolerance):
            wrong.append((spelling, unit.factor, expected))
    assert wrong == []


@pytest.mark.parametrize(
    ("spelling", "theirs"),
    [("degC", "degree_Celsius"), ("°C", "degree_Celsius"), ("degF", "degree_Fahrenheit")],
)
@pytest.mark.parametrize("number", [-40.0, 0.0, 32.0, 100.0, 451.0])
def test_temperature_points(registry: pint.UnitRegistry, spelling: str, theirs: str, number: float) -> None:
    expected = registry.Quantity(number, theirs).to("kelvin").magnitude
    unit = UNITS[spelling]
    assert (number + unit.offset) * unit.factor == pytest.approx(expected, rel=1e-14)
    assert convert(expected, spelling) == pytest.approx(number, abs=1e-10)


def test_gauge_and_absolute_have_the_factor_of_the_plain_unit() -> None:
    for spelling, unit in UNITS.items():
        if unit.gauge or unit.absolute:
            assert unit.factor == UNITS[spelling[:-1]].factor
            assert spelling[-1] == ("g" if unit.gauge else "a")


@pytest.mark.parametrize("spelling", sorted(NORMAL_CONDITIONS))
def test_normal_volumes_are_moles_of_ideal_gas(registry: pint.UnitRegistry, spelling: str) -> None:
    T, p = NORMAL_CONDITIONS[spelling]
    volume = registry.Quantity(1.0, "foot**3" if spelling == "scf" else "meter**3").to("meter**3").magnitude
    assert UNITS[spelling].factor == pytest.approx(p * volume / (R_MOLAR * T), rel=1e-13)
    assert registry.Quantity(T, "kelvin").to("degree_Celsius").magnitude in (
        pytest.approx(0.0, abs=1e-9),
        pytest.approx(15.0, abs=1e-9),
        pytest.approx((60 - 32) / 1.8, abs=1e-9),
    )


def test_molar_volumes_that_are_published() -> None:
    """CODATA recommended values 2018 (Tiesinga et al., Rev. Mod. Phys. 93, 025010, 2021), molar volume of an
    ideal gas at 273.15 K and 101.325 kPa: 22.413 969 54... e-3 m3/mol. The digits are from memory."""
    assert 1.0 / UNITS["Nm3"].factor == pytest.approx(22.41396954e-3, rel=1e-9)
