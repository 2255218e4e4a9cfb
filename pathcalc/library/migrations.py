"""From one version of the format to the next: what is written otherwise, as edits of the text.

Version 1 is the first that was published. A file that calls itself version 0 is a draft: written while the format was
being settled, or turned out by a conversion, with the trade's other words for the kinds of legs.

To add one: a function that gives the edits for a file's tree, and its line in ``MIGRATIONS``.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any

from pathcalc.case.nodes import Mapping, Scalar, Sequence


@dataclass(frozen=True)
class Edit:
    """A scalar (a value, or a key where ``key`` names its mapping) that is to read otherwise."""

    node: Scalar
    new: str


Edits = Callable[[Mapping], Iterator[Edit]]

WORDS_OF_VERSION_0 = {"isentropic": "adiabatic", "isenthalpic": "throttling", "isometric": "isochoric"}


def _from_0(tree: Mapping) -> Iterator[Edit]:
    """Kinds of legs are called by the words of version 1."""
    for leg in _legs(tree.get("legs")):
        path = leg.get("path")
        if isinstance(path, Scalar) and path in WORDS_OF_VERSION_0:
            yield Edit(path, WORDS_OF_VERSION_0[path])


def _legs(node: Any) -> Iterator[Mapping]:
    for item in node if isinstance(node, Sequence) else ():
        if isinstance(item, Mapping):
            yield item
            yield from _legs(item.get("legs"))


MIGRATIONS: dict[int, Edits] = {0: _from_0}
"""Edits from each older version to the next one."""
