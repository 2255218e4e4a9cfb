"""What a case file is read into: texts, mappings and lists that know their place. Nothing is interpreted."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, NamedTuple


class Mark(NamedTuple):
    """A place in a file; lines and columns count from 1."""

    file: str
    line: int
    column: int


class Scalar(str):
    """A scalar's text. ``plain``: neither quoted nor a block; ``null``: nothing is written."""

    mark: Mark
    plain: bool
    null: bool

    def __new__(cls, text: str, mark: Mark, plain: bool = True, null: bool = False) -> Scalar:
        self = super().__new__(cls, text)
        self.mark, self.plain, self.null = mark, plain, null
        return self


class Mapping(dict[str, Any]):
    """A mapping; ``keys_at`` has the place of each key."""

    def __init__(self, mark: Mark) -> None:
        super().__init__()
        self.mark = mark
        self.keys_at: dict[str, Mark] = {}

    def put(self, key: str, at: Mark, value: Any) -> None:
        """Set an entry and the place of its key."""
        self[key] = value
        self.keys_at[key] = at


class Sequence(list[Any]):
    """A list."""

    def __init__(self, mark: Mark) -> None:
        super().__init__()
        self.mark = mark


def mark_of(node: Any) -> Mark | None:
    """Place of a node's first character; None for what does not come from a file."""
    mark = getattr(node, "mark", None)
    return mark if isinstance(mark, Mark) else None


def place(root: Any, path: tuple[str | int, ...], key: bool = False) -> Mark | None:
    """Place of the node at ``path`` below ``root``, or of its key; of the nearest parent where absent."""
    node, best, key_mark = root, mark_of(root), None
    for step in path:
        if isinstance(node, Mapping) and step in node:
            key_mark, node = node.keys_at[str(step)], node[str(step)]
        elif isinstance(node, list) and isinstance(step, int) and step < len(node):
            key_mark, node = None, node[step]
        else:
            return key_mark or best
        best = mark_of(node) or best
    return key_mark if key and key_mark else best


def walk(node: Any, path: tuple[str | int, ...] = ()) -> Iterator[tuple[tuple[str | int, ...], Any]]:
    """Every node below and with ``node``, each with its path, parents first."""
    yield path, node
    if isinstance(node, Mapping):
        for key, value in node.items():
            yield from walk(value, (*path, key))
    elif isinstance(node, Sequence):
        for i, value in enumerate(node):
            yield from walk(value, (*path, i))
