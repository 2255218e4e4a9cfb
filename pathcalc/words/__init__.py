"""Every text that a reader of a report sees, by key, in a language of choice.

The English texts stand in ``en.toml``. Another catalogue is one file of the same form; where it is put in force with
:func:`using`, :func:`say` takes its texts, and English ones for the keys it lacks. Results (``to_dict``, ``--json``)
are data and English always: see :func:`using` without a catalogue.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from contextvars import ContextVar
from pathlib import Path

from pathcalc.words.catalogue import Catalogue, catalogue, english

__all__ = ["SYMBOLS", "WORDS", "Catalogue", "Saying", "catalogue", "english", "in_force", "say", "say_of", "using"]

_CHOSEN: ContextVar[Catalogue | None] = ContextVar("words", default=None)


def in_force() -> Catalogue:
    """The catalogue that texts are taken from."""
    return _CHOSEN.get() or english()


@contextmanager
def using(words: Catalogue | Path | str | None = None) -> Iterator[None]:
    """Put a catalogue, or the file of one, in force within a ``with`` block; English where none is given.

    Raises UsageError for a file that is no catalogue.
    """
    chosen = catalogue(words) if isinstance(words, Path | str) else words
    token = _CHOSEN.set(chosen)
    try:
        yield
    finally:
        _CHOSEN.reset(token)


def say(key: str, **values: object) -> str:
    """The text under a key, with the values put in. An unknown key or a missing value raises KeyError."""
    return in_force().texts[key].format_map(values)


def say_of(table: str, name: str) -> str:
    """The text of a name that may have none, such as a phase or an equation: the name itself where it has none."""
    return in_force().texts.get(f"{table}.{name}", name)


class Saying:
    """A text that is said when it is read: ``str()`` gives it in the words then in force."""

    def __init__(self, key: str, **values: object) -> None:
        self.key, self.values = key, values

    def __str__(self) -> str:
        return say(self.key, **self.values)

    def __repr__(self) -> str:
        return f"Saying({', '.join([repr(self.key), *(f'{k}={v!r}' for k, v in self.values.items())])})"

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Saying) and (self.key, self.values) == (other.key, other.values)

    def __hash__(self) -> int:
        return hash(self.key)


class _Texts(Mapping[str, str]):
    """The texts in force as a mapping; of one table, if it is named, by the keys within it."""

    def __init__(self, table: str = "") -> None:
        self._lead = f"{table}." if table else ""

    def __getitem__(self, key: str) -> str:
        return in_force().texts[self._lead + key]

    def __iter__(self) -> Iterator[str]:
        size = len(self._lead)
        return (key[size:] for key in in_force().texts if key.startswith(self._lead))

    def __len__(self) -> int:
        return sum(1 for _ in self)


WORDS: Mapping[str, str] = _Texts()
"""Texts in force by key, without values put in."""

SYMBOLS: Mapping[str, str] = _Texts("symbol")
"""Symbols of quantities; ``_`` begins a subscript."""
