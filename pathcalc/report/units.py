"""The units a report is written in: the case's ``units`` block, worked out for every kind of quantity.

Results are SI per kilogram. A :class:`Scale` turns such a value into the number that is printed under its
unit. Composite units (kJ/(kg K), kW) are built from the base spellings, so that a case names only those.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass

from pathcalc.case.names import UNITS_DEFAULT

_PRETTY = (
    (r"\bdelta_degC\b", "K"), (r"\bdelta_degF\b", "°F"), (r"\bdegC\b", "°C"), (r"\bdegF\b", "°F"),
    (r"\bdegR\b", "°R"), (r"(?<=m)3\b", "³"), (r"(?<=m)6\b", "⁶"), (r"(?<=ft)3\b", "³"), (r"(?<=in)3\b", "³"),
    (r"(?<=mol)2\b", "²"), (r"(?<=cm)2\b", "²"), (r"^Nm³", "m³(n)"), (r"^Sm³", "m³(s)"),
)  # fmt: skip
_DIFFERENCE = {"degF": ("°F", 1.8), "°F": ("°F", 1.8), "degR": ("°R", 1.8)}
_POWERS = {("J", "s"): "W", ("kJ", "s"): "kW", ("MJ", "s"): "MW"}


def pretty(unit: str) -> str:
    """A unit spelling as it is printed (``degC`` → °C, ``m3/kg`` → m³/kg)."""
    for pattern, sign in _PRETTY:
        unit = re.sub(pattern, sign, unit)
    return unit


def si_unit(dimension: str, per: str | None) -> str:
    """The SI unit a quantity of this dimension is stored in; per mole where the case gave it so."""
    from pathcalc.quantities.limits import si_unit as spelling

    return pretty(spelling(dimension, per))


@dataclass(frozen=True)
class Scale:
    """printed = SI · factor + offset, under ``unit``. ``steady`` kinds share one number of decimals."""

    unit: str
    factor: float = 1.0
    offset: float = 0.0
    steady: bool = False

    def of(self, si: float | None) -> float | None:
        """The printed value of an SI value; None stays None."""
        return None if si is None else si * self.factor + self.offset


class Units:
    """Scales by kind of quantity for one case.

    Kinds: ``T dT p dp v rho e s w_sound one expansivity compressibility joule_thomson amount total
    total_entropy``. ``molar_mass`` (kg/mol) is needed where the case asks for values per mole, ``ambient``
    (Pa) where it asks for gauge pressure.
    """

    def __init__(self, block: Mapping[str, str], *, flow: bool, molar_mass: float, ambient: float) -> None:
        chosen = {**UNITS_DEFAULT, **{str(k): str(v) for k, v in block.items() if v}}
        self.chosen = chosen
        """The spelling used for each kind of base unit."""
        t, p, energy, mass, time = (chosen[k] for k in ("T", "p", "energy", "mass", "time"))
        volume = chosen.get("volume", "m3")
        per_e, per_t, per_v = _factor(energy), _factor(time), _factor(volume)
        per_m = _factor(mass) / molar_mass if _dimension(mass) == "mole" else _factor(mass)
        t_unit, t_factor = _DIFFERENCE.get(t, ("K", 1.0))
        self.gauge = p_is_gauge = _is_gauge(p)
        base_p = p.removesuffix("g") if p_is_gauge else p.removesuffix("a")
        p_factor = _factor(base_p)
        self._scales = {
            "T": Scale(pretty(t), t_factor, _value(0.0, t), steady=True),
            "dT": Scale(t_unit, t_factor, steady=True),
            "p": Scale(pretty(p), p_factor, -ambient * p_factor if p_is_gauge else 0.0),
            "dp": Scale(pretty(base_p), p_factor),
            "v": Scale(pretty(f"{volume}/{mass}"), per_v / per_m),
            "rho": Scale(pretty(f"{mass}/{volume}"), per_m / per_v),
            "e": Scale(f"{energy}/{mass}", per_e / per_m, steady=True),
            "s": Scale(f"{energy}/({mass} {t_unit})", per_e / per_m / t_factor, steady=True),
            "w_sound": Scale("ft/s", _factor("ft/s")) if volume.startswith("ft") else Scale("m/s"),
            "one": Scale(""),
            "expansivity": Scale(f"1/{t_unit}", 1 / t_factor),
            "compressibility": Scale(f"1/{pretty(base_p)}", 1 / p_factor),
            "joule_thomson": Scale(f"{t_unit}/{pretty(base_p)}", t_factor / p_factor),
        }
        if flow:
            power = chosen.get("power", _POWERS.get((energy, time), ""))
            factor = _factor(power) if power else per_e / per_t
            label = power or f"{energy}/{time}"
            self._scales |= {
                "amount": Scale(f"{mass}/{time}", per_m / per_t),
                "total": Scale(label, factor, steady=True),
                "total_entropy": Scale(_over(label, t_unit), factor / t_factor, steady=True),
                "total_volume": Scale(pretty(f"{volume}/{time}"), per_v / per_t),
            }
        else:
            self._scales |= {
                "amount": Scale(mass, per_m),
                "total": Scale(energy, per_e, steady=True),
                "total_entropy": Scale(f"{energy}/{t_unit}", per_e / t_factor, steady=True),
                "total_volume": Scale(pretty(volume), per_v),
            }

    def __getitem__(self, kind: str) -> Scale:
        return self._scales[kind]


def _over(unit: str, below: str) -> str:
    """A unit divided by another: kW/K, kJ/(h K)."""
    above, slash, first = unit.partition("/")
    return f"{above}/({first} {below})" if slash else f"{unit}/{below}"


def _value(si: float, unit: str) -> float:
    from pathcalc.quantities import convert

    return float(convert(si, unit))


def _factor(unit: str) -> float:
    return _value(1.0, unit) - _value(0.0, unit)


def _is_gauge(unit: str) -> bool:
    from pathcalc.quantities import UNITS

    return bool(UNITS[unit].gauge)


def _dimension(unit: str) -> str:
    from pathcalc.quantities import UNITS

    return str(UNITS[unit].dimension)


STATE_KINDS = {
    "T": "T", "p": "p", "v": "v", "rho": "rho", "u": "e", "h": "e", "s": "s", "a": "e", "g": "e", "cv": "s",
    "cp": "s", "sound_speed": "w_sound", "Z": "one", "x": "one", "expansivity": "expansivity",
    "compressibility": "compressibility", "joule_thomson": "joule_thomson", "fugacity_coefficient": "one",
    "exergy": "e",
}  # fmt: skip
LEG_KINDS = {"heat": "e", "work": "e", "entropy_generated": "s", "exergy_destroyed": "e", "amount": "amount"}
DELTA_KINDS = {"T": "dT", "p": "dp", "v": "v", "u": "e", "h": "e", "s": "s", "a": "e", "g": "e"}
TOTAL_KINDS = {
    "heat": "total", "work": "total", "entropy_generated": "total_entropy", "exergy_destroyed": "total",
    "u": "total", "h": "total", "a": "total", "g": "total", "s": "total_entropy", "v": "total_volume",
}  # fmt: skip


def kind_of(address: str) -> str:
    """The kind of an addressed quantity (``first stage.T``, ``totals.work``, ``cooler.delta.s``)."""
    head, _, rest = address.partition(".")
    path = rest.split(".")
    key = path[-1]
    if head == "cycle":
        return "one"
    if head == "totals" or "total" in path[:-1]:
        return TOTAL_KINDS.get(key) or DELTA_KINDS.get(key, "one")
    if "delta" in path[:-1]:
        return DELTA_KINDS.get(key, "one")
    if "maxwell" in path[:-1]:
        return {"ds": "s", "du": "e", "dh": "e"}.get(key, "one")
    return LEG_KINDS.get(key) or STATE_KINDS.get(key, "one")
