"""Catalogues of texts: reading them, and holding another language's against the English one."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path
from string import Formatter
from typing import Any

from pathcalc.errors import Finding, InvalidWordsError, UsageError

_ENGLISH = Path(__file__).with_name("en.toml")
_LINE = re.compile(
    r"(?:#.*|[ \t]*|\[(?P<table>[\w-]+)\]|(?P<key>[\w-]+|'[^']+'|\"[^\"\\]+\") = "
    r"(?:'(?P<plain>[^']*)'|\"(?P<quoted>[^\"\\]*)\"))"
)
_TABLE = re.compile(r"\s*\[([^\[\]]+)\]\s*(?:#.*)?$")
_KEY = re.compile(r"""\s*((?:[\w-]+|'[^']*'|"[^"]*")(?:\s*\.\s*(?:[\w-]+|'[^']*'|"[^"]*"))*)\s*=""")
_PART = re.compile(r"""'([^']*)'|"([^"]*)"|([\w-]+)""")
_MOST = 1_000_000
"""Bytes of a catalogue that are read: some twenty times the English one."""


@dataclass(frozen=True, eq=False)
class Catalogue:
    """Texts by key; ``missing`` of them are not its own but English. ``name`` is the file's."""

    name: str
    texts: Mapping[str, str]
    missing: int = 0


@lru_cache(maxsize=1)
def english() -> Catalogue:
    """The English catalogue, read once."""
    text = _ENGLISH.read_text(encoding="utf-8")
    plain = _plain(text)
    return Catalogue(_ENGLISH.name, plain if plain is not None else dict(_flat(_parsed(text, _ENGLISH))))


def catalogue(path: Path | str) -> Catalogue:
    """The catalogue of a file, its gaps filled with English.

    Raises UsageError for a file that cannot be read, InvalidWordsError (with the place of every fault) for one that
    is no TOML, has a key or a value in braces that the English one has not, or lacks a value that the English one has.
    """
    file = Path(path)
    try:
        with file.open("rb") as stream:
            data = stream.read(_MOST + 1)
        if len(data) > _MOST:
            raise _invalid(file, 1, 1, "the file is too large for a catalogue of words", "file-too-large")
        text = data.decode("utf-8-sig")
    except OSError as error:
        raise UsageError(f"{file}: cannot be read: {error.strerror or error}") from error
    except UnicodeDecodeError as error:
        raise _invalid(file, 1, 1, "not UTF-8; save the catalogue as UTF-8", "encoding") from error
    text = text.replace("\r\n", "\n")
    own = dict(_flat(_parsed(text, file)))
    known = english().texts
    places = _places(text)
    faults = [(places.get(key, (1, 1)), *fault) for key, value in own.items() for fault in _faults(key, value, known)]
    if faults:
        raise InvalidWordsError([Finding(str(file), *place, text, code) for place, text, code in sorted(faults)])
    texts = {key: own.get(key, text) for key, text in known.items()}
    return Catalogue(file.name, texts, len(known) - len(own))


def slots(text: str) -> set[str]:
    """The names in braces of a text. ValueError where a brace is left open, or holds more than a name."""
    found = set()
    for _, name, form, conversion in Formatter().parse(text):
        if name is None:
            continue
        if not name.isidentifier() or form or conversion:
            raise ValueError("only a name may stand in braces; a brace to be printed is written twice")
        found.add(name)
    return found


def _invalid(file: Path, line: int, column: int, text: str, code: str) -> InvalidWordsError:
    return InvalidWordsError([Finding(str(file), line, column, text, code)])


def _faults(key: str, value: Any, known: Mapping[str, str]) -> Iterator[tuple[str, str]]:
    """What is wrong with one text: messages with their codes."""
    if key not in known:
        import difflib

        near = difflib.get_close_matches(key, known, 1)
        hint = f"; did you mean {near[0]!r}?" if near else ""
        yield f"no text of the reports has the key {key!r}{hint}", "unknown-key"
        return
    if not isinstance(value, str):
        yield f"{key} is no text; write it in quotes", "wrong-type"
        return
    if not value.strip() and known[key].strip():
        yield f"{key} is empty; leave the key out to keep the English text", "empty-value"
        return
    try:
        given = slots(value)
    except ValueError as error:
        yield f"{key}: {error}", "bad-braces"
        return
    wanted = slots(known[key])
    for names, what in ((wanted - given, "lacks"), (given - wanted, "has, unlike the English text,")):
        if names:
            yield f"{key} {what} {', '.join(f'{{{name}}}' for name in sorted(names))}", "bad-braces"


def _parsed(text: str, file: Path) -> dict[str, Any]:
    """TOML as tables. InvalidWordsError with the place where it is none."""
    import tomllib

    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        found = re.search(r"^(.*) \(at line (\d+), column (\d+)\)$", str(error))
        what, line, column = found.groups() if found else (str(error), str(text.count("\n") + 1), "1")
        raise _invalid(file, int(line), int(column), what[:1].lower() + what[1:], "toml-syntax") from error
    except RecursionError as error:
        raise _invalid(file, 1, 1, "tables within tables without end", "toml-syntax") from error


def _flat(table: Mapping[str, Any], lead: str = "") -> Iterator[tuple[str, Any]]:
    """Texts by their whole key, the parts joined by points."""
    for key, value in table.items():
        if isinstance(value, dict):
            yield from _flat(value, f"{lead}{key}.")
        else:
            yield lead + key, value


def _plain(text: str) -> dict[str, str] | None:
    """The texts of a file of one text a line without escapes; None for any other.

    Some thirty times faster than the whole of TOML, of which it is a part: every report and many a summary waits for
    the English texts.
    """
    texts: dict[str, str] = {}
    lead = ""
    for line in text.split("\n"):
        found = _LINE.fullmatch(line)
        if found is None:
            return None
        table, key, plain, quoted = found.groups()
        if table is not None:
            lead = f"{table}."
        elif key is not None:
            texts[lead + key.strip("'\"")] = plain if plain is not None else quoted
    return texts


def _places(text: str) -> dict[str, tuple[int, int]]:
    """Line and column of each key, as far as it is written on a line of its own."""
    places: dict[str, tuple[int, int]] = {}
    lead: tuple[str, ...] = ()
    for number, line in enumerate(text.split("\n"), 1):
        table = _TABLE.match(line)
        if table is not None:
            lead = _parts(table[1])
            places.setdefault(".".join(lead), (number, line.index("[") + 1))
            continue
        found = _KEY.match(line)
        if found is not None:
            places.setdefault(".".join((*lead, *_parts(found[1]))), (number, found.start(1) + 1))
    return places


def _parts(key: str) -> tuple[str, ...]:
    return tuple(next(part for part in found if part) for found in _PART.findall(key) if any(found))
