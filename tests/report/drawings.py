"""Reading a drawing back: its marks, its texts, its paths."""

from __future__ import annotations

import re
from xml.etree import ElementTree

import numpy as np
from numpy.typing import NDArray

SVG = "{http://www.w3.org/2000/svg}"
_MOVE = re.compile(r"([MlLZ])([^MlLZ]*)")
_NUMBER = re.compile(r"-?(?:\d+\.?\d*|\.\d+)")


def tree(svg: str) -> ElementTree.Element:
    return ElementTree.fromstring(svg)


def texts(root: ElementTree.Element) -> list[str]:
    return ["".join(node.itertext()) for node in root.iter(f"{SVG}text")]


def marked(root: ElementTree.Element, mark: str) -> dict[str, ElementTree.Element]:
    return {node.attrib[f"data-{mark}"]: node for node in root.iter() if f"data-{mark}" in node.attrib}


def points(path: str) -> NDArray[np.float64]:
    """Absolute points of a path of M, l and Z."""
    found: list[tuple[float, float]] = []
    x = y = 0.0
    for command, rest in _MOVE.findall(path):
        numbers = [float(n) for n in _NUMBER.findall(rest)]
        for a, b in zip(numbers[::2], numbers[1::2], strict=True):
            x, y = (a, b) if command == "M" else (x + a, y + b)
            found.append((x, y))
    return np.array(found)


def numbers_in(labels: list[str]) -> list[int]:
    """Every state number that stands in labels such as ``1, 5``."""
    return sorted(int(n) for label in labels if re.fullmatch(r"\d+(, \d+)*", label) for n in label.split(", "))
