"""The inputs of a case as a flat list: address, as written, and in SI."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from pathcalc.case.model import Case

Input = dict[str, Any]
"""``{"written": text, "value": number in SI or None, "unit": SI unit}``; texts have no value."""

_BESIDE = frozenset({"name", "note", "source"})


def inputs_of(case: Case) -> dict[str, Input]:
    """Every input of a case by its address (``start.T``, ``first stage.to.p``), in the order of the file.

    Includes are merged and repeats written out. Notes and the names of sources are not inputs.
    """
    found: dict[str, Input] = {"title": _text(case.title)}
    for key in ("number", "revision", "date", "author", "checker", "approver", "project", "purpose"):
        value = getattr(case.record, key)
        if value is not None:
            found[f"record.{key}"] = _text(value)
    for i, text in enumerate(case.record.assumptions or (), 1):
        found[f"record.assumptions.{i}"] = _text(text)
    found.update(_walk(case.fluid, "fluid"))
    found["boundary"] = _text(case.boundary)
    found.update(_walk(case.amount, "amount"))
    found.update(_walk(case.surroundings.T, "surroundings.T"))
    found.update(_walk(case.surroundings.p, "surroundings.p"))
    for key, value in case.start.items():
        found.update(_walk(value, f"start.{key}"))
    for leg in case.legs:
        found.update(_walk(leg, leg.name))
    found["cycle"] = _text("true" if case.cycle else "false")
    seen: dict[str, int] = {}
    for limit in case.limits:
        count = seen[limit.quantity] = seen.get(limit.quantity, 0) + 1
        again = f" ({count})" if count > 1 else ""
        for key in ("min", "max"):
            found.update(_walk(getattr(limit, key), f"limits.{limit.quantity}{again}.{key}"))
    for equation in case.report.compare_with:
        found[f"report.compare_with.{equation}"] = _text("yes")
    return found


def _text(value: Any) -> Input:
    return {"written": " ".join(str(value).split()), "value": None, "unit": ""}


def _walk(value: Any, at: str) -> Iterator[tuple[str, Input]]:
    """Inputs in a value of a model, each with its address."""
    from dataclasses import fields, is_dataclass

    from pydantic import BaseModel

    from pathcalc.quantities.values import Quantity, Relative

    if value is None:
        return
    if isinstance(value, Quantity):
        yield from _quantity(value, at)
    elif isinstance(value, Relative):
        if value.state is not None:
            yield f"{at}.same_as", _text(value.state)
        yield from _walk(value.amount, f"{at}.{value.kind}")
    elif isinstance(value, BaseModel):
        for name, field in type(value).model_fields.items():
            if name not in _BESIDE:
                yield from _walk(getattr(value, name), f"{at}.{field.alias or name}")
    elif is_dataclass(value):
        given = [f.name for f in fields(value) if getattr(value, f.name) is not None]
        if not given:
            yield at, _text("constant")
        for name in given:
            yield from _walk(getattr(value, name), at if name == "value" else f"{at}.{name}")
    elif isinstance(value, dict):
        for key, item in value.items():
            yield from _walk(item, f"{at}.{key}")
    elif isinstance(value, (list, tuple)):
        for i, item in enumerate(value, 1):
            yield from _walk(item, f"{at}.{i}" if len(value) > 1 else at)
    else:
        yield at, _text(value)


def _quantity(q: Any, at: str) -> Iterator[tuple[str, Input]]:
    from pathcalc.quantities.limits import si_unit

    unit = si_unit(q.dimension, q.per)
    yield at, {"written": q.text, "value": q.value, "unit": unit}
    if q.u is not None:
        shape = f", {q.shape}" if q.shape not in (None, "normal") else f", k = {q.k:g}" if q.k else ""
        yield f"{at}.u", {"written": f"{q.u:.6g} {unit}".rstrip() + shape, "value": q.u, "unit": unit}
