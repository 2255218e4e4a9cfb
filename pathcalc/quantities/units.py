"""The closed list of unit spellings, each with its dimension and its factor to SI.

Sources of the factors: the SI Brochure for SI units and their prefixes, NIST SP 811 (2008), appendix B.8, for
the others; most are exact by definition, those that are products of exact ones are computed here from them.
A spelling that is not in ``UNITS`` is refused: ``advice`` says what to write instead.
"""

from __future__ import annotations

import difflib
import re
from dataclasses import dataclass
from typing import Literal

SI = "BIPM, The International System of Units (SI Brochure), 9th edition, 2019"
SP811 = "Thompson and Taylor, Guide for the Use of the International System of Units, NIST SP 811, 2008, B.8"
DIN1343 = "DIN 1343:1990, Reference conditions, normal conditions, normal volume"
ISO13443 = "ISO 13443:1996, Natural gas: standard reference conditions"
USUAL = "common practice, no source: the reference condition is stated in the description of the format"

R_MOLAR = 8.31446261815324
"""Molar gas constant, J/(mol K), exact: SI Brochure, 9th edition, 2019 (N_A times k)."""

ATM = 101325.0
DEG_F_ZERO = 459.67 / 1.8

LB = 0.45359237
FT = 0.3048
INCH = 0.0254
G_N = 9.80665
PSI = LB * G_N / INCH**2
BTU = 2326.0 * LB
LBMOL = LB * 1000.0


@dataclass(frozen=True)
class Unit:
    """One spelling: value in SI = (number + offset) * factor; a gauge unit adds the ambient pressure."""

    dimension: str
    factor: float
    offset: float = 0.0
    gauge: bool = False
    absolute: bool = False
    per: Literal["mass", "mole"] | None = None
    citation: str = SI


def _moles(volume: float, temperature: float, pressure: float) -> float:
    """Amount of ideal gas in a volume (m3) at a reference condition (K, Pa), mol."""
    return pressure * volume / (R_MOLAR * temperature)


_ENERGY = {
    "J": (1.0, SI), "kJ": (1e3, SI), "MJ": (1e6, SI), "GJ": (1e9, SI),
    "Wh": (3600.0, SP811), "kWh": (3.6e6, SP811), "MWh": (3.6e9, SP811),
    "cal_th": (4.184, SP811), "kcal_th": (4184.0, SP811),
    "cal_IT": (4.1868, SP811), "kcal_IT": (4186.8, SP811),
    "Btu": (BTU, SP811), "kBtu": (1e3 * BTU, SP811), "MMBtu": (1e6 * BTU, SP811),
    "ft lbf": (FT * LB * G_N, SP811),
}  # fmt: skip
_MASS = {"kg": (1.0, SI), "g": (1e-3, SI), "mg": (1e-6, SI), "t": (1e3, SI), "lb": (LB, SP811)}
_MOLE = {"mol": (1.0, SI), "mmol": (1e-3, SI), "kmol": (1e3, SI), "lbmol": (LBMOL, SP811)}
_TIME = {"s": (1.0, SI), "min": (60.0, SI), "h": (3600.0, SI), "d": (86400.0, SI)}
_VOLUME = {
    "m3": (1.0, SI), "dm3": (1e-3, SI), "cm3": (1e-6, SI), "mm3": (1e-9, SI), "L": (1e-3, SI),
    "mL": (1e-6, SI),
    "ft3": (FT**3, SP811), "in3": (INCH**3, SP811), "gal_US": (231 * INCH**3, SP811),
}  # fmt: skip
_NORMAL = {
    "Nm3": (_moles(1.0, 273.15, 101325.0), DIN1343),
    "Sm3": (_moles(1.0, 288.15, 101325.0), ISO13443),
    "scf": (_moles(FT**3, 288.70555555555555, 14.696 * PSI), USUAL),
}
_INTERVAL = {
    "K": (1.0, SI), "degR": (1 / 1.8, SP811), "delta_degC": (1.0, SI), "delta_degF": (1 / 1.8, SP811),
}  # fmt: skip
_PRESSURE = {
    "Pa": (1.0, SI), "hPa": (1e2, SI), "kPa": (1e3, SI), "MPa": (1e6, SI), "GPa": (1e9, SI),
    "bar": (1e5, SP811),
    "mbar": (1e2, SP811), "atm": (ATM, SP811), "psi": (PSI, SP811), "ksi": (1e3 * PSI, SP811),
    "Torr": (ATM / 760, SP811), "mmHg": (133.3224, SP811), "inHg": (3386.389, SP811),
    "mmH2O": (9.80665, SP811), "inH2O": (249.0889, SP811), "kgf/cm2": (G_N * 1e4, SP811),
}  # fmt: skip


def _pressures() -> dict[str, Unit]:
    table = {name: Unit("pressure", f, citation=c) for name, (f, c) in _PRESSURE.items()}
    for name in ("Pa", "kPa", "MPa", "bar", "mbar", "psi"):
        f, c = _PRESSURE[name]
        table[name + "g"] = Unit("pressure", f, gauge=True, citation=c)
        table[name + "a"] = Unit("pressure", f, absolute=True, citation=c)
    return table


def _per_amount() -> dict[str, Unit]:
    """Quantities per mass or per mole: energy, entropy, volume, and density."""
    table: dict[str, Unit] = {}
    amounts: list[tuple[Literal["mass", "mole"], dict[str, tuple[float, str]]]] = [
        ("mass", _MASS),
        ("mole", _MOLE),
    ]
    for per, group in amounts:
        for amount, (fa, ca) in group.items():
            for energy, (fe, ce) in _ENERGY.items():
                c = _worse(ca, ce)
                table[f"{energy}/{amount}"] = Unit("specific-energy", fe / fa, per=per, citation=c)
                for interval, (fi, ci) in _INTERVAL.items():
                    unit = Unit("specific-entropy", fe / fa / fi, per=per, citation=_worse(c, ci))
                    table[f"{energy}/({amount} {interval})"] = unit
                    table[f"{energy}/{amount}/{interval}"] = unit
            for volume, (fv, cv) in _VOLUME.items():
                c = _worse(ca, cv)
                table[f"{volume}/{amount}"] = Unit("specific-volume", fv / fa, per=per, citation=c)
                table[f"{amount}/{volume}"] = Unit("density", fa / fv, per=per, citation=c)
    return table


def _worse(*citations: str) -> str:
    return next((c for c in citations if c != SI), SI)


def _build() -> dict[str, Unit]:
    table = {
        "%": Unit("fraction", 1e-2),
        "ppm": Unit("fraction", 1e-6, citation=SP811),
        "K": Unit("temperature", 1.0),
        "degC": Unit("temperature", 1.0, offset=273.15),
        "°C": Unit("temperature", 1.0, offset=273.15),
        "degF": Unit("temperature", 1 / 1.8, offset=459.67, citation=SP811),
        "°F": Unit("temperature", 1 / 1.8, offset=459.67, citation=SP811),
        "degR": Unit("temperature", 1 / 1.8, citation=SP811),
        "delta_degC": Unit("temperature-difference", 1.0),
        "delta_degF": Unit("temperature-difference", 1 / 1.8, citation=SP811),
        "hp": Unit("power", 550 * FT * LB * G_N, citation=SP811),
        "W": Unit("power", 1.0),
        "kW": Unit("power", 1e3),
        "MW": Unit("power", 1e6),
        "m/s": Unit("speed", 1.0),
        "ft/s": Unit("speed", FT, citation=SP811),
        "kg/mol": Unit("molar-mass", 1.0),
        "g/mol": Unit("molar-mass", 1e-3),
        "kg/kmol": Unit("molar-mass", 1e-3),
        "lb/lbmol": Unit("molar-mass", 1e-3, citation=SP811),
        "m6/mol2": Unit("third-virial", 1.0),
        "dm6/mol2": Unit("third-virial", 1e-6),
        "cm6/mol2": Unit("third-virial", 1e-12),
        "L2/mol2": Unit("third-virial", 1e-6),
        "m6/kmol2": Unit("third-virial", 1e-6),
    }
    table |= _pressures()
    simple = (("energy", _ENERGY), ("mass", _MASS), ("mole", _MOLE), ("volume", _VOLUME), ("time", _TIME))
    for dimension, group in simple:
        table |= {name: Unit(dimension, f, citation=c) for name, (f, c) in group.items()}
    table |= {name: Unit("mole", f, citation=c) for name, (f, c) in _NORMAL.items()}
    rates = (
        ("power", _ENERGY),
        ("mass-flow", _MASS),
        ("mole-flow", _MOLE),
        ("mole-flow", _NORMAL),
        ("volume-flow", _VOLUME),
    )
    for dimension, group in rates:
        for name, (f, c) in group.items():
            for time, (ft, ct) in _TIME.items():
                table[f"{name}/{time}"] = Unit(dimension, f / ft, citation=_worse(c, ct))
    simple_pressures = [(name, f) for name, f in _PRESSURE.items() if "/" not in name]
    for interval, (fi, ci) in _INTERVAL.items():
        for name, (f, c) in _ENERGY.items():
            table[f"{name}/{interval}"] = Unit("entropy", f / fi, citation=_worse(c, ci))
            for time, (ft, ct) in _TIME.items():
                rate = Unit("entropy-rate", f / fi / ft, citation=_worse(c, ci, ct))
                table[f"{name}/({time} {interval})"] = rate
        for name, factor in (("W", 1.0), ("kW", 1e3), ("MW", 1e6)):
            table[f"{name}/{interval}"] = Unit("entropy-rate", factor / fi, citation=ci)
        table[f"1/{interval}"] = Unit("expansivity", 1 / fi, citation=ci)
        for name, (f, c) in simple_pressures:
            table[f"{interval}/{name}"] = Unit("joule-thomson", fi / f, citation=_worse(c, ci))
    for name, (f, c) in simple_pressures:
        table[f"1/{name}"] = Unit("compressibility", 1 / f, citation=c)
    return table | _per_amount()


UNITS: dict[str, Unit] = _build()

NORMAL_CONDITIONS = {
    "Nm3": (273.15, 101325.0),
    "Sm3": (288.15, 101325.0),
    "scf": (288.70555555555555, 14.696 * PSI),
}
"""Reference temperature (K) and pressure (Pa) of each normal volume."""


def convert(value_si: float, unit: str, ambient: float = ATM) -> float:
    """Number that goes with ``unit`` for a value in SI; ``ambient`` (Pa) is the zero of gauge units.

    Raises KeyError for a spelling that is not in ``UNITS``.
    """
    u = UNITS[unit]
    return (value_si - (ambient if u.gauge else 0.0)) / u.factor - u.offset


_SAID = {
    "C": "C is the coulomb; for a temperature write degC",
    "F": "F is the farad; for a temperature write degF",
    "R": "R is not a unit here; for a temperature write degR",
    "F°": "write degF",
    "C°": "write degC",
    "celsius": "write degC",
    "kelvin": "write K",
    "degK": "the kelvin has no degree; write K",
    "°K": "the kelvin has no degree; write K",
    "fahrenheit": "write degF",
    "rankine": "write degR",
    "deltac": "write delta_degC or K",
    "deltaf": "write delta_degF",
    "cal": "there are two calories; write cal_th (4.184 J) or cal_IT (4.1868 J)",
    "kcal": "there are two calories; write kcal_th (4184 J) or kcal_IT (4186.8 J)",
    "gal": "there are several gallons; write gal_US or m3",
    "at": "write kgf/cm2",
    "ton": "there are several tons; write t (1000 kg) or lb",
    "TR": "write kW or Btu/h",
    "PSI": "write psi, psia or psig",
    "m": "a length is no quantity of a path",
    "lbm": "write lb",
    "lbs": "write lb",
    "hr": "write h",
    "sec": "write s",
    "barA": "write bara",
    "barG": "write barg",
    "ata": "write kgf/cm2 or atm",
    "atg": "write barg",
    "KJ": "write kJ",
    "Kg": "write kg",
    "l": "write L",
    "percent": "write %",
}


def advice(spelling: str) -> str:
    """What to write instead of a unit spelling that is not in the list."""
    flat = " ".join(spelling.split())
    if flat in _SAID:
        return _SAID[flat]
    if flat.lower() in _SAID:
        return _SAID[flat.lower()]
    loose = re.fullmatch(r"(m?bar|[kM]?Pa|psi)\s*[(\[ _]?\s*(g|a|ga|abs|gauge|gage)\s*[)\]]?", flat, re.IGNORECASE)
    if loose:
        base = next(b for b in _PRESSURE if b.lower() == loose.group(1).lower())
        return f"write {base}{loose.group(2)[0].lower()}"
    plain = flat.replace("³", "3").replace("^", "").replace("**", "").replace("·", " ").replace("*", " ")
    plain = plain.replace("⁶", "6").replace("²", "2").replace("℃", "degC").replace("deg C", "degC")
    plain = plain.replace("deg F", "degF").replace("/hr", "/h").replace("/sec", "/s").replace("lbm", "lb")
    plain = re.sub(r"/(kg|g|mol|kmol|lb|lbmol|mmol|t)[ .-]?(K|degR)$", r"/(\1 \2)", plain)
    plain = re.sub(r"/\((kg|g|mol|kmol|lb|lbmol|mmol|t)[.-]?(K|degR)\)$", r"/(\1 \2)", plain)
    if plain in UNITS:
        return f"write {plain}"
    doubled = re.search(r"(^|/)k?cal(/|$)", plain)
    if doubled:
        return "there are two calories; write kcal_th (4184 J) or kcal_IT (4186.8 J)"
    lowered = {name.lower(): name for name in UNITS}
    if plain.lower() in lowered:
        return f"write {lowered[plain.lower()]}"
    near = difflib.get_close_matches(plain, UNITS, n=1, cutoff=0.6)
    return f"did you mean {near[0]}?" if near else "see the list of units in the format's description"


def spellings(dimension: str) -> list[str]:
    """All spellings that may be used where ``dimension`` is meant, in the order of the table."""
    if dimension == "temperature-difference":
        return [s for s, u in UNITS.items() if u.dimension == dimension or s in ("K", "degR")]
    if dimension == "pressure-difference":
        return [s for s, u in UNITS.items() if u.dimension == "pressure" and not u.gauge and not u.absolute]
    return [s for s, u in UNITS.items() if u.dimension == dimension]
