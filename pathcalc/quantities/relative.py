"""Targets that lean on a state: ``{ratio: 3.1}``, ``{rise: 40 K}``, ``{drop: 0.3 bar}``, ``{same_as: start}``."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import replace
from typing import Any

from pathcalc.quantities.parse import Problem, QuantityError, difference_of, parse
from pathcalc.quantities.values import Quantity, Relative

RELATIVE_KEYS = ("ratio", "rise", "drop", "same_as")


def _moved(at: tuple[str, ...], kind: str, beside: Collection[str]) -> tuple[str, ...]:
    return at if at and at[0] in beside else (kind, *(at[1:] if beside and at[:1] == ("value",) else at))


def parse_relative(data: Mapping[str, Any], dimensions: Collection[str], ratio: bool, **more: Any) -> Relative:
    """Relative target of a mapping with one of ratio, rise, drop, same_as; raises QuantityError."""
    keys = list(data)
    kind = next(k for k in keys if k in RELATIVE_KEYS)
    value = data[kind]
    beside = {k: data[k] for k in ("source", "note") if k in data and kind != "same_as"}
    if len(keys) > 1 + len(beside):
        other = next(k for k in keys if k != kind and k not in beside)
        raise QuantityError(Problem("one-of", f"{kind} stands alone; remove {other!r}", (other,), True))
    if kind == "same_as":
        if not isinstance(value, str):
            raise QuantityError(Problem("wrong-type", "same_as holds the name of an earlier state", (kind,)))
        return Relative("same_as", None, str(value))
    if kind == "ratio" and not ratio:
        raise QuantityError(
            Problem(
                "one-of",
                "ratio has no meaning where the zero is a convention; use rise or drop",
                (kind,),
                True,
            )
        )
    meant = ("fraction",) if kind == "ratio" else tuple(difference_of(d) for d in dimensions)
    more = {k: v for k, v in more.items() if k != "any_sign"}
    if beside and not isinstance(value, Quantity):
        value = {**(value if isinstance(value, Mapping) else {"value": value}), **beside}
    try:
        amount = parse(value, meant, any_sign=True, **more)
    except QuantityError as error:
        raise QuantityError(*(replace(p, at=_moved(p.at, kind, beside)) for p in error.problems)) from None
    if amount.value <= 0:
        if kind == "ratio":
            raise QuantityError(Problem("out-of-range", "ratio must be above 0", (kind,)))
        if amount.value < 0:
            other = "drop" if kind == "rise" else "rise"
            raise QuantityError(Problem("out-of-range", f"{kind} must not be negative; use {other}", (kind,)))
    return Relative("ratio" if kind == "ratio" else "rise" if kind == "rise" else "drop", amount)
