"""Legs of the file to leg models: dispatch on `path`, `repeat` written out, names and references settled."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Annotated, Any

from pydantic import Field

from pathcalc.case.fields import Text
from pathcalc.case.leg_model import LegModel, OneOf, Strict
from pathcalc.case.leg_registry import leg_models
from pathcalc.case.names import MAX_LEGS, PATH_WORDS, PATHS_LATER, RESERVED_NAMES
from pathcalc.case.nodes import Mark, mark_of
from pathcalc.case.sections import RepeatCount
from pathcalc.case.translate import Findings, Path
from pathcalc.quantities.parse import nearest
from pathcalc.quantities.values import Relative


class Repeat(Strict):
    """A group of legs that is run through several times; names get ` 1`, ` 2`, …"""

    repeat: RepeatCount = Field(description="How many times.", examples=[3])
    legs: Annotated[list[Any], Field(description="The legs of one time through.")]
    note: Text | None = Field(None, description="Anything a reader should know.", examples=["three equal stages"])


@dataclass(frozen=True)
class Leg:
    """A leg with its name before numbering, the numbers of the repeats around it, and its place."""

    model: LegModel
    rounds: tuple[int, ...]
    at: Path


@dataclass
class _Group:
    count: int
    items: list[_Group | tuple[LegModel, Path]]

    def size(self) -> int:
        """Number of legs it becomes."""
        return self.count * sum(i.size() if isinstance(i, _Group) else 1 for i in self.items)


def read_legs(data: Any, out: Findings, context: dict[str, Any]) -> list[Leg] | None:
    """Legs written out in order; None, with findings, where any is not valid."""
    before = len(out.found)
    group = _group(data, ("legs",), 1, out, context)
    if len(out.found) > before:
        return None
    if group.size() > MAX_LEGS:
        out.add(
            ("legs",),
            f"repeats write out {group.size()} legs; at most {MAX_LEGS} are solved",
            "too-many-legs",
            True,
        )
        return None
    return _written_out(group, ())


def _written_out(group: _Group, rounds: tuple[int, ...]) -> list[Leg]:
    legs: list[Leg] = []
    for item in group.items:
        if isinstance(item, _Group):
            for i in range(1, item.count + 1):
                legs += _written_out(item, (*rounds, i))
        else:
            legs.append(Leg(item[0], rounds, item[1]))
    return legs


def _group(data: Any, at: Path, count: int, out: Findings, context: dict[str, Any]) -> _Group:
    group = _Group(count, [])
    if not isinstance(data, list):
        out.add(at, "`legs` holds a list of legs, each beginning with -", "wrong-type")
        return group
    if not data:
        out.add(at, "`legs` is empty; give at least one leg", "missing-key", True)
    for i, item in enumerate(data):
        here = (*at, i)
        if not isinstance(item, dict):
            out.add(here, "a leg holds keys and values, such as {name: …, path: …, to: …}", "wrong-type")
        elif "repeat" in item:
            model = out.validate(Repeat, item, here, context, "a repeat")
            if isinstance(item.get("legs"), list):
                inner = _group(item["legs"], (*here, "legs"), model.repeat if model else 1, out, context)
                group.items.append(inner)
        else:
            leg = _leg(item, here, out, context)
            if leg is not None:
                group.items.append((leg, here))
    return group


def _leg(item: Any, at: Path, out: Findings, context: dict[str, Any]) -> LegModel | None:
    models = leg_models()
    if "path" not in item:
        if (*at, "path") not in out.emptied:
            out.add(at, f"a leg needs the key 'path': one of {', '.join(models)}", "missing-key")
        return None
    path = item["path"]
    model = models.get(path) if isinstance(path, str) else None
    if model is None:
        if isinstance(path, str) and path in PATHS_LATER:
            text = f"path {str(path)!r} is not available in this version; available are {', '.join(models)}"
            out.add((*at, "path"), text, "not-available")
        elif isinstance(path, str):
            out.add(
                (*at, "path"),
                f"unknown path {str(path)!r}; {PATH_WORDS.get(path) or nearest(path, list(models))}",
                "unknown-path",
            )
        else:
            out.add((*at, "path"), f"`path` holds one of {', '.join(models)}", "wrong-type")
        return None
    found = out.validate(model, item, at, context, f"the {path} leg")
    if found is None:
        return None
    if found.name in RESERVED_NAMES:
        out.add((*at, "name"), f"{found.name!r} is no leg name; it already names something else", "reserved-name")
    mark = mark_of(item) or Mark("", 0, 0)
    found._origin, found._origin_file = (mark.line, mark.column), mark.file
    return found


def settle(legs: list[Leg], out: Findings) -> tuple[LegModel, ...]:
    """Number the names of repeated legs, resolve `same_as`, and tell names that are there twice."""
    seen: dict[str, Leg] = {}
    every = [_numbered(leg.model.name, leg.rounds) for leg in legs]
    names = set(every)
    settled: list[LegModel] = []
    for leg, name in zip(legs, every, strict=True):
        if name in seen:
            first = seen[name].model.origin
            text = f"leg name {name!r} is there twice; first at {first[0]}:{first[1]}"
            out.add((*leg.at, "name"), text, "duplicate-name")
        changes: dict[str, Any] = {}
        targets = getattr(leg.model, "to", None)
        if isinstance(targets, OneOf):
            moved = _resolved(targets, leg, seen, names, out)
            if moved is not targets:
                changes["to"] = moved
        if name != leg.model.name:
            changes["name"] = name
        settled.append(leg.model.model_copy(update=changes) if changes else leg.model)
        seen.setdefault(name, leg)
    return tuple(settled)


def _numbered(name: str, rounds: tuple[int, ...]) -> str:
    return " ".join((name, *map(str, rounds)))


def _resolved(targets: OneOf, leg: Leg, seen: dict[str, Leg], names: set[str], out: Findings) -> OneOf:
    changes: dict[str, Any] = {}
    for key, value in targets.given().items():
        if not isinstance(value, Relative) or value.state is None:
            continue
        options = [_numbered(value.state, leg.rounds[:n]) for n in range(len(leg.rounds), -1, -1)]
        match = next((o for o in options if o == "start" or o in seen), None)
        if match is None:
            _unknown_state(value.state, options, (*leg.at, "to", key, "same_as"), seen, names, out)
        elif match != value.state:
            changes[key] = replace(value, state=match)
    return targets.model_copy(update=changes) if changes else targets


def _unknown_state(
    state: str, options: list[str], at: Path, seen: dict[str, Leg], names: set[str], out: Findings
) -> None:
    if any(o in names for o in options):
        out.add(at, f"same_as names {state!r}, which does not come before this leg", "unknown-state")
    else:
        out.add(
            at,
            f"same_as names no earlier state {state!r}; {nearest(state, ['start', *seen])}",
            "unknown-state",
        )
