"""What every section of a report needs at hand: the results, the case, units, decimals, numbering, words."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import replace
from typing import Any

from pathcalc.path.warnings import NOTES, merged
from pathcalc.report import numbers, units
from pathcalc.report.derivations import Derivations
from pathcalc.report.view import Cell, Column, SolutionLike, Table
from pathcalc.report.words import say
from pathcalc.words import say_of

P_AMBIENT = 101325.0
"""Pressure of the surroundings where the case gives none, Pa (contract of the case file)."""


def pick(thing: Any, name: str, default: Any = None) -> Any:
    """A field of a record or a mapping; ``default`` where it is absent or None."""
    if thing is None:
        return default
    value = thing.get(name) if isinstance(thing, Mapping) else getattr(thing, name, None)
    return default if value is None else value


class Context:
    """One report in the making."""

    def __init__(self, solution: SolutionLike, changes: Mapping[str, Any] | None = None) -> None:
        self.solution = solution
        self.changes = changes
        self.case = solution.case
        self.result: dict[str, Any] = solution.to_dict()
        self.flow = self.result["boundary"] == "flow"
        self.states: list[dict[str, Any]] = self.result["states"]
        self.legs: list[dict[str, Any]] = self.result["legs"]
        self.warnings = merged(pick(solution, "warnings_in_words", self.result["warnings"]))
        self.ambient = float(pick(self.result["surroundings"], "p", P_AMBIENT))
        self.units = units.Units(
            pick(self.case, "units", {}),
            flow=self.flow,
            molar_mass=float(self.result["fluid"]["molar_mass"]),
            ambient=self.ambient,
        )
        self.derivations = Derivations(solution, [str(leg["name"]) for leg in self.legs])
        self._tables = 0
        self._figures = 0
        self._decimals = self._steady_decimals()

    # numbers

    def _steady_decimals(self) -> dict[str, int]:
        """One number of decimals for each kind that is added and subtracted by hand."""
        found: dict[str, list[float | None]] = {}
        for kind, value in self._all_values():
            scale = self.units[kind]
            if scale.steady:
                found.setdefault(_family(kind), []).append(scale.of(value))
        decimals = {family: numbers.common_decimals(values) for family, values in found.items()}
        for kind, error in self._integration_errors().items():
            if kind in decimals and error > 0.0:
                decimals[kind] = min(decimals[kind], numbers.decimals_within(error))
        return decimals

    def _integration_errors(self) -> dict[str, float]:
        """The largest integration error of the legs by kind, in the printed unit: digits beyond it mean nothing."""
        found: dict[str, float] = {}
        for leg in self.legs:
            m = leg["maxwell"] or {}
            error, amount = m.get("error") or 0.0, leg.get("amount") or 0.0
            energy = max(abs(m.get("du") or 0.0), abs(m.get("dh") or 0.0)) * error
            entropy = abs(m.get("ds") or 0.0) * error
            for kind, si in (
                ("e", energy),
                ("s", entropy),
                ("total", energy * amount),
                ("total_entropy", entropy * amount),
            ):
                found[kind] = max(found.get(kind, 0.0), abs(si * self.units[kind].factor))
        return found

    def _all_values(self) -> Iterator[tuple[str, float | None]]:
        for state in self.states:
            yield from ((kind, state.get(key)) for key, kind in units.STATE_KINDS.items())
        for leg in self.legs:
            yield from ((kind, leg.get(key)) for key, kind in units.LEG_KINDS.items())
            yield from ((units.DELTA_KINDS[key], value) for key, value in leg["delta"].items())
            yield from _totals(leg.get("total"))
        yield from _totals(self.result.get("totals"))

    def number(self, kind: str, si: float | None) -> str:
        """An SI value in the case's unit, without the unit, to the digits of its kind."""
        scale = self.units[kind]
        value = scale.of(si)
        if scale.steady:
            return numbers.fixed(value, self._decimals.get(_family(kind), 3))
        return numbers.significant(value)

    def measure(self, kind: str, si: float | None) -> str:
        """An SI value in the case's unit, with the unit."""
        unit = self.units[kind].unit
        text = self.number(kind, si)
        return f"{text}\u00a0{unit}" if unit and text != numbers.ABSENT else text

    def brief(self, kind: str, si: float | None, digits: int = 8) -> str:
        """A stated value in a sentence, without the zeros after its last digit."""
        scale = self.units[kind]
        return f"{numbers.short(scale.of(si), digits)}\u00a0{scale.unit}".rstrip("\u00a0")

    def margin(self, kind: str) -> str:
        """The kind in which a difference of this kind of quantity is printed."""
        return {"T": "dT", "p": "dp"}.get(kind, kind)

    # tables

    def number_table(self) -> int:
        """The next table number."""
        self._tables += 1
        return self._tables

    def number_figure(self) -> int:
        """The next figure number."""
        self._figures += 1
        return self._figures

    def table(self, caption: str, columns: Sequence[Column], rows: Iterable[Sequence[Cell]], head: int = 0) -> Table:
        """A numbered table whose numeric columns are lined up at the decimal point."""
        grid = [list(row) for row in rows]
        for i, column in enumerate(columns):
            if column.numeric:
                for row, aligned in zip(grid, numbers.align([r[i].text for r in grid]), strict=True):
                    old = row[i]
                    row[i] = replace(old, text=aligned.text, pad=aligned.pad)
        return Table(caption, tuple(columns), tuple(tuple(r) for r in grid), head, self.number_table())

    def column(self, words: str, symbol: str, kind: str) -> Column:
        """A numeric column for a kind of quantity, its unit in the head."""
        return Column(say(words), symbol, self.units[kind].unit, numeric=True)

    def cell(self, kind: str, si: float | None, address: str = "") -> Cell:
        """A numeric cell; with its ``address`` it links to how the value came about, where that is shown."""
        text = self.number(kind, si)
        if text == numbers.ABSENT:
            return Cell(text, "absent")
        return Cell(text, "number", link=self.derivations.anchor(address) if address else "")

    # names

    def state_number(self, name: str) -> int:
        """The number a state carries in tables and diagrams, from 1."""
        return next(i for i, s in enumerate(self.states, 1) if s["name"] == name)

    def mark(self, name: str) -> str:
        """The remark beside a state or leg that warnings are about."""
        about = [(i, w) for i, w in enumerate(self.warnings, 1) if _about(w.get("at"), name)]
        warned = [str(i) for i, w in about if w["code"] not in NOTES]
        noted = [str(i) for i, w in about if w["code"] in NOTES]
        parts = [say("results.mark", n=", ".join(warned))] if warned else []
        parts += [say("results.mark.note", n=", ".join(noted))] if noted else []
        return "; ".join(parts)

    def value(self, address: str) -> float | None:
        """The SI value of an addressed quantity of the results, None where there is none."""
        head, _, rest = address.partition(".")
        keys = rest.split(".")
        if head in ("totals", "cycle"):
            places: list[Any] = [self.result.get(head)]
        else:
            places = [next((x for x in group if x["name"] == head), None) for group in (self.legs, self.states)]
        for place in places:
            for key in keys:
                place = place.get(key) if isinstance(place, Mapping) else None
            if isinstance(place, int | float):
                return float(place)
        return None


def _totals(total: Mapping[str, Any] | None) -> Iterator[tuple[str, float | None]]:
    for key, value in (total or {}).items():
        if key == "delta":
            yield from ((units.TOTAL_KINDS[k], v) for k, v in (value or {}).items() if k in units.TOTAL_KINDS)
        elif key in units.TOTAL_KINDS:
            yield units.TOTAL_KINDS[key], value


def _family(kind: str) -> str:
    return "T" if kind == "dT" else kind


def _about(place: object, name: str) -> bool:
    places = str(place or "").split(", ")
    return any(at == name or at.startswith(name + ".") for at in places)


def phase_words(phase: str | None) -> str:
    """The name of a phase as printed."""
    if not phase:
        return numbers.ABSENT
    return say_of("phase", str(phase))
