"""pathcalc: thermodynamic path calculations for real fluids, from a reviewed case file to a checkable report."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

__version__ = "0.1.0"

__all__ = ["Case", "Solution", "__version__", "fluid", "load", "loads", "solve"]

_HOMES = {
    "Case": "pathcalc.case.model",
    "load": "pathcalc.case",
    "loads": "pathcalc.case",
    "Solution": "pathcalc.path.solution",
    "solve": "pathcalc.path.solution",
    "fluid": "pathcalc.path.handle",
}

if TYPE_CHECKING:
    from pathcalc.case import load, loads
    from pathcalc.case.model import Case
    from pathcalc.path.handle import fluid
    from pathcalc.path.solution import Solution, solve


def __getattr__(name: str) -> Any:
    """Import what is asked for when it is asked for: start-up stays quick."""
    if name in _HOMES:
        from importlib import import_module

        return getattr(import_module(_HOMES[name]), name)
    raise AttributeError(f"module 'pathcalc' has no attribute {name!r}")
