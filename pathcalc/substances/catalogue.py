"""Which substances are built in, and by which names they may be called.

Names match on letters and digits alone, whatever the case: ``R134a``, ``R-134a`` and ``r 134A`` are one.
The index beside the cards spares reading all of them; a card that is not yet in the index is found too.
"""

from __future__ import annotations

import difflib
from collections.abc import Mapping
from functools import cache
from pathlib import Path
from types import MappingProxyType

import yaml

from pathcalc.errors import Finding, InvalidCaseError

CARDS = Path(__file__).parent / "cards"
INDEX = CARDS / "index.yaml"
ENTRY_POINTS = "pathcalc.substances"

Loader: type = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


class UnknownSubstance(InvalidCaseError):
    """No card goes by this name. ``nearest`` holds the closest known spellings, best first."""

    def __init__(self, name: str, nearest: tuple[str, ...]) -> None:
        self.name = name
        self.nearest = nearest
        hint = f"; did you mean {' or '.join(nearest)}?" if nearest else ""
        text = f"no substance is called {name!r}{hint} (`pathcalc substances` lists all)"
        super().__init__([Finding("", 0, 0, text, "unknown-substance")])
        self.args = (text,)


def key_of(name: str) -> str:
    """The letters and digits of a name in lower case: what two spellings of one name share."""
    return "".join(c for c in name.casefold() if c.isalnum())


def file_stem(name: str) -> str:
    """The file name, without its ending, of the built-in card of a substance."""
    return "-".join("".join(c if c.isalnum() else " " for c in name.lower()).split())


@cache
def _index() -> Mapping[str, tuple[str, ...]]:
    """Canonical name -> aliases, of every card in the cards folder."""
    raw = yaml.load(INDEX.read_text(encoding="utf-8"), Loader)
    found = {str(name): tuple(str(a) for a in aliases) for name, aliases in raw.items()}
    indexed = {file_stem(name) for name in found}
    for path in sorted(CARDS.glob("*.yaml")):
        if path != INDEX and path.stem not in indexed:
            found.update(_names_in(path))
    return MappingProxyType(found)


def _names_in(path: Path) -> dict[str, tuple[str, ...]]:
    raw = yaml.load(path.read_text(encoding="utf-8"), Loader)
    return {str(raw["substance"]): tuple(str(a) for a in raw.get("aliases", ()))}


@cache
def _spellings() -> Mapping[str, str]:
    """Matching key of every name, alias and formula -> canonical name; canonical names win."""
    table: dict[str, str] = {}
    for name, aliases in _index().items():
        for alias in aliases:
            table.setdefault(key_of(alias), name)
    table.update({key_of(name): name for name in _index()})
    return MappingProxyType(table)


@cache
def _foreign() -> Mapping[str, Path]:
    """Canonical name -> file, of cards brought by other packages.

    Such a package declares an entry point of the group ``pathcalc.substances`` that loads to the path of
    one card or of a folder of cards.
    """
    from importlib.metadata import entry_points

    cards: dict[str, Path] = {}
    for point in sorted(entry_points(group=ENTRY_POINTS), key=lambda p: p.name):
        place = Path(point.load())
        for path in sorted(place.glob("*.yaml")) if place.is_dir() else [place]:
            for name in _names_in(path):
                cards.setdefault(name, path)
    return MappingProxyType(cards)


@cache
def _foreign_spellings() -> Mapping[str, str]:
    table: dict[str, str] = {}
    for name, path in _foreign().items():
        for known, aliases in _names_in(path).items():
            for spelling in (known, *aliases):
                table.setdefault(key_of(spelling), name)
    return MappingProxyType(table)


def names() -> tuple[str, ...]:
    """All canonical names, in alphabetical order."""
    return tuple(sorted({*_index(), *_foreign()}, key=str.casefold))


def aliases(name: str) -> tuple[str, ...]:
    """The other names of a built-in substance."""
    return _index()[resolve(name)]


def resolve(name: str) -> str:
    """The canonical name behind any spelling; :class:`UnknownSubstance` with the nearest ones if none."""
    key = key_of(name)
    found = _spellings().get(key) or _foreign_spellings().get(key)
    if found is None:
        raise UnknownSubstance(name, _nearest(key))
    return found


def card_path(name: str) -> Path:
    """The card file of a substance given by any of its spellings."""
    canonical = resolve(name)
    built_in = CARDS / f"{file_stem(canonical)}.yaml"
    return built_in if built_in.is_file() else _foreign()[canonical]


def _nearest(key: str) -> tuple[str, ...]:
    table = {**_foreign_spellings(), **_spellings()}
    close = difflib.get_close_matches(key, list(table), n=6, cutoff=0.6)
    return tuple(dict.fromkeys(table[k] for k in close))[:3]
