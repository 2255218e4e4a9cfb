"""LaTeX formulas as MathML, with the LaTeX itself as the fallback that never fails."""

from __future__ import annotations

import html
import math
import re
from collections.abc import Iterator
from functools import lru_cache
from xml.etree import ElementTree

from markupsafe import Markup, escape

from pathcalc.report.numbers import MINUS, SUPERSCRIPTS
from pathcalc.report.textsafe import clean, inline_code, markdown

_SPACES = {
    "negativethinmathspace": "-0.167em",
    "thinmathspace": "0.167em",
    "mediummathspace": "0.222em",
    "thickmathspace": "0.278em",
}
_TAGS = frozenset(
    [
        "math",
        "mrow",
        "mi",
        "mn",
        "mo",
        "mtext",
        "mspace",
        "mfrac",
        "msqrt",
        "mroot",
        "msub",
        "msup",
        "msubsup",
        "munder",
        "mover",
        "munderover",
        "mtable",
        "mtr",
        "mtd",
        "mstyle",
        "mpadded",
        "mphantom",
        "menclose",
        "mmultiscripts",
        "mprescripts",
        "none",
        "merror",
    ]
)
_ATTRIBUTES = frozenset(
    [
        "display",
        "mathvariant",
        "stretchy",
        "fence",
        "form",
        "width",
        "linethickness",
        "columnalign",
        "rowspacing",
        "columnspacing",
        "accent",
        "accentunder",
        "displaystyle",
        "scriptlevel",
        "minsize",
        "maxsize",
        "lspace",
        "rspace",
        "separator",
        "symmetric",
        "movablelimits",
        "largeop",
        "notation",
    ]
)
_ROMAN = re.compile(r"&#x000([46][0-9A-F]|[57][0-9A]);")
_LONG = 48
_SIGNS = frozenset("−+±")
_OPENERS = frozenset("([{=≈<>≤≥×·+−/,;:")
_NAMESPACE = "http://www.w3.org/1998/Math/MathML"
_POWER = re.compile(r"\\times 10\^\{([^{}]*)\}")
_LATEX_SIGNS = re.compile(r"[\\^_{}]")


def mathml(latex: str, display: bool = False) -> Markup:
    """The formula as MathML; where it cannot be converted, the LaTeX source as code."""
    return Markup(_mathml(latex, display))


def mathml_lines(latex: str) -> Markup:
    """A formula that may break before its plus and minus signs, as several MathML elements where it is long."""
    return Markup(_mathml(latex, True, _LONG))


@lru_cache(maxsize=2048)
def _mathml(latex: str, display: bool, longest: float = math.inf) -> str:
    source = clean(latex)
    try:
        from latex2mathml.converter import convert_to_element

        tree = convert_to_element(source, display="block" if display else "inline")
        _tidy(tree)
        if len("".join(tree.itertext())) > longest:
            return "<wbr>".join(_serialised(part) for part in _parts(tree))
        body = _serialised(tree)
    except Exception:  # any failure of the converter has the same remedy: show the source
        return f'<code class="latex">{escape(source)}</code>'
    return body


def _serialised(tree: ElementTree.Element) -> str:
    return ElementTree.tostring(tree, encoding="unicode")


def _parts(tree: ElementTree.Element) -> list[ElementTree.Element]:
    """The top row cut before every binary plus and minus."""
    parts = [_part()]
    for node in _flat(tree):
        if node.tag == "mo" and node.text in _SIGNS and node.get("form") != "prefix" and len(parts[-1][0]):
            parts.append(_part())
            node.set("form", "infix")
        parts[-1][0].append(node)
    return parts


def _flat(row: ElementTree.Element) -> Iterator[ElementTree.Element]:
    """The nodes of a row, long rows within it opened up."""
    for node in row:
        if node.tag == "mrow" and len("".join(node.itertext())) > _LONG // 2:
            yield from _flat(node)
        else:
            yield node


def _part() -> ElementTree.Element:
    part = ElementTree.Element("math", {"xmlns": _NAMESPACE, "display": "inline", "displaystyle": "true"})
    ElementTree.SubElement(part, "mrow")
    return part


def _tidy(tree: ElementTree.Element) -> None:
    tree.attrib.pop("xmlns", None)
    tree.set("xmlns", _NAMESPACE)
    nodes = list(tree.iter())
    for node in nodes:
        if node.tag not in _TAGS:
            raise ValueError(f"unexpected element {node.tag!r}")
        if node.tag == "mi" and node.text and _ROMAN.fullmatch(node.text):
            node.set("mathvariant", "normal")
        for name in list(node.attrib):
            if name != "xmlns" and name not in _ATTRIBUTES:
                del node.attrib[name]
        if node.tag == "mspace" and node.get("width") in _SPACES:
            node.set("width", _SPACES[node.attrib["width"]])
        if node.text:
            node.text = html.unescape(node.text)
            if node.tag != "mtext" and node.text.startswith("\\"):
                raise ValueError(f"unknown command {node.text!r}")
    for node in nodes:
        _signs(node)


def _signs(row: ElementTree.Element) -> None:
    """Mark signs that are no subtraction, as in ``(-3)``, so that no space is set after them."""
    before = ""
    for node in row:
        text = node.text or ""
        if node.tag == "mo" and text in _SIGNS and (not before or before in _OPENERS):
            node.set("form", "prefix")
        if node.tag != "mspace":
            before = text if node.tag == "mo" else "operand"


def figure(latex: str) -> str:
    """A number in LaTeX as plain text, for a table: minus sign and raised power."""
    text = latex.replace("-", MINUS)
    return _POWER.sub(lambda m: "×10" + m[1].replace(MINUS, "-").translate(SUPERSCRIPTS), text)


def is_latex(text: str) -> bool:
    """Whether a result is LaTeX (a backslash, ``^``, ``_`` or a brace in it) rather than plain text."""
    return bool(_LATEX_SIGNS.search(text))


def result_html(text: str) -> Markup:
    """A step's result for HTML: LaTeX, plain text, or plain text with ``$…$`` in it."""
    if "$" in text:
        parts = text.split("$")
        return Markup("").join(mathml(p) if i % 2 else Markup(escape(clean(p))) for i, p in enumerate(parts))
    return mathml(text) if is_latex(text) else Markup(escape(clean(text)))


def inline_markdown(latex: str) -> str:
    """``$…$`` for a git host; a formula with a dollar sign or backtick in it is shown as code."""
    source = clean(latex)
    return inline_code(source) if set("$`<") & set(source) else f"${source}$"


def display_markdown(latex: str) -> str:
    """A displayed formula for a git host."""
    source = clean(latex)
    return inline_code(source) if set("$`<") & set(source) else f"$$\n{source}\n$$"


def result_markdown(text: str) -> str:
    """A step's result for Markdown."""
    if "$" in text:
        parts = text.split("$")
        return "".join(inline_markdown(p) if i % 2 else markdown(p) for i, p in enumerate(parts))
    return inline_markdown(text) if is_latex(text) else markdown(text)
