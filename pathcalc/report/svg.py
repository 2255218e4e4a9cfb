"""Settings, ticks and finishing of the diagrams' SVG."""

from __future__ import annotations

import math
import re
from collections.abc import Callable
from typing import Any
from xml.etree import ElementTree

from pathcalc.report.textsafe import clean

_SALT = "pathcalc"
_KEEP = (
    "backend",
    "interactive",
    "toolbar",
    "webagg",
    "timezone",
    "datapath",
    "figure.max_open",
    "savefig.dir",
)
_REFERENCE = re.compile(r"url\(#([^)]+)\)")
_MATH_FREE = {"text.parse_math": False, "axes.formatter.use_mathtext": False, "axes.unicode_minus": True}
_LOG_TICKS = (
    (0.9, (1.0, 1.5, 2.0, 3.0, 4.0, 5.0, 6.0, 8.0)),
    (1.8, (1.0, 2.0, 3.0, 5.0)),
    (3.5, (1.0, 2.0, 5.0)),
    (math.inf, (1.0,)),
)
_OWN: dict[str, Any] = {
    **_MATH_FREE,
    "svg.hashsalt": _SALT,
    "svg.fonttype": "path",
    "font.family": ["DejaVu Sans"],
    "text.usetex": False,
    "axes.formatter.use_locale": False,
    "axes.edgecolor": "#1c242c",
    "axes.linewidth": 0.8,
    "xtick.labelsize": 8,
    "ytick.labelsize": 8,
}


def settings() -> Any:
    """The library's defaults with our own on top, so that a user's style file changes nothing."""
    import matplotlib

    defaults = matplotlib.rcParamsDefault
    return {k: v for k, v in defaults.items() if not k.startswith(_KEEP)} | _OWN


def ticks(axis: Any, log: bool, write: Callable[[float], str]) -> None:
    """Ticks with plain numbers; on a logarithmic axis at 1, 2, 5 where it spans few decades."""
    from matplotlib.ticker import AutoLocator, FuncFormatter, LogLocator, NullFormatter

    if log:
        low, high = sorted(axis.get_view_interval())
        decades = math.log10(high / low)
        subs = next(s for limit, s in _LOG_TICKS if decades < limit)
        axis.set_major_locator(LogLocator(subs=subs, numticks=24))
        axis.set_minor_locator(LogLocator(subs=tuple(float(i) for i in range(1, 10)), numticks=40))
        axis.set_minor_formatter(NullFormatter())
    else:
        axis.set_major_locator(AutoLocator())
    axis.set_major_formatter(FuncFormatter(lambda value, _position: write(float(f"{value:.10g}"))))


def drawable(text: str) -> str:
    """The text with characters the diagram font cannot draw replaced by a middle dot."""
    known = _characters()
    return "".join(c if ord(c) in known else "·" for c in text)


def _characters() -> frozenset[int]:
    from matplotlib.font_manager import findfont, get_font

    return frozenset(get_font(findfont("DejaVu Sans")).get_charmap())


def finish(source: str, prefix: str, title: str, description: str) -> str:
    """Make a drawing fit to stand inside a page: own identifiers, no style sheet, no metadata, named.

    Raises xml.etree.ElementTree.ParseError when the drawing is not well formed.
    """
    root = ElementTree.fromstring(source)
    names: dict[str, str] = {}
    for node in root.iter():
        node.tag = node.tag.rpartition("}")[2]
        if node.tag == "path":
            node.attrib.setdefault("d", "")
        own = node.attrib.pop("id", None)
        if own is not None:
            names[own] = node.attrib["id"] = f"{prefix}-{len(names)}"
    for node in root.iter():
        for key in list(node.attrib):
            value = node.attrib.pop(key)
            if key.endswith("href"):
                node.set("href", "#" + names[value[1:]])
            elif key != "xmlns" and not key.startswith("xmlns:"):
                node.set(key, _REFERENCE.sub(lambda m: f"url(#{names[m[1]]})", value))
    _drop(root)
    for key in ("version",):
        root.attrib.pop(key, None)
    root.set("xmlns", "http://www.w3.org/2000/svg")
    root.set("role", "img")
    root.set("stroke-linejoin", "round")
    root.set("aria-labelledby", f"{prefix}-title {prefix}-desc")
    for i, (tag, text) in enumerate((("title", title), ("desc", description))):
        node = ElementTree.Element(tag, {"id": f"{prefix}-{tag}"})
        node.text = clean(text)
        root.insert(i, node)
    return ElementTree.tostring(root, encoding="unicode")


def _drop(node: ElementTree.Element) -> None:
    """Remove metadata, the drawing-wide style sheet, white space between elements, and unused identifiers."""
    for child in list(node):
        if child.tag == "metadata" or (child.tag == "defs" and any(c.tag == "style" for c in child)):
            node.remove(child)
        else:
            _drop(child)
    node.tail = None
    if len(node):
        node.text = None
