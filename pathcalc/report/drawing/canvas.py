"""A sheet on which lines, shapes and text are put down, and the SVG that comes of it."""

from __future__ import annotations

from typing import TYPE_CHECKING
from xml.sax.saxutils import escape, quoteattr

from pathcalc.report.drawing.style import INK, PAPER, SMALLEST
from pathcalc.report.drawing.text import FAMILY
from pathcalc.report.textsafe import clean

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    Array = NDArray[np.float64]

_FAR = 99999


def short(x: float) -> str:
    """A coordinate to a tenth, without what can be left out."""
    return _tenths(round(10.0 * x))


def _tenths(n: int) -> str:
    n = max(-_FAR, min(_FAR, n))
    sign, n = ("-", -n) if n < 0 else ("", n)
    whole, rest = divmod(n, 10)
    return f"{sign}{whole or ('' if rest else '0')}" + (f".{rest}" if rest else "")


class Canvas:
    """One drawing of a size in units; ``name`` begins all its identifiers."""

    def __init__(self, name: str, width: float) -> None:
        self.name, self.width = name, width
        self._parts: list[str] = []
        self._defs: list[str] = []

    def _put(self, tag: str, attributes: dict[str, str | float], body: str = "") -> None:
        self._parts.append(element(tag, attributes, body))

    # identifiers

    def clip(self, x: float, y: float, width: float, height: float) -> str:
        """The reference to a rectangle outside which nothing is drawn."""
        own = f"{self.name}-view"
        box: dict[str, str | float] = {"x": x, "y": y, "width": width, "height": height}
        self._defs.append(element("clipPath", {"id": own}, element("rect", box)))
        return f"url(#{own})"

    def hatch(self, key: str, colour: str) -> str:
        """The reference to a fill of slanting lines on white."""
        own = f"{self.name}-{key}"
        lines = element("path", {"d": "M-1 1l2-2M0 5l5-5M4 6l2-2", "stroke": colour, "stroke-width": 1.3})
        ground = element("rect", {"width": 5, "height": 5, "fill": PAPER})
        attributes: dict[str, str | float] = {
            "id": own, "width": 5, "height": 5, "patternUnits": "userSpaceOnUse",
        }  # fmt: skip
        self._defs.append(element("pattern", attributes, ground + lines))
        return f"url(#{own})"

    # shapes

    def begin(self, **attributes: str | float) -> None:
        """Open a group; underscores in names stand for hyphens."""
        self._parts.append(f"<g{_written(_hyphens(attributes))}>")

    def end(self) -> None:
        """Close the group."""
        self._parts.append("</g>")

    def line(self, points: Array, *, closed: bool = False, **attributes: str | float) -> None:
        """A line through points (n, 2); NaN breaks it. Nothing for fewer than two points."""
        path = path_of(points, closed=closed)
        if path:
            self._put("path", {"d": path, "fill": "none", **_hyphens(attributes)})

    def rect(self, x: float, y: float, width: float, height: float, **attributes: str | float) -> None:
        """A rectangle by its upper left corner."""
        box: dict[str, str | float] = {"x": x, "y": y, "width": width, "height": height}
        self._put("rect", box | _hyphens(attributes))

    def circle(self, x: float, y: float, r: float, **attributes: str | float) -> None:
        """A circle round a point."""
        self._put("circle", {"cx": x, "cy": y, "r": r, **_hyphens(attributes)})

    def text(
        self,
        x: float,
        y: float,
        text: str,
        *,
        anchor: str = "start",
        halo: bool = False,
        turned: bool = False,
        symbol: str = "",
        unit: str = "",
        **attributes: str | float,
    ) -> None:
        """Text on the base line ``y``; ``symbol`` and ``unit`` follow it, the symbol in italics."""
        given: dict[str, str | float] = {"x": x, "y": y}
        if anchor != "start":
            given["text-anchor"] = anchor
        if halo:
            given |= {"stroke": PAPER, "stroke-width": 3, "style": "paint-order: stroke"}
        if turned:
            given["transform"] = f"rotate(-90 {short(x)} {short(y)})"
        body = escape(clean(text))
        if symbol:
            body += f' <tspan font-style="italic">{escape(symbol)}</tspan>'
        if unit:
            body += f", {escape(clean(unit))}"
        self._put("text", given | _hyphens(attributes), body)

    def render(self, height: float, title: str, description: str) -> str:
        """The SVG element, named and described for those who do not see it."""
        root: dict[str, str | float] = {
            "xmlns": "http://www.w3.org/2000/svg",
            "viewBox": f"0 0 {short(self.width)} {short(height)}",
            "role": "img",
            "aria-labelledby": f"{self.name}-title {self.name}-desc",
            "font-family": FAMILY,
            "font-size": SMALLEST,
            "fill": INK,
            "stroke-linejoin": "round",
        }
        head = element("title", {"id": f"{self.name}-title"}, escape(clean(title)))
        head += element("desc", {"id": f"{self.name}-desc"}, escape(clean(description)))
        ground = element("rect", {"width": self.width, "height": height, "fill": PAPER})
        defs = element("defs", {}, "".join(self._defs)) if self._defs else ""
        return element("svg", root, head + defs + ground + "".join(self._parts))


def element(tag: str, attributes: dict[str, str | float], body: str = "") -> str:
    """One element as text; attributes are escaped, the body is markup already."""
    start = f"<{tag}{_written(attributes)}"
    return f"{start}>{body}</{tag}>" if body else f"{start}/>"


def _hyphens(attributes: dict[str, str | float]) -> dict[str, str | float]:
    return {key.replace("_", "-"): value for key, value in attributes.items()}


def _written(attributes: dict[str, str | float]) -> str:
    return "".join(
        f" {key}={quoteattr(value if isinstance(value, str) else _number(key, value))}"
        for key, value in attributes.items()
        if value != ""
    )


def _number(key: str, value: float) -> str:
    return f"{value:.2f}".rstrip("0").rstrip(".") if key.endswith(("opacity", "width")) else short(value)


def path_of(points: Array, *, closed: bool = False) -> str:
    """The path through points (n, 2) in tenths, relative after the first; broken at NaN, repeats left out."""
    import numpy as np

    parts: list[str] = []
    finite = np.asarray(np.isfinite(points).all(axis=1), dtype=bool)
    tenths = np.rint(10.0 * np.clip(np.where(finite[:, None], points, 0.0), -_FAR, _FAR)).astype(int).tolist()
    last: list[int] | None = None
    stroke: list[str] = []
    for (x, y), good in zip(tenths, finite.tolist(), strict=True):
        if not good:
            last = None
        elif last is None:
            parts += stroke if len(stroke) > 1 else []
            stroke, last = [f"M{_tenths(x)} {_tenths(y)}"], [x, y]
        elif [x, y] != last:
            dx, dy = _tenths(x - last[0]), _tenths(y - last[1])
            stroke.append(f"l{dx}{'' if dy.startswith('-') else ' '}{dy}")
            last = [x, y]
    parts += stroke if len(stroke) > 1 else []
    return "".join(parts) + ("Z" if closed and parts else "")
