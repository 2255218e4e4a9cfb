"""Results files: the object of ``pathcalc solve --json``, written so that a line is a quantity, and read with care.

A stored result has one more key at its end, ``accepted``: the reason it was accepted for, the digests of the files,
cards and software it came from, and the inputs as written and in SI. So a later run can tell what has changed.
"""

from __future__ import annotations

import json
import os
import stat
from pathlib import Path
from typing import Any

ENDING = ".results.json"
MAX_BYTES = 64_000_000
ONE_LINE = frozenset({"checks", "limits", "warnings", "inputs"})
"""Blocks whose entries are one statement each and stand on one line each."""


class ResultsError(Exception):
    """A results file cannot be read or is none; the text says why."""


def results_path(case: Path) -> Path:
    """Where the stored result of a case lies: ``booster.yaml`` -> ``booster.results.json``."""
    return case.with_name(case.stem + ENDING)


def canonical(results: dict[str, Any]) -> str:
    """Text of a results object: keys as they come, a quantity a line, floats in shortest round-trip form."""
    return _block(results, "", "") + "\n"


def _block(value: Any, indent: str, key: str) -> str:
    if isinstance(value, dict) and value:
        deeper = indent + "  "
        inner = [f"{deeper}{_scalar(k)}: {_entry(v, deeper, k, key)}" for k, v in value.items()]
        return "{\n" + ",\n".join(inner) + f"\n{indent}}}"
    if isinstance(value, list) and value:
        deeper = indent + "  "
        inner = [f"{deeper}{_entry(v, deeper, '', key)}" for v in value]
        return "[\n" + ",\n".join(inner) + f"\n{indent}]"
    return _scalar(value)


def _entry(value: Any, indent: str, key: str, block: str) -> str:
    if block in ONE_LINE and isinstance(value, dict) and not any(isinstance(v, dict | list) for v in value.values()):
        return "{" + ", ".join(f"{_scalar(k)}: {_scalar(v)}" for k, v in value.items()) + "}"
    return _block(value, indent, key)


def _scalar(value: Any) -> str:
    text = json.dumps(value, ensure_ascii=False, allow_nan=False)
    try:
        text.encode()
    except UnicodeEncodeError:
        return json.dumps(value, allow_nan=False)
    return text


def read_results(file: Path) -> dict[str, Any]:
    """The results object of a file, its shape checked. Raises ResultsError."""
    return parse_results(read_bytes(file))


def read_bytes(file: Path) -> bytes:
    """Bytes of a regular file that is not too large. Raises ResultsError; FileNotFoundError if there is none."""
    try:
        handle = os.open(file, os.O_RDONLY | getattr(os, "O_NONBLOCK", 0) | getattr(os, "O_BINARY", 0))
    except FileNotFoundError:
        raise
    except (OSError, ValueError) as error:
        raise ResultsError(f"cannot be read: {getattr(error, 'strerror', None) or error}") from None
    try:
        with os.fdopen(handle, "rb") as stream:
            if not stat.S_ISREG(os.fstat(stream.fileno()).st_mode):
                raise ResultsError("is not a regular file")
            data = stream.read(MAX_BYTES + 1)
    except OSError as error:
        raise ResultsError(f"cannot be read: {error.strerror or error}") from None
    if len(data) > MAX_BYTES:
        raise ResultsError(f"is larger than {MAX_BYTES} bytes")
    return data


def parse_results(data: bytes) -> dict[str, Any]:
    """The results object in some bytes, its shape checked. Raises ResultsError."""
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError as error:
        raise ResultsError(f"is not UTF-8 at byte {error.start}") from None
    if not text.strip():
        raise ResultsError("is empty")
    if "<<<<<<< " in text or ">>>>>>> " in text:
        for number, line in enumerate(text.split("\n"), 1):
            if line.startswith(("<<<<<<< ", ">>>>>>> ")):
                raise ResultsError(f"holds the marks of an unfinished merge, line {number}")
    try:
        found = json.loads(text, object_pairs_hook=_pairs, parse_constant=_constant)
    except json.JSONDecodeError as error:
        raise ResultsError(f"is not JSON, line {error.lineno}, column {error.colno}: {error.msg}") from None
    except RecursionError:
        raise ResultsError("is nested too deep for a results file") from None
    except ValueError as error:
        raise ResultsError(str(error)) from None
    _check_shape(found)
    results: dict[str, Any] = found
    return results


def _pairs(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    found = dict(pairs)
    if len(found) != len(pairs):
        seen: set[str] = set()
        double = next(key for key, _ in pairs if key in seen or seen.add(key))  # type: ignore[func-returns-value]
        raise ValueError(f"has the key {double!r} twice in one place")
    return found


def _constant(name: str) -> Any:
    raise ValueError(f"holds {name}, which is no number")


NUMBERS = ("T", "p", "v", "u", "h", "s", "a", "g")
EXCHANGES = ("heat", "work", "entropy_generated", "exergy_destroyed")


def _check_shape(found: Any) -> None:
    if not isinstance(found, dict) or "pathcalc" not in found:
        raise ResultsError("is not a results file: it does not hold an object with the key pathcalc")
    if found["pathcalc"] != 1:
        raise ResultsError(f"is of version {found['pathcalc']!r} of the results format; this program reads version 1")
    for key, kind in (
        ("case", dict), ("software", dict), ("fluid", dict), ("boundary", str), ("amount", dict),
        ("surroundings", dict), ("states", list), ("legs", list), ("totals", dict), ("checks", list),
        ("limits", list), ("comparison", list), ("warnings", list),
    ):  # fmt: skip
        _need(found, key, kind, "the file")
    _texts(found["case"], ("id", "title", "sha256"), "case")
    _texts(found["software"], tuple(found["software"]), "software")
    _texts(found["fluid"], ("equation", "datum"), "fluid")
    _numbers(found["fluid"], ("molar_mass",), "fluid")
    _numbers(found["amount"], ("value",), "amount")
    _numbers(found["surroundings"], ("T", "p"), "surroundings")
    if not found["states"]:
        raise ResultsError("is not a results file: it holds no states")
    for state in _records(found, "states"):
        _texts(state, ("name", "phase"), "a state")
        _numbers(state, tuple(k for k in state if k not in ("name", "phase")), f"state {state['name']}")
    for leg in _records(found, "legs"):
        _texts(leg, ("name", "path", "from", "to"), "a leg")
        where = f"leg {leg['name']}"
        _numbers(leg, (*EXCHANGES, "amount"), where)
        for key, names in (("delta", NUMBERS), ("total", EXCHANGES), ("maxwell", ("ds", "du", "dh", "error"))):
            _numbers(_need(leg, key, dict, where), names, where)
        _need(leg, "pieces", list, where)
        for piece in _records(leg, "pieces"):
            _texts(piece, ("phase",), where)
            _numbers(piece, ("ds", "dh"), where)
    _numbers(found["totals"], EXCHANGES, "totals")
    _numbers(_need(found["totals"], "delta", dict, "totals"), NUMBERS, "totals")
    _cycle(found)
    for row in _records(found, "checks"):
        _texts(row, ("name", "at"), "a check")
        _need(row, "passed", bool, "a check")
    for row in _records(found, "limits"):
        _texts(row, ("quantity",), "a limit")
        _need(row, "passed", bool, "a limit")
        _numbers(row, ("value", "min", "max", "margin"), "a limit")
    for row in _records(found, "comparison"):
        _texts(row, ("equation",), "a comparison")
        quantities = _need(row, "quantities", dict, "a comparison")
        _numbers(quantities, tuple(quantities), "a comparison")
    for row in _records(found, "warnings"):
        _texts(row, ("code", "at", "text"), "a warning")
    _accepted(found)


def _cycle(found: dict[str, Any]) -> None:
    cycle = found.get("cycle")
    if cycle is not None:
        _numbers(_need(found, "cycle", dict, "the file"), tuple(cycle), "cycle")


def _accepted(found: dict[str, Any]) -> None:
    if "accepted" not in found:
        return
    accepted = _need(found, "accepted", dict, "the file")
    _texts(accepted, ("reason",), "accepted")
    for key in ("files", "cards"):
        for name, digest in _need(accepted, key, dict, "accepted").items():
            if not (digest is None or isinstance(digest, str)):
                raise ResultsError(f"is damaged: the digest of {name!r} is not a text")
    for name, value in _need(accepted, "inputs", dict, "accepted").items():
        if not isinstance(value, dict):
            raise ResultsError(f"is damaged: the input {name!r} is not an object")
        _texts(value, ("written", "unit"), f"input {name}")
        _numbers(value, ("value",), f"input {name}")


def _need(where: dict[str, Any], key: str, kind: type, name: str) -> Any:
    if key not in where:
        raise ResultsError(f"is damaged: {name} lacks the key {key!r}")
    if not isinstance(where[key], kind):
        raise ResultsError(f"is damaged: {key!r} of {name} is not what it should be")
    return where[key]


def _records(found: dict[str, Any], key: str) -> list[dict[str, Any]]:
    for row in found[key]:
        if not isinstance(row, dict):
            raise ResultsError(f"is damaged: an entry of {key!r} is not an object")
    records: list[dict[str, Any]] = found[key]
    return records


def _texts(where: dict[str, Any], keys: tuple[str, ...], name: str) -> None:
    for key in keys:
        _need(where, key, str, name)


def _numbers(where: dict[str, Any], keys: tuple[str, ...], name: str) -> None:
    for key in keys:
        value = where.get(key, "")
        if value is None or (type(value) is float and value - value == 0.0):
            continue
        if type(value) is not int:  # neither a truth value, nor a number too large for a float
            raise ResultsError(f"is damaged: {key!r} of {name} is not a number")
