"""The result object of an ordinary solve: plain numbers, SI, keys in a fixed order (contract 6)."""

from __future__ import annotations

import math
from functools import cache
from typing import TYPE_CHECKING, Any

from pathcalc import __version__
from pathcalc.path.values import DELTA_KEYS, EXCHANGE_KEYS, STATE_KEYS
from pathcalc.words import using

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution


def plain(value: Any) -> Any:
    """A number, text or None that JSON can hold: NaN and infinities become None."""
    if isinstance(value, bool) or value is None or isinstance(value, str | int):
        return value
    number = float(value) + 0.0  # no negative zeros
    return number if math.isfinite(number) else None


@cache
def version_of(name: str) -> str:
    """Version of an installed library; looked up once a process, because it costs some milliseconds."""
    from importlib.metadata import version

    return version(name)


def as_dict(solution: Solution) -> dict[str, Any]:
    """Everything of contract 6."""
    case, path = solution.case, solution.path
    setting = path.setting
    with using():
        sources = sources_of(solution)
    flow = case.boundary == "flow"
    mass = None if setting.moles is None else float(setting.moles[0]) * path.model.M
    return {
        "pathcalc": 1,
        "case": {"id": case.id, "title": case.title, "sha256": case.sha256},
        "software": {"pathcalc": __version__, **{name: version_of(name) for name in ("numpy", "scipy")}},
        "fluid": {
            "substance": path.card.name,
            "equation": path.model.equation,
            "molar_mass": path.model.M,
            "datum": case.fluid.datum,
            "sources": sources,
        },
        "boundary": case.boundary,
        "amount": {"value": mass, "unit": "kg/s" if flow else "kg"},
        "surroundings": {"T": float(setting.T0[0]), "p": float(setting.p0[0])},
        "states": [
            {"name": name, **{key: plain(state[key]) for key in STATE_KEYS}} for name, state in solution.states.items()
        ],
        "legs": [_leg(solution, name) for name in solution.legs],
        "totals": {
            **{key: plain(solution.totals[key]) for key in EXCHANGE_KEYS},
            "delta": {key: plain(solution.totals["delta"][key]) for key in DELTA_KEYS},
        },
        "cycle": None if solution.cycle is None else {k: plain(v) for k, v in solution.cycle.items()},
        "checks": [{k: plain(v) for k, v in row.items()} for row in solution.checks],
        "limits": [{k: plain(v) for k, v in row.items()} for row in solution.limits],
        "comparison": solution.comparison,
        "warnings": solution.warnings,
    }


def _leg(solution: Solution, name: str) -> dict[str, Any]:
    leg = solution.legs[name]
    return {
        **{key: leg[key] for key in ("name", "path", "from", "to")},
        "delta": {key: plain(leg["delta"][key]) for key in DELTA_KEYS},
        **{key: plain(leg[key]) for key in EXCHANGE_KEYS},
        "amount": plain(leg["amount"]),
        "total": {key: plain(leg["total"][key]) for key in EXCHANGE_KEYS},
        "maxwell": {key: plain(leg["maxwell"][key]) for key in ("ds", "du", "dh", "error", "closure")},
        "pieces": [{k: plain(v) for k, v in piece.items()} for piece in solution.pieces(name)],
    }


def sources_of(solution: Solution) -> list[str]:
    """Citations of the equation, its ideal part and the substance's constants, each once, in the words in force."""
    path = solution.path
    found = [str(path.model.info.source)] if path.model.info is not None else []
    card = path.card
    for key in ("molar_mass", "T_c", "p_c", "acentric", "T_triple"):
        if card.has(key):
            found.append(card.citation(getattr(card, key).source))
    ideal_source = getattr(path.model.ideal, "source", "")
    if ideal_source:
        found.append(card.sources.get(ideal_source, ideal_source))
    return list(dict.fromkeys(found))
