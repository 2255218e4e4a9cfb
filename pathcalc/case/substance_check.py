"""Is a substance built in? Asked of the room above, by name and only while loading.

The cards live above this room, so it does not import them: ``provider`` is the dotted name of the module that
answers, and a test of this room alone can put another in its place. The module offers ``names()``, and
``resolve(name)``, which raises InvalidCaseError for what is no name or alias of a substance.
"""

from __future__ import annotations

import difflib
import importlib
from typing import Any

from pathcalc.errors import InvalidCaseError

provider: str = "pathcalc.substances"


def _substances() -> Any:
    return importlib.import_module(provider)


def substance_names() -> list[str]:
    """Names of all built-in substances, sorted."""
    return sorted(_substances().names())


def problem_of(name: str) -> str | None:
    """Why ``name`` is no built-in substance, or None where it is one (or an alias of one)."""
    try:
        _substances().resolve(name)
    except InvalidCaseError:
        near = difflib.get_close_matches(name.lower(), substance_names(), n=1, cutoff=0.6)
        hint = f"did you mean {near[0]}?" if near else "`pathcalc substances` lists all"
        return f"unknown substance {name!r}; {hint}"
    return None
