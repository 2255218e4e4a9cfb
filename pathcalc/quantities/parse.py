"""Text and mappings to quantities. ``QuantityError`` holds every problem found, each with its sub-key."""

from __future__ import annotations

import math
import re
from collections.abc import Collection, Mapping
from dataclasses import dataclass, replace
from decimal import Decimal
from typing import Any, Literal

from pathcalc.quantities.limits import POSITIVE, implausible
from pathcalc.quantities.units import ATM, UNITS, Unit, advice, spellings
from pathcalc.quantities.values import Quantity

_NUMBER = re.compile(r"[-+]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][-+]?[0-9]+)?")
_NOT_FINITE = re.compile(r"[-+]?\.?(?:nan|inf|infinity)\b.*", re.IGNORECASE)

Shape = Literal["normal", "rectangular", "triangular"]
QUANTITY_KEYS = ("value", "u", "U", "k", "half_width", "shape", "source", "note")

EXAMPLE = {
    "pressure": "4.5 barg", "pressure-difference": "0.15 bar", "temperature": "35 degC",
    "temperature-difference": "10 K", "specific-volume": "0.8 m3/kg", "density": "1.2 kg/m3",
    "specific-energy": "120 kJ/kg", "specific-entropy": "6.8 kJ/(kg K)", "energy": "250 kJ",
    "power": "120 kW",
    "mass": "2 kg", "mole": "50 mol", "volume": "0.05 m3", "mass-flow": "0.35 kg/s", "mole-flow": "40 kmol/h",
    "fraction": "0.75", "molar-mass": "28 g/mol", "third-virial": "1500 cm6/mol2", "speed": "300 m/s",
    "volume-flow": "4 m3/h", "time": "2 h", "entropy": "1 kJ/K", "entropy-rate": "1 kW/K",
    "expansivity": "0.003 1/K",
    "compressibility": "0.1 1/bar", "joule-thomson": "0.2 K/bar",
}  # fmt: skip


@dataclass(frozen=True)
class Problem:
    """One thing wrong inside a quantity; ``at`` is the sub-key path, ``key``: the key itself is meant."""

    code: str
    message: str
    at: tuple[str, ...] = ()
    key: bool = False


class QuantityError(ValueError):
    """A quantity cannot be read; ``problems`` says why."""

    def __init__(self, *problems: Problem) -> None:
        self.problems = problems
        super().__init__("; ".join(p.message for p in problems))


def words(names: Collection[str], last: str = "or") -> str:
    """a, b or c."""
    items = list(names)
    return items[0] if len(items) == 1 else ", ".join(items[:-1]) + f" {last} " + items[-1]


def _named(dimension: str) -> str:
    plain = {
        "mole": "amount of substance",
        "fraction": "plain number",
        "third-virial": "third virial coefficient",
    }
    return plain.get(dimension, dimension.replace("-", " "))


def _article(text: str) -> str:
    return ("an " if text[0] in "aeiou" else "a ") + text


def wanted(dimensions: Collection[str]) -> str:
    """Sentence part that says what a quantity must be, with an example."""
    first = next(iter(dimensions))
    return f"{words([_article(_named(d)) for d in dimensions])} such as {EXAMPLE[first]}"


def split(text: str) -> tuple[float, str]:
    """Number and unit spelling of a text such as ``4.5 barg``; raises QuantityError."""
    stripped = text.strip()
    match = _NUMBER.match(stripped)
    if match is None or match.end() == 0:
        if _NOT_FINITE.fullmatch(stripped):
            raise QuantityError(Problem("bad-number", f"{stripped!r} is not a finite number"))
        if stripped[:1] in ("−", "–", "—"):
            raise QuantityError(Problem("bad-number", f"{stripped!r} begins with a dash; write a minus sign -"))
        raise QuantityError(Problem("bad-quantity", f"{stripped!r} does not begin with a number"))
    number, rest = float(match.group()), stripped[match.end() :]
    if re.match(r"[,_'][0-9]", rest):
        raise QuantityError(
            Problem("bad-number", f"{stripped!r}: write a decimal point, and no separators between digits")
        )
    if re.match(r"[.0-9:]", rest):
        raise QuantityError(Problem("bad-number", f"{stripped!r} is not a number"))
    if math.isinf(number):
        raise QuantityError(Problem("bad-number", f"{match.group()} is too large a number"))
    if number == 0.0 and re.search(r"[1-9]", re.split("[eE]", match.group())[0]):
        raise QuantityError(Problem("bad-number", f"{match.group()} is too small a number"))
    unit = " ".join(rest.split())
    if rest and not rest[0].isspace():
        if unit in UNITS and unit != "%":
            raise QuantityError(
                Problem(
                    "bad-quantity",
                    f"{stripped!r}: put a space between number and unit: {match.group()} {unit}",
                )
            )
        if unit != "%":
            raise QuantityError(
                Problem("bad-unit", f"{stripped!r} is not a number, a space and a unit; {advice(unit)}")
            )
    return number, unit


def _fits(spelling: str, unit: Unit, dimension: str) -> bool:
    if dimension in ("temperature-difference", "pressure-difference"):
        return spelling in spellings(dimension)
    return unit.dimension == dimension


def _no_unit(number: float, text: str, dimensions: Collection[str]) -> Quantity:
    if "fraction" in dimensions:
        return Quantity(number, "fraction", "", text.strip())
    raise QuantityError(Problem("missing-unit", f"{text.strip()} has no unit; write {wanted(dimensions)}"))


def _mismatch(spelling: str, unit: Unit, dimensions: Collection[str]) -> Problem:
    if "temperature-difference" in dimensions and unit.dimension == "temperature":
        return Problem(
            "wrong-dimension",
            f"{spelling} is a point on a scale; for a difference write K or delta_{_deg(spelling)}",
        )
    if "temperature" in dimensions and unit.dimension == "temperature-difference":
        return Problem(
            "wrong-dimension",
            f"{spelling} is a difference; a temperature is meant: write {spelling[6:]} or K",
        )
    if "pressure-difference" in dimensions and unit.dimension == "pressure":
        return Problem(
            "wrong-dimension",
            f"{spelling} is gauge or absolute; a difference is neither: write {spelling[:-1]}",
        )
    if unit.dimension == "volume-flow" and "mole-flow" in dimensions:
        return Problem(
            "wrong-dimension",
            f"{spelling} is a volume at unknown conditions; "
            f"write {wanted(dimensions)}, or a normal volume such as 100 Nm3/h",
        )
    return Problem("wrong-dimension", f"{spelling} is {_article(_named(unit.dimension))}; write {wanted(dimensions)}")


def _deg(spelling: str) -> str:
    return "deg" + spelling[-1]


def to_si(number: str, unit: Unit, ambient: float = ATM) -> float:
    """Value in SI of a number's text, worked in decimal: 1.013 bar is 101300.0 Pa and no neighbour of it."""
    exact = (Decimal(number) + Decimal(repr(unit.offset))) * Decimal(repr(unit.factor))
    if unit.gauge:
        exact += Decimal(repr(float(ambient)))
    return float(exact)


def parse_text(text: str, dimensions: Collection[str], *, ambient: float = ATM, any_sign: bool = False) -> Quantity:
    """Quantity of a scalar's text, of one of the dimensions; ``ambient`` (Pa) is the zero of gauge pressures.

    Raises QuantityError: bad-number, bad-quantity, bad-unit, missing-unit, wrong-dimension, implausible.
    """
    number, spelling = split(text)
    if not spelling:
        return _no_unit(number, text, dimensions)
    unit = UNITS.get(spelling)
    if unit is None:
        raise QuantityError(Problem("bad-unit", f"unit {spelling!r} is not known; {advice(spelling)}"))
    dimension = next((d for d in dimensions if _fits(spelling, unit, d)), None)
    if dimension is None:
        raise QuantityError(_mismatch(spelling, unit, dimensions))
    value = to_si(_NUMBER.match(text.strip()).group(), unit, ambient)  # type: ignore[union-attr]
    if not math.isfinite(value):
        raise QuantityError(Problem("bad-number", f"{text.strip()} is too large a number"))
    if not (any_sign and dimension in POSITIVE):
        why = implausible(value, dimension, unit.per)
        if why:
            hint = f" (gauge zero {ambient:.6g} Pa)" if unit.gauge else ""
            raise QuantityError(Problem("implausible", f"{text.strip()} {why}{hint}"))
    return Quantity(value, dimension, spelling, " ".join(text.split()), unit.per, unit.gauge)


def difference_of(dimension: str) -> str:
    """Dimension of a difference of two values of ``dimension``."""
    return {"temperature": "temperature-difference", "pressure": "pressure-difference"}.get(dimension, dimension)


def nearest(name: str, known: Collection[str], tail: str = "") -> str:
    """``did you mean …?`` or the list of what is known."""
    import difflib

    near = difflib.get_close_matches(name, list(known), n=1, cutoff=0.6)
    if not near:
        lowered = {k.lower(): k for k in known}
        near = [lowered[name.lower()]] if name.lower() in lowered else []
    if near:
        return f"did you mean {near[0]}?"
    return f"known: {', '.join(known)}{tail}"


def _scalar_text(value: Any) -> str | None:
    if isinstance(value, str):
        return str(value)
    if isinstance(value, (int, float)) and not isinstance(value, bool):
        return repr(value)
    return None


def _sub(
    data: Mapping[str, Any], key: str, dimensions: Collection[str], problems: list[Problem], **more: Any
) -> Quantity | None:
    text = _scalar_text(data[key])
    if text is None:
        problems.append(Problem("wrong-type", f"{key} holds one value, not a mapping or a list", (key,)))
        return None
    try:
        return parse_text(text, dimensions, **more)
    except QuantityError as error:
        problems.extend(replace(p, at=(key, *p.at)) for p in error.problems)
        return None


def _spread(data: Mapping[str, Any], base: Quantity | None, problems: list[Problem]) -> dict[str, Any]:
    """Standard uncertainty from u, U and k (JCGM 100:2008, 4.3.3), or a half width (4.3.7, 4.3.9)."""
    given = [k for k in ("u", "U", "half_width") if k in data]
    if len(given) > 1:
        problems.append(
            Problem("one-of", f"give one of u, U or half_width, not {words(given, 'and')}", (given[1],), True)
        )
        return {}
    for key, owner in (("k", "U"), ("shape", "half_width")):
        if key in data and owner not in data:
            problems.append(Problem("one-of", f"{key} goes with {owner}, which is not given", (key,), True))
            return {}
    if not given or base is None:
        return {}
    key = given[0]
    spread = _sub(data, key, (difference_of(base.dimension),), problems, any_sign=True)
    if spread is None:
        return {}
    if spread.value < 0:
        problems.append(Problem("out-of-range", f"{key} must not be negative", (key,)))
    if spread.per != base.per:
        problems.append(Problem("wrong-dimension", f"{key} must be per {base.per}, as the value is", (key,)))
    if key == "u":
        return {"u": spread.value, "shape": "normal"}
    if key == "U":
        if "k" not in data:
            problems.append(Problem("missing-key", "U needs its coverage factor k, such as k: 2", key=True))
            return {}
        k = _sub(data, "k", ("fraction",), problems)
        if k is None:
            return {}
        if k.value <= 0:
            problems.append(Problem("out-of-range", "k must be above 0", ("k",)))
            return {}
        return {"u": spread.value / k.value, "shape": "normal", "k": k.value}
    if "shape" not in data:
        problems.append(Problem("missing-key", "half_width needs shape: rectangular or triangular", key=True))
        return {}
    shape = data["shape"]
    if shape not in ("rectangular", "triangular"):
        problems.append(Problem("unknown-name", f"shape is rectangular or triangular, not {shape!r}", ("shape",)))
        return {}
    return {"u": spread.value / math.sqrt(3 if shape == "rectangular" else 6), "shape": str(shape)}


def parse_mapping(
    data: Mapping[str, Any],
    dimensions: Collection[str],
    *,
    ambient: float = ATM,
    any_sign: bool = False,
    sources: Collection[str] | None = None,
) -> Quantity:
    """Quantity of ``{value: …, u: …}``; raises QuantityError. ``sources``: ids that may be named."""
    problems = [
        Problem("unknown-key", f"unknown key {k!r} in a quantity; {nearest(k, QUANTITY_KEYS)}", (k,), True)
        for k in data
        if k not in QUANTITY_KEYS
    ]
    base = None
    if "value" in data:
        base = _sub(data, "value", dimensions, problems, ambient=ambient, any_sign=any_sign)
    else:
        text = "a quantity written as a mapping needs the key 'value'"
        problems.append(Problem("missing-key", text, key=True))
    more = _spread(data, base, problems)
    for key in ("source", "note"):
        if key in data:
            if not isinstance(data[key], str):
                problems.append(Problem("wrong-type", f"{key} holds a text", (key,)))
            else:
                more[key] = str(data[key])
    if sources is not None and "source" in more and more["source"] not in sources:
        problems.append(unknown_source(more["source"], sources, ("source",)))
    if problems or base is None:
        raise QuantityError(*problems)
    return replace(base, **more)


def unknown_source(name: str, sources: Collection[str], at: tuple[str, ...] = ()) -> Problem:
    """Problem of a source id that is not in record.sources."""
    if not sources:
        return Problem("unknown-source", f"source {name!r} is not in record.sources, which is empty", at)
    return Problem("unknown-source", f"source {name!r} is not in record.sources; {nearest(name, sources)}", at)


def parse(value: Any, dimensions: Collection[str], **more: Any) -> Quantity:
    """Quantity of a scalar (text or number) or a mapping; raises QuantityError."""
    if isinstance(value, Quantity):
        if value.dimension not in dimensions:
            raise QuantityError(Problem("wrong-dimension", f"a {value.dimension} is given; write {wanted(dimensions)}"))
        return value
    text = _scalar_text(value)
    if text is not None:
        more.pop("sources", None)
        return parse_text(text, dimensions, **more)
    if isinstance(value, Mapping):
        return parse_mapping(value, dimensions, **more)
    raise QuantityError(Problem("wrong-type", f"write {wanted(dimensions)}, not a list"))
