"""A solved case as users and reports read it."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

import numpy as np

from pathcalc.case.model import Case
from pathcalc.errors import NoSolutionError, UsageError
from pathcalc.legs.run import Place
from pathcalc.path.lanes import mark_open_lanes
from pathcalc.path.solver import SolvedPath, solve_path
from pathcalc.path.values import (
    DELTA_KEYS,
    EXCHANGE_KEYS,
    EXTENSIVE_ENERGIES,
    Record,
    Value,
    dead_state,
    leg_values,
    piece_values,
    state_values,
)
from pathcalc.words import Catalogue, in_force, using

if TYPE_CHECKING:
    from pathcalc.path.steps import Basis, Curve, Dome, HandSum, Isoline, StateParts, Step, Verified


T = TypeVar("T")

_NO_QUANTITY = frozenset({"name", "path", "from", "to", "delta", "maxwell", "total", "carried", "other"})
"""Parts of the record of a leg that are no single number."""


class Solution:
    """States, legs and totals of a solved path, SI per kilogram.

    Values are plain numbers where the case was solved without lanes, else arrays over the lanes; NaN in lanes that
    have no solution. ``ok`` and ``reasons`` tell which, and why.
    """

    def __init__(self, path: SolvedPath, *, lanes: bool) -> None:
        self.path = path
        self._lanes = lanes
        self._said: dict[tuple[str, Catalogue], Any] = {}

    def _in_words(self, what: str, make: Callable[[Solution], T]) -> T:
        """What ``make`` says of this solution in the words in force, made once for each catalogue."""
        key = what, in_force()
        if key not in self._said:
            self._said[key] = make(self)
        found: T = self._said[key]
        return found

    @property
    def case(self) -> Case:
        """The case that was solved."""
        return self.path.case

    @property
    def n_lanes(self) -> int:
        """Number of lanes; 1 for an ordinary solve."""
        return self.path.setting.n

    @property
    def ok(self) -> Value:
        """Which lanes have a solution, booleans (n,)."""
        return self.path.setting.status.ok

    @cached_property
    def reasons(self) -> list[str | None]:
        """For every lane None, or why it has no solution: place, reason and remedy."""
        status = self.path.setting.status
        texts = [str(t) for t in status.troubles]
        return [None if k < 0 else texts[k] for k in status.reason]

    @cached_property
    def dead(self) -> Place:
        """The dead state of exergy, molar SI."""
        return dead_state(self.path)

    @cached_property
    def _state_arrays(self) -> dict[str, dict[str, Any]]:
        places = {"start": self.path.start, **{leg.leg.name: leg.end for leg in self.path.legs}}
        return {name: state_values(self.path, name, place, self.dead) for name, place in places.items()}

    @cached_property
    def _leg_arrays(self) -> dict[str, dict[str, Any]]:
        return {leg.leg.name: leg_values(self.path, leg) for leg in self.path.legs}

    def _out(self, value: Any) -> Any:
        if isinstance(value, dict):
            return Record({k: self._out(v) for k, v in value.items()})
        if isinstance(value, np.ndarray) and not self._lanes:
            return value[0] if value.dtype == object else float(value[0])
        return value

    @cached_property
    def states(self) -> dict[str, Record]:
        """States by name, in the order of the path: ``solution.states["start"].T``."""
        return {name: self._out(values) for name, values in self._state_arrays.items()}

    @cached_property
    def legs(self) -> dict[str, Record]:
        """Legs by name, in the order of the path: ``solution.legs["first stage"].work``."""
        return {name: self._out(values) for name, values in self._leg_arrays.items()}

    @cached_property
    def _total_arrays(self) -> dict[str, Any]:
        setting = self.path.setting
        if setting.moles is None:
            nothing: dict[str, Any] = dict.fromkeys(EXCHANGE_KEYS)
            return {**nothing, "delta": dict.fromkeys(DELTA_KEYS)}
        totals: dict[str, Any] = {}
        for key in EXCHANGE_KEYS:
            total = np.zeros(setting.n)
            for leg in self._leg_arrays.values():
                total = total + leg[key] * leg["amount"]
            totals[key] = total
        ends = {"T": (self.path.start.T, self._last.T), "p": (self.path.start.p, self._last.p)}
        delta: dict[str, Any] = {key: last - first for key, (first, last) in ends.items()}
        for key in ("v", *EXTENSIVE_ENERGIES):
            changes = ((leg["delta"][key] - leg["carried"][key]) * leg["amount"] for leg in self._leg_arrays.values())
            delta[key] = sum(changes, np.zeros(setting.n))
        ok = setting.status.ok
        return {**totals, "delta": {key: np.where(ok, delta[key], np.nan) for key in DELTA_KEYS}}

    @property
    def _last(self) -> Place:
        return self.path.legs[-1].end

    @cached_property
    def totals(self) -> Record:
        """Sums over the legs in J or W, J/K or W/K; None where the case gives no amount.

        ``delta`` is the balance over all streams: what leaves at the end and by separation, less what comes in at the
        start and by mixing (of T and p the difference of the ends), so that heat and work add up to it.
        """
        found: Record = self._out(self._total_arrays)
        return found

    @cached_property
    def cycle(self) -> Record | None:
        """Thermal efficiency or coefficients of performance of a cycle, else None."""
        if not self.case.cycle:
            return None
        with np.errstate(invalid="ignore", divide="ignore"):
            heats = np.stack([leg["heat"] for leg in self._leg_arrays.values()])
            work = np.stack([leg["work"] for leg in self._leg_arrays.values()]).sum(axis=0)
            taken, given = np.maximum(heats, 0.0).sum(axis=0), np.maximum(-heats, 0.0).sum(axis=0)
            gives = work < 0.0
            values = {
                "thermal_efficiency": np.where(gives & (taken > 0.0), -work / taken, np.nan),
                "cop_cooling": np.where(work > 0.0, taken / work, np.nan),
                "cop_heating": np.where(work > 0.0, given / work, np.nan),
            }
        found: Record = self._out(values)
        return found

    def quantity(self, address: str) -> Value:
        """A result by its address, such as ``first stage.T`` or ``totals.work``. UsageError if there is none."""
        name, _, key = address.rpartition(".")
        if name.endswith(".delta"):
            name, key = name[: -len(".delta")], f"delta.{key}"
        places: list[Mapping[str, Any]] = []
        if name == "totals":
            places = [self.totals]
        elif name == "cycle" and self.cycle is not None:
            places = [self.cycle]
        else:
            places = [where[name] for where in (self.states, self.legs) if name in where]
        for place in places:
            if key.startswith("delta.") and "delta" in place and key[6:] in place["delta"]:
                return place["delta"][key[6:]]
            if key in place and key not in _NO_QUANTITY:
                return place[key]
        raise UsageError(f"no result {address!r}; {self._nearest(address)}")

    def _nearest(self, address: str) -> str:
        import difflib

        known = [f"{name}.{key}" for name, state in self.states.items() for key in state]
        known += [f"{name}.{key}" for name in self.legs for key in EXCHANGE_KEYS]
        known += [f"{name}.delta.{key}" for name in self.legs for key in DELTA_KEYS]
        known += [f"totals.{key}" for key in EXCHANGE_KEYS]
        known += [f"cycle.{key}" for key in self.cycle or ()]
        near = difflib.get_close_matches(address, known, 1)
        return f"did you mean {near[0]!r}?" if near else "write <state or leg>.<key> or totals.<key>"

    def pieces(self, leg: str, lane: int = 0) -> list[dict[str, Any]]:
        """Phase, ds and dh of the pieces of a leg in one lane."""
        solved = next(item for item in self.path.legs if item.leg.name == leg)
        return piece_values(self.path, solved, lane)

    def _of_one_lane(self, what: str) -> None:
        if self._lanes:
            raise UsageError(
                f"{what} are of an ordinary solve; of a solve with lanes read ok, reasons, states and legs"
            )

    @cached_property
    def checks(self) -> list[dict[str, Any]]:
        """Self-checks of an ordinary solve: name, at, passed, value, tolerance."""
        self._of_one_lane("checks")
        from pathcalc.path.checks import all_checks

        return all_checks(self)

    @cached_property
    def limits(self) -> list[dict[str, Any]]:
        """Acceptance limits with their margins (SI)."""
        self._of_one_lane("limits")
        from pathcalc.path.limits import evaluated_limits

        return evaluated_limits(self)

    @cached_property
    def warnings(self) -> list[dict[str, str]]:
        """What a reader must know beside the numbers: code, at, text (English, whatever words are in force)."""
        self._of_one_lane("warnings")
        with using():
            return self.warnings_in_words

    @property
    def warnings_in_words(self) -> list[dict[str, str]]:
        """The rows of ``warnings`` with their texts in the words in force, for a report."""
        from pathcalc.path.warnings import all_warnings

        return self._in_words("warnings", all_warnings)

    @property
    def sources_in_words(self) -> list[str]:
        """The citations of the fluid's data with what is said beside them in the words in force, for a report."""
        from pathcalc.path.results import sources_of

        return sources_of(self)

    @cached_property
    def comparison(self) -> list[dict[str, Any]]:
        """The same path with other equations, where the case asks for it."""
        self._of_one_lane("comparisons")
        from pathcalc.path.comparison import compared

        return compared(self)

    @property
    def passed(self) -> bool:
        """True if every check and every limit is met."""
        return all(row["passed"] for row in (*self.checks, *self.limits))

    @cached_property
    def verified(self) -> tuple[Verified, ...]:
        """States that a publication prints for the equation of the case, computed again."""
        from pathcalc.path.verification import verified_values

        return verified_values(self)

    @cached_property
    def streams(self) -> dict[str, dict[str, Any]]:
        """Streams that leave by separation or join by mixing, by leg: amount (kg/s, negative where it leaves), T, p, v,

        u, h, s, x.
        """
        self._of_one_lane("streams")
        return {name: leg["other"] for name, leg in self.legs.items() if leg["other"] is not None}

    @cached_property
    def state_parts(self) -> tuple[StateParts, ...]:
        """What the properties of the states are put together from, in the order of the path."""
        self._of_one_lane("parts of states")
        from pathcalc.path.state_parts import parts_of

        return parts_of(self)

    @cached_property
    def hand_sums(self) -> dict[str, tuple[HandSum, ...]]:
        """The integrals of every leg as sums for a pocket calculator, by leg."""
        self._of_one_lane("sums")
        from pathcalc.path.hand_sums import hand_sums

        return {solved.leg.name: hand_sums(self.path, solved) for solved in self.path.legs}

    @property
    def explanations(self) -> dict[str, list[Step]]:
        """How results came about, by address, in the words in force."""
        from pathcalc.path.explanations import explain_all

        return self._in_words("explanations", explain_all)

    @cached_property
    def curves(self) -> list[Curve]:
        """The ways of the legs through the state surface, for diagrams."""
        from pathcalc.path.curves import curves_of

        return curves_of(self)

    @cached_property
    def dome(self) -> Dome | None:
        """The boundary of the two-phase region, if the equation has one."""
        from pathcalc.path.curves import dome_of

        return dome_of(self)

    @cached_property
    def isolines(self) -> list[Isoline]:
        """Isobars and isotherms through the states, for diagrams."""
        from pathcalc.path.isolines import isolines_of

        return isolines_of(self)

    @cached_property
    def others(self) -> dict[str, Solution | str]:
        """By equation of ``report.compare_with``: the same path solved with it, or why it has no solution."""
        from pathcalc.path.comparison import solved_with

        return {equation: solved_with(self, equation) for equation in self.case.report.compare_with}

    @property
    def basis(self) -> Basis:
        """The fluid's constants, equation and heat capacity with their sources, in the words in force."""
        from pathcalc.path.basis import basis_of

        return self._in_words("basis", basis_of)

    def to_dict(self) -> dict[str, Any]:
        """The results of an ordinary solve as one JSON object, SI, keys in a fixed order."""
        from pathcalc.path.results import as_dict

        if self._lanes:
            raise UsageError("a result object is of one solve; read states, legs and totals of a solve with lanes")
        return as_dict(self)

    def report(self, form: str = "html", *, words: Catalogue | Path | str | None = None) -> str:
        """The calculation report as text: ``html`` or ``md``; ``words`` is a catalogue or its file, else English."""
        from pathcalc import report

        if form == "html":
            return report.render_html(self, words=words)
        if form in ("md", "markdown"):
            return report.render_markdown(self, words=words)[0]
        raise UsageError(f"unknown report format {form!r}; known: html, md")


def solve(case: Case, lanes: Mapping[str, Any] | None = None) -> Solution:
    """Solve a case.

    ``lanes`` maps addresses (``start.T``, ``first stage.efficiency``, ``first stage.p``, ``surroundings.T``,
    ``amount``) to one-dimensional arrays of one length, in SI and per kilogram, pressures absolute, relative targets
    as the number that stands in the case (a ratio, a rise). Then the values of the Solution are arrays, and a lane
    that has no solution is marked; without lanes NoSolutionError is raised.
    """
    path = solve_path(case, lanes)
    if lanes:
        mark_open_lanes(path)
    else:
        trouble = path.setting.status.trouble_of(0)
        if trouble is not None:
            raise NoSolutionError(trouble)
    return Solution(path, lanes=bool(lanes))
