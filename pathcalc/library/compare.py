"""What differs between two cases or two results, in quantities and not in text.

``compare_cases`` solves two cases and compares them; ``compare_snapshots`` compares what is already solved, such as a
results file and a case. A report may use either for its changes since an earlier revision.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import asdict, dataclass, field
from typing import TYPE_CHECKING, Any

from pathcalc.library.inputs import Input, inputs_of
from pathcalc.library.quantities import Entry, entries_of
from pathcalc.library.tolerances import Tolerances, in_tolerances

if TYPE_CHECKING:
    from pathcalc.case.model import Case
    from pathcalc.path.solution import Solution


@dataclass(frozen=True)
class Snapshot:
    """One side of a comparison. ``results`` is None where there is no solution, and ``trouble`` says why.

    ``inputs`` is None where they are not known: a results file that is not a stored one holds none.
    """

    label: str
    title: str
    results: dict[str, Any] | None
    inputs: Mapping[str, Input] | None
    trouble: str = ""

    @property
    def revision(self) -> str:
        """Revision of the record, empty where there is none."""
        return (
            str(self.inputs["record.revision"]["written"]) if self.inputs and "record.revision" in self.inputs else ""
        )


@dataclass(frozen=True)
class InputChange:
    """An input that differs. ``kind``: ``changed``, ``added``, ``removed``, ``rewritten`` (same value, other text)."""

    address: str
    kind: str
    old: Input | None
    new: Input | None


@dataclass(frozen=True)
class ResultChange:
    """A result that differs by more than its tolerance, SI. ``relative`` is (new - old)/|old|, None where undefined.

    ``tolerances`` is the size of the difference in tolerances of a regression, infinite for what is not a number.
    """

    address: str
    old: float | str | None
    new: float | str | None
    unit: str
    relative: float | None
    tolerances: float
    where: str = "both"
    """``old`` or ``new`` where only one side has it."""


@dataclass(frozen=True)
class LimitChange:
    """A limit that changed side, came or went. The sides are ``met``, ``missed`` or None (no such limit); SI."""

    quantity: str
    old: str | None
    new: str | None
    old_row: Mapping[str, Any] | None
    new_row: Mapping[str, Any] | None
    unit: str


@dataclass(frozen=True)
class Comparison:
    """All that differs between ``old`` and ``new``; ``renamed`` maps names of old legs to new ones."""

    old: Snapshot
    new: Snapshot
    inputs: tuple[InputChange, ...]
    results: tuple[ResultChange, ...]
    limits: tuple[LimitChange, ...]
    checks: tuple[tuple[str, str, str], ...]
    """Checks that changed side: name and place, old side, new side."""
    warnings_gone: tuple[tuple[str, str], ...]
    """(code, place) of warnings that only the old side has."""
    warnings_new: tuple[tuple[str, str], ...]
    """(code, place) of warnings that only the new side has."""
    software: tuple[str, ...]
    renamed: Mapping[str, str] = field(default_factory=dict)

    @property
    def same(self) -> bool:
        """Nothing that matters differs: software may."""
        parts = (self.inputs, self.results, self.limits, self.checks, self.warnings_gone, self.warnings_new)
        return not any(parts) and self.old.trouble == self.new.trouble

    def to_dict(self) -> dict[str, Any]:
        """Plain values for JSON; an infinite count of tolerances becomes None."""
        from math import isfinite

        def side(of: Snapshot) -> dict[str, Any]:
            sha = of.results["case"]["sha256"] if of.results else None
            return {"label": of.label, "title": of.title, "revision": of.revision, "sha256": sha, "trouble": of.trouble}

        results = [asdict(change) for change in self.results]
        for row in results:
            row["tolerances"] = row["tolerances"] if isfinite(row["tolerances"]) else None
        return {
            "old": side(self.old),
            "new": side(self.new),
            "same": self.same,
            "inputs_known": self.old.inputs is not None and self.new.inputs is not None,
            "renamed": dict(self.renamed),
            "inputs": [asdict(change) for change in self.inputs],
            "results": results,
            "limits": [asdict(change) for change in self.limits],
            "checks": [dict(zip(("check", "old", "new"), row, strict=True)) for row in self.checks],
            "warnings_gone": [dict(zip(("code", "at"), row, strict=True)) for row in self.warnings_gone],
            "warnings_new": [dict(zip(("code", "at"), row, strict=True)) for row in self.warnings_new],
            "software": list(self.software),
        }


def snapshot_of_case(case: Case, label: str = "") -> Snapshot:
    """A case solved for comparison; one without a solution is a side as well."""
    from pathcalc.errors import NoSolutionError
    from pathcalc.path.solution import solve

    try:
        solution = solve(case)
    except NoSolutionError as error:
        return Snapshot(label or case.id, case.title, None, inputs_of(case), str(error))
    return snapshot_of_solution(solution, label)


def snapshot_of_solution(solution: Solution, label: str = "") -> Snapshot:
    """A solution as a side of a comparison."""
    case = solution.case
    return Snapshot(label or case.id, case.title, solution.to_dict(), inputs_of(case))


def snapshot_of_results(results: dict[str, Any], label: str = "") -> Snapshot:
    """A results object as a side; a stored result holds its inputs, the output of ``solve --json`` does not."""
    accepted = results.get("accepted")
    inputs = accepted["inputs"] if accepted else None
    return Snapshot(label or results["case"]["id"], results["case"]["title"], results, inputs)


def compare_cases(old: Case | Solution, new: Case | Solution, *, exact: bool = False) -> Comparison:
    """What differs between two cases; a case is solved first, a solution is taken as it is.

    ``exact`` tells every difference of a result, else those beyond the default tolerances of a regression.
    Raises InvalidCaseError where a fluid of a case cannot be built.
    """
    from pathcalc.case.model import Case

    sides = [snapshot_of_case(s) if isinstance(s, Case) else snapshot_of_solution(s) for s in (old, new)]
    return compare_snapshots(sides[0], sides[1], exact=exact)


def compare_snapshots(old: Snapshot, new: Snapshot, *, exact: bool = False) -> Comparison:
    """What differs between two sides; see :func:`compare_cases`."""
    renamed = _renamed(old.results, new.results)
    a, b = _rename(old.results, renamed), new.results
    both = a is not None and b is not None
    return Comparison(
        old=old,
        new=new,
        inputs=() if old.inputs is None or new.inputs is None else _inputs(old.inputs, new.inputs, renamed),
        results=_results(a, b, exact) if a is not None and b is not None else (),
        limits=_limits(a, b) if a is not None and b is not None else (),
        checks=_checks(a, b) if a is not None and b is not None else (),
        warnings_gone=_warnings(a, b) if both else (),
        warnings_new=_warnings(b, a) if both else (),
        software=_software(a, b) if a is not None and b is not None else (),
        renamed=renamed,
    )


def input_changes(old: Mapping[str, Input], new: Mapping[str, Input]) -> list[InputChange]:
    """Inputs that differ, in the order of ``new``, those that are gone after it."""
    found = []
    for address, now in new.items():
        before = old.get(address)
        if before is None:
            found.append(InputChange(address, "added", None, now))
        elif (before["value"], before["unit"]) != (now["value"], now["unit"]):
            found.append(InputChange(address, "changed", before, now))
        elif before["written"] != now["written"]:
            kind = "changed" if now["value"] is None else "rewritten"
            found.append(InputChange(address, kind, before, now))
    found += [InputChange(address, "removed", before, None) for address, before in old.items() if address not in new]
    return found


def _inputs(old: Mapping[str, Input], new: Mapping[str, Input], renamed: Mapping[str, str]) -> tuple[InputChange, ...]:
    moved = {_moved(address, renamed): value for address, value in old.items()}
    return tuple(input_changes(moved, new))


def _moved(address: str, renamed: Mapping[str, str]) -> str:
    prefix = "limits." if address.startswith("limits.") else ""
    rest = address.removeprefix(prefix)
    for before, after in renamed.items():
        if rest.startswith(f"{before}."):
            return prefix + after + rest[len(before) :]
    return address


def _renamed(old: dict[str, Any] | None, new: dict[str, Any] | None) -> dict[str, str]:
    """Legs that stand at one place under two names, where both paths have as many legs of the same kinds."""
    if old is None or new is None:
        return {}
    a, b = ([(leg["name"], leg["path"]) for leg in side["legs"]] for side in (old, new))
    if [path for _, path in a] != [path for _, path in b]:
        return {}
    names_a, names_b = {n for n, _ in a}, {n for n, _ in b}
    pairs = ((x, y) for (x, _), (y, _) in zip(a, b, strict=True))
    return {x: y for x, y in pairs if x != y and x not in names_b and y not in names_a}


def _rename(results: dict[str, Any] | None, renamed: Mapping[str, str]) -> dict[str, Any] | None:
    if results is None or not renamed:
        return results

    def new_name(name: str) -> str:
        return renamed.get(name, name)

    states = [{**s, "name": new_name(s["name"])} for s in results["states"]]
    legs = [{**g, **{k: new_name(g[k]) for k in ("name", "from", "to")}} for g in results["legs"]]
    limits = [{**row, "quantity": _moved(row["quantity"], renamed)} for row in results["limits"]]
    comparison = [
        {**row, "quantities": {_moved(k, renamed): v for k, v in row["quantities"].items()}}
        for row in results["comparison"]
    ]
    rows = {key: [{**row, "at": new_name(row["at"])} for row in results[key]] for key in ("checks", "warnings")}
    return {**results, "states": states, "legs": legs, "limits": limits, "comparison": comparison, **rows}


def _results(old: dict[str, Any], new: dict[str, Any], exact: bool) -> tuple[ResultChange, ...]:
    a, b = entries_of(old), entries_of(new)
    found = []
    tolerances = Tolerances()
    for address, now in b.items():
        before = a.get(address)
        if before is None:
            found.append(ResultChange(address, None, now.value, now.unit, None, float("inf"), "new"))
            continue
        size = difference_of(address, before, now, tolerances)
        if size > 1.0 or (exact and before.value != now.value):
            relative = _relative(before.value, now.value)
            found.append(ResultChange(address, before.value, now.value, now.unit, relative, size))
    for address, before in a.items():
        if address not in b:
            found.append(ResultChange(address, before.value, None, before.unit, None, float("inf"), "old"))
    return tuple(found)


def difference_of(address: str, stored: Entry, now: Entry, tolerances: Tolerances) -> float:
    """Size of the difference of two results, in tolerances; 0 where there is none."""
    if stored.value == now.value:
        return 0.0
    if isinstance(stored.value, int | float) and isinstance(now.value, int | float):
        return in_tolerances(now.value - stored.value, tolerances.allowed(address, stored).value)
    return float("inf")


def _relative(old: Any, new: Any) -> float | None:
    if isinstance(old, int | float) and isinstance(new, int | float) and old != 0.0:
        return float((new - old) / abs(old))
    return None


def side_of(row: Mapping[str, Any] | None) -> str | None:
    """``met``, ``missed``, or None for no such limit."""
    return None if row is None else "met" if row["passed"] else "missed"


def limit_rows(results: dict[str, Any]) -> dict[str, dict[str, Any]]:
    """Rows of the limits by their quantity; a second limit on a quantity has `` (2)`` after it."""
    found: dict[str, dict[str, Any]] = {}
    count: dict[str, int] = {}
    for row in results["limits"]:
        n = count[row["quantity"]] = count.get(row["quantity"], 0) + 1
        found[row["quantity"] + (f" ({n})" if n > 1 else "")] = row
    return found


def _limits(old: dict[str, Any], new: dict[str, Any]) -> tuple[LimitChange, ...]:
    from pathcalc.case.names import RESULT_KINDS
    from pathcalc.library.quantities import kind_at
    from pathcalc.quantities.limits import si_unit

    a, b = limit_rows(old), limit_rows(new)
    found = []
    for name in dict.fromkeys((*b, *a)):
        row, other = a.get(name), b.get(name)
        if side_of(row) != side_of(other):
            quantity = (row or other or {})["quantity"]
            kind = kind_at(quantity, new["boundary"] == "flow" and quantity.startswith("totals."))
            unit = si_unit(RESULT_KINDS[kind], "mass") if kind in RESULT_KINDS else ""
            found.append(LimitChange(name, side_of(row), side_of(other), row, other, unit))
    return tuple(found)


def check_sides(results: dict[str, Any]) -> dict[str, str]:
    """``passed`` or ``failed`` by the check's name and place."""
    found: dict[str, str] = {}
    for row in results["checks"]:
        key = f"{row['name']} at {row['at']}"
        found[key] = "failed" if not row["passed"] or found.get(key) == "failed" else "passed"
    return found


def _checks(old: dict[str, Any], new: dict[str, Any]) -> tuple[tuple[str, str, str], ...]:
    """Checks that both have and that changed side, and those of one side that failed there."""
    a, b = check_sides(old), check_sides(new)
    found = []
    for name in dict.fromkeys((*b, *a)):
        sides = a.get(name, "absent"), b.get(name, "absent")
        if sides[0] != sides[1] and "failed" in sides:
            found.append((name, *sides))
    return tuple(found)


def warning_places(results: dict[str, Any]) -> list[tuple[str, str]]:
    """(code, place) of every warning; the wording may change between versions."""
    return list(dict.fromkeys((row["code"], row["at"]) for row in results["warnings"]))


def _warnings(has: Any, lacks: Any) -> tuple[tuple[str, str], ...]:
    other = set(warning_places(lacks))
    return tuple(pair for pair in warning_places(has) if pair not in other)


def _software(old: dict[str, Any], new: dict[str, Any]) -> tuple[str, ...]:
    from pathcalc.library.digests import software_changes

    return tuple(software_changes(old["software"], new["software"]))
