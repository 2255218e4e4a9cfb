"""The forms in which a card may give the heat capacity of the ideal gas.

``constant``         cp_over_R
``polynomial``       coefficients [a0, a1, …]:  c_p0/R = a0 + a1 T + a2 T^2 + …
``nasa9``            ranges: [{T_min, T_max, a: [a1 … a7]}, …]:  c_p0/R = a1 T^-2 + a2 T^-1 + a3 + … + a7 T^4
``planck-einstein``  a sum of any of, with y = theta/T and theta in K:
    constant: c                                   c
    powers: [[c, t], …]                           c T^t
    einstein: [[v, theta], …]                     v y^2 e^y/(e^y - 1)^2
    sinh: [[v, theta], …]                         v (y/sinh y)^2
    cosh: [[v, theta], …]                         v (y/cosh y)^2
    shifted: [[v, theta, g], …]                   v y^2 e^y/(e^y + g)^2

``gas_constant`` (J/(mol K)) is the one the source divided by; CODATA 2018 where it is left out.
"""

from __future__ import annotations

import math
from typing import Any

from pathcalc.substances.card import FORMS, Correlation, Form, LevelTerm, PowerTerm, TemperatureRange
from pathcalc.substances.fields import Fields, Path

R_CODATA = 8.314462618
"""Molar gas constant, J/(mol K). CODATA 2018 (Tiesinga et al., Rev. Mod. Phys. 93 (2021) 025010); exact."""

COMMON = ("name", "form", "T_min", "T_max", "source")
COMMON_OPTIONAL = ("gas_constant", "note", "uncertainty")
OWN: dict[str, tuple[tuple[str, ...], tuple[str, ...]]] = {
    "constant": (("cp_over_R",), ()),
    "polynomial": (("coefficients",), ()),
    "nasa9": (("ranges",), ()),
    "planck-einstein": ((), ("constant", "powers", "einstein", "sinh", "cosh", "shifted")),
}
NASA9_EXPONENTS = (-2.0, -1.0, 0.0, 1.0, 2.0, 3.0, 4.0)

Parts = tuple[tuple[TemperatureRange, ...], tuple[LevelTerm, ...]]


def read_correlation(fields: Fields, value: Any, path: Path) -> Correlation | None:
    """One item of ``ideal_gas``; None where findings leave nothing to read."""
    if not isinstance(value, dict) or value.get("form") not in FORMS:
        if isinstance(value, dict) and "form" in value:
            known = ", ".join(FORMS)
            fields.wrong((*path, "form"), f"unknown form {str(value['form'])!r}; known: {known}", "bad-value")
        else:
            own = [key for needed, optional in OWN.values() for key in (*needed, *optional)]
            fields.mapping(value, path, COMMON, [*COMMON_OPTIONAL, *own])
        return None
    form: Form = next(known for known in FORMS if known == value["form"])
    needed, optional = OWN[form]
    if not fields.mapping(value, path, (*COMMON, *needed), (*COMMON_OPTIONAL, *optional)):
        return None
    T_min = fields.number(value["T_min"], (*path, "T_min"), above=0.0)
    T_max = fields.number(value["T_max"], (*path, "T_max"), above=T_min)
    ranges, levels = _READERS[form](fields, value, path, (T_min, T_max))
    return Correlation(
        name=fields.text(value["name"], (*path, "name")),
        form=form,
        T_min=T_min,
        T_max=T_max,
        gas_constant=_gas_constant(fields, value, path),
        source=fields.text(value["source"], (*path, "source")),
        ranges=ranges,
        levels=levels,
        note=fields.optional_text(value, "note", path),
        uncertainty=fields.optional_text(value, "uncertainty", path),
    )


def _gas_constant(fields: Fields, value: dict[str, Any], path: Path) -> float:
    if "gas_constant" not in value:
        return R_CODATA
    number = fields.number(value["gas_constant"], (*path, "gas_constant"))
    if abs(number / R_CODATA - 1.0) > 0.001:
        text = f"gas_constant is the molar one in J/(mol K), near {R_CODATA}, not {number:g}"
        fields.wrong((*path, "gas_constant"), text, "bad-value")
    return number


def _read_constant(fields: Fields, value: dict[str, Any], path: Path, limits: tuple[float, float]) -> Parts:
    cp = fields.number(value["cp_over_R"], (*path, "cp_over_R"), above=0.0)
    return (TemperatureRange(*limits, (PowerTerm(cp, 0.0),)),), ()


def _read_polynomial(fields: Fields, value: dict[str, Any], path: Path, limits: tuple[float, float]) -> Parts:
    place = (*path, "coefficients")
    numbers = fields.sequence(value["coefficients"], place)
    if not numbers:
        fields.wrong(place, "a polynomial needs at least one coefficient", "missing-key")
    powers = tuple(PowerTerm(fields.number(c, (*place, i)), float(i)) for i, c in enumerate(numbers))
    return (TemperatureRange(*limits, powers),), ()


def _read_nasa9(fields: Fields, value: dict[str, Any], path: Path, limits: tuple[float, float]) -> Parts:
    found: list[TemperatureRange] = []
    place = (*path, "ranges")
    for i, item in enumerate(fields.sequence(value["ranges"], place)):
        here = (*place, i)
        if not fields.mapping(item, here, ("T_min", "T_max", "a")):
            continue
        T_min = fields.number(item["T_min"], (*here, "T_min"), above=0.0)
        T_max = fields.number(item["T_max"], (*here, "T_max"), above=T_min)
        row = fields.row(item["a"], (*here, "a"), tuple(f"a{k}" for k in range(1, 8)))
        if found and found[-1].T_max != T_min:
            text = f"a range must begin where the one before ends, at {found[-1].T_max:g} K"
            fields.wrong((*here, "T_min"), text, "bad-value")
        if row is not None:
            powers = tuple(PowerTerm(c, t) for c, t in zip(row, NASA9_EXPONENTS, strict=True) if c)
            found.append(TemperatureRange(T_min, T_max, powers))
    if not found:
        fields.wrong(place, "`ranges` needs at least one temperature range", "missing-key")
    elif (found[0].T_min, found[-1].T_max) != limits and not any(map(math.isnan, limits)):
        text = f"T_min and T_max must be the ends of the ranges, {found[0].T_min:g} and {found[-1].T_max:g} K"
        fields.wrong((*path, "T_min"), text, "bad-value")
    return tuple(found), ()


def _read_levels(fields: Fields, value: dict[str, Any], path: Path, limits: tuple[float, float]) -> Parts:
    powers: list[PowerTerm] = []
    if "constant" in value:
        powers.append(PowerTerm(fields.number(value["constant"], (*path, "constant")), 0.0))
    powers += [PowerTerm(*row) for row in _rows(fields, value, path, "powers", ("coefficient", "exponent"))]
    levels: list[LevelTerm] = []
    for v, theta in _rows(fields, value, path, "einstein", ("weight", "theta")):
        levels.append(LevelTerm(v, theta))
    for v, theta in _rows(fields, value, path, "sinh", ("weight", "theta")):
        levels.append(LevelTerm(v, 2.0 * theta))
    for v, theta in _rows(fields, value, path, "cosh", ("weight", "theta")):
        levels.append(LevelTerm(v, 2.0 * theta, 1.0))
    for v, theta, shift in _rows(fields, value, path, "shifted", ("weight", "theta", "shift")):
        levels.append(LevelTerm(v, theta, shift))
    if not powers and not levels:
        fields.wrong(path, "this correlation has no terms", "missing-key")
    return (TemperatureRange(*limits, tuple(powers)),), tuple(levels)


def _rows(
    fields: Fields, value: dict[str, Any], path: Path, key: str, columns: tuple[str, ...]
) -> list[tuple[float, ...]]:
    place = (*path, key)
    if key not in value:
        return []
    rows: list[tuple[float, ...]] = []
    for i, item in enumerate(fields.sequence(value[key], place)):
        row = fields.row(item, (*place, i), columns)
        if row is None:
            continue
        if "theta" in columns and not row[1] > 0.0:
            fields.wrong((*place, i), "theta must be greater than 0 K", "bad-value")
        if "shift" in columns and (row[2] < -1.0 or row[2] == 0.0):
            fields.wrong((*place, i), "the shift must be at least -1 and not 0", "bad-value")
        rows.append(row)
    return rows


_READERS = {
    "constant": _read_constant,
    "polynomial": _read_polynomial,
    "nasa9": _read_nasa9,
    "planck-einstein": _read_levels,
}
