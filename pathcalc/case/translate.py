"""The schema library's errors to findings: our words, stable codes, and the place that is meant."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, TypeVar, get_args

from pydantic import BaseModel, ValidationError
from pydantic.fields import FieldInfo

from pathcalc.case.names import QUANTITY_WORDS
from pathcalc.case.nodes import Mark, place
from pathcalc.errors import Finding
from pathcalc.quantities.parse import Problem, nearest
from pathcalc.quantities.relative import RELATIVE_KEYS

Path = tuple[str | int, ...]
MOST = 100
"""Findings told of one section: a flood helps nobody."""
M = TypeVar("M", bound=BaseModel)


class Findings:
    """Findings of one run; places are looked up in the node tree ``root``."""

    def __init__(self, file: str, found: list[Finding] | None = None) -> None:
        self.file, self.root = file, None
        self.found: list[Finding] = found if found is not None else []
        self.emptied: set[Path] = set()
        self._told: set[Finding] = set()

    def add(self, path: Path, message: str, code: str, key: bool = False) -> None:
        """Add a finding at the value at ``path`` of the tree, or at its key."""
        mark = place(self.root, path, key) or Mark(self.file, 1, 1)
        if not path:
            mark = Mark(self.file, 1, 1)
        finding = Finding(mark.file, mark.line, mark.column, message, code)
        if finding not in self._told:
            self._told.add(finding)
            self.found.append(finding)

    def missing(self, parent: Path, key: str, message: str) -> None:
        """Add a missing key, unless it is there without a value, which is told already."""
        if (*parent, key) not in self.emptied:
            self.add(parent, message, "missing-key", key=True)

    def validate(self, model: type[M], data: Any, at: Path, context: dict[str, Any], what: str = "") -> M | None:
        """Model of the data found at path ``at``; None, with findings, where it is not valid."""
        try:
            return model.model_validate(data, context=context)
        except ValidationError as error:
            for item in error.errors(include_url=False)[:MOST]:
                self._one(model, item, at, what)
            return None

    def _one(self, model: type[BaseModel], item: Any, at: Path, what: str) -> None:
        loc: Path = tuple(step for step in item["loc"] if step != "[key]")
        kind = item["type"]
        if kind == "problems":
            for p in item["ctx"]["problems"]:
                self._problem(p, (*at, *loc))
            return
        translate = _TRANSLATED.get(kind)
        here = what if what and len(loc) == 1 else _name((*at, *loc[:-1]))
        if kind == "extra_forbidden":
            known = _keys(model, loc[:-1])
            text = f"unknown key {str(loc[-1])!r} in {here}; {_instead(str(loc[-1]), known)}"
            self.add((*at, *loc), text, "unknown-key", key=True)
        elif kind == "missing":
            self.missing((*at, *loc[:-1]), str(loc[-1]), f"{here} needs the key {str(loc[-1])!r}")
        elif translate:
            code, say = translate
            self.add((*at, *loc), say(_name((*at, *loc)), item), code)
        else:
            self.add((*at, *loc), f"{_name((*at, *loc))}: {item['msg']}", "wrong-type")

    def _problem(self, problem: Problem, at: Path) -> None:
        self.add((*at, *problem.at), problem.message, problem.code, problem.key)


def _instead(key: str, known: list[str]) -> str:
    """What to write in place of a key that is not known."""
    symbol = QUANTITY_WORDS.get(key.lower(), "")
    if symbol in known:
        return f"did you mean {symbol}?"
    if key in RELATIVE_KEYS and "p" in known:
        return f"name the quantity first, such as p: {{{key}: …}}"
    return nearest(key, known)


def _name(path: Path) -> str:
    last = next((step for step in reversed(path) if isinstance(step, str)), "")
    return f"`{last}`" if last else "the file"


def _by_key(model: type[BaseModel]) -> dict[str, FieldInfo]:
    """Fields by the key that a case writes."""
    return {field.alias or name: field for name, field in model.model_fields.items()}


def _keys(model: type[BaseModel], loc: Path) -> list[str]:
    for step in loc:
        field = _by_key(model).get(str(step))
        if field is None:
            continue
        inner = [t for t in (field.annotation, *get_args(field.annotation)) if isinstance(t, type)]
        model = next((t for t in inner if issubclass(t, BaseModel)), model)
    return list(_by_key(model))


def _holds_keys(name: str, _item: Any) -> str:
    return f"{name} holds keys and values, such as {{key: value}}"


def _holds_list(name: str, _item: Any) -> str:
    return f"{name} holds a list, such as [first, second]"


def _holds_text(name: str, _item: Any) -> str:
    return f"{name} holds a text, not a mapping or a list"


def _bad_name(_name: str, item: Any) -> str:
    return f"{str(item['input'])!r} is no leg name; use letters, digits, single spaces, _ and -"


_TRANSLATED: dict[str, tuple[str, Callable[[str, Any], str]]] = {
    "model_type": ("wrong-type", _holds_keys),
    "model_attributes_type": ("wrong-type", _holds_keys),
    "dict_type": ("wrong-type", _holds_keys),
    "list_type": ("wrong-type", _holds_list),
    "string_type": ("wrong-type", _holds_text),
    "string_pattern_mismatch": ("bad-name", _bad_name),
    "string_too_long": ("bad-name", lambda name, item: "a leg name has at most 80 characters"),
}
