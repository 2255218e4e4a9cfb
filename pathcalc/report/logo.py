"""A company's logo as part of the page: PNG as it is, SVG with all taken out that could run or reach out."""

from __future__ import annotations

import base64
import re
from pathlib import Path
from xml.etree import ElementTree

from markupsafe import Markup

from pathcalc.errors import UsageError
from pathcalc.report.company import inside, read_bytes
from pathcalc.report.textsafe import clean
from pathcalc.report.words import say

NAMES = ("logo.svg", "logo.png")
MAX_BYTES = 200_000

_SVG = "http://www.w3.org/2000/svg"
_LINK = "{http://www.w3.org/1999/xlink}href"
_SHAPES = {"path", "rect", "circle", "ellipse", "line", "polyline", "polygon", "text", "tspan"}
_PAINTS = {"linearGradient", "radialGradient", "stop", "clipPath", "mask", "pattern", "style"}
_ELEMENTS = _SHAPES | _PAINTS | {"svg", "g", "defs", "use", "symbol", "title", "desc"}
_OUTSIDE = re.compile(r"@import|url\(\s*[\"']?\s*(?!#)|image-set\(|expression\(|javascript:|\\", re.I)
_SIGNATURE = b"\x89PNG\r\n\x1a\n"


def logo(folder: Path) -> Markup:
    """The logo of a company's folder as an image for the header, empty where there is none.

    Raises UsageError for a file that is no such picture or longer than ``MAX_BYTES``.
    """
    for name in NAMES:
        path = inside(folder, name)
        if path is None:
            continue
        data = read_bytes(path)
        if len(data) > MAX_BYTES:
            raise UsageError(f"{path.as_posix()}: a logo may have {MAX_BYTES:,} bytes at most")
        if name.endswith(".png"):
            return _image("image/png", _png(path, data), say("doc.logo"))
        drawing, title = sanitised(path.as_posix(), data)
        return _image("image/svg+xml", drawing, title or say("doc.logo"))
    return Markup()


def _image(kind: str, data: bytes, title: str) -> Markup:
    code = base64.b64encode(data).decode()
    return Markup('<img class="logo" alt="{}" src="data:{};base64,{}">').format(title, kind, code)


def _png(path: Path, data: bytes) -> bytes:
    if not data.startswith(_SIGNATURE) or data[12:16] != b"IHDR":
        raise UsageError(f"{path.as_posix()}: is no PNG picture")
    return data


def sanitised(name: str, data: bytes) -> tuple[bytes, str]:
    """The drawing with only known elements, no handlers and no outside references; and its title, on one line."""
    if re.search(rb"<!(?:DOCTYPE|ENTITY)", data, re.I) or b"\0" in data:
        raise UsageError(f"{name}: an SVG logo may hold no document type and must be UTF-8; save it as plain SVG")
    try:
        root = ElementTree.fromstring(data)
    except (ElementTree.ParseError, ValueError) as error:
        raise UsageError(f"{name}: is no well-formed SVG: {error}") from None
    if root.tag != f"{{{_SVG}}}svg":
        raise UsageError(f"{name}: is no SVG drawing (its outermost element is not svg in {_SVG})")
    if "viewBox" not in root.attrib and not {"width", "height"} <= set(root.attrib):
        raise UsageError(f"{name}: has neither a viewBox nor width and height")
    title = root.findtext(f"{{{_SVG}}}title") or ""
    _clean(root)
    ElementTree.register_namespace("", _SVG)
    return ElementTree.tostring(root, encoding="unicode").encode(), clean(title)


def _clean(element: ElementTree.Element) -> None:
    for key, value in list(element.attrib.items()):
        if not _harmless(key, value):
            del element.attrib[key]
    for child in list(element):
        space, _, local = str(child.tag).rpartition("}")
        foreign = space != f"{{{_SVG}" or local not in _ELEMENTS
        if foreign or (local == "style" and _OUTSIDE.search("".join(child.itertext()))):
            element.remove(child)
        else:
            _clean(child)


def _harmless(key: str, value: str) -> bool:
    if key in ("href", _LINK):
        return value.strip().startswith("#")
    return not (key.startswith("{") or key.lower().startswith("on") or _OUTSIDE.search(value))
