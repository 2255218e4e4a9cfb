"""Which leg kinds there are: the modules of ``pathcalc.legs`` that have a ``MODEL``, and entry points.

A new kind is one new file; a third party's is an entry point of the group ``pathcalc.legs`` that loads such a
module or a model.
"""

from __future__ import annotations

import functools
import importlib
import importlib.util
import pkgutil
import re
from types import MappingProxyType
from typing import Any, get_args

from pathcalc.case.leg_model import LegModel


@functools.lru_cache(maxsize=1)
def leg_models() -> MappingProxyType[str, type[LegModel]]:
    """Leg models by the value of ``path``, sorted. Raises TypeError for what is registered but no model."""
    package = importlib.import_module("pathcalc.legs")
    found: dict[str, type[LegModel]] = {}
    for info in pkgutil.iter_modules(package.__path__, "pathcalc.legs."):
        if not info.ispkg and _has_model(info.name):
            model = getattr(importlib.import_module(info.name), "MODEL", None)
            if model is not None:
                _add(found, info.name, model)
    for entry in _entry_points():
        loaded = entry.load()
        _add(found, entry.value, getattr(loaded, "MODEL", loaded))
    return MappingProxyType(dict(sorted(found.items())))


def _has_model(name: str) -> bool:
    """Does a module's text set ``MODEL``: helpers beside the kinds may import numerics; loading must not."""
    spec = importlib.util.find_spec(name)
    source = getattr(spec.loader, "get_source", lambda _name: None)(name) if spec else None
    return source is None or re.search(r"^MODEL\b", source, re.MULTILINE) is not None


def _entry_points() -> Any:
    from importlib.metadata import entry_points

    return entry_points(group="pathcalc.legs")


def _add(found: dict[str, type[LegModel]], where: str, model: Any) -> None:
    if not (isinstance(model, type) and issubclass(model, LegModel)):
        raise TypeError(f"{where}: a leg kind is a subclass of LegModel")
    (path,) = get_args(model.model_fields["path"].annotation)
    if found.setdefault(path, model) is not model:
        raise TypeError(f"{where}: the leg kind {path} is there twice")
