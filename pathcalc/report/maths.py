"""LaTeX formulas as MathML, with the LaTeX itself as the fallback that never fails."""

from __future__ import annotations

import html
import re
from functools import lru_cache
from xml.etree import ElementTree

from markupsafe import Markup, escape

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
_NAMESPACE = "http://www.w3.org/1998/Math/MathML"
_LATEX_SIGNS = re.compile(r"[\\^_{}]")


def mathml(latex: str, display: bool = False) -> Markup:
    """The formula as MathML; where it cannot be converted, the LaTeX source as code."""
    return Markup(_mathml(latex, display))


@lru_cache(maxsize=2048)
def _mathml(latex: str, display: bool) -> str:
    source = clean(latex)
    try:
        from latex2mathml.converter import convert_to_element

        tree = convert_to_element(source, display="block" if display else "inline")
        _tidy(tree)
        body = ElementTree.tostring(tree, encoding="unicode")
    except Exception:  # any failure of the converter has the same remedy: show the source
        return f'<code class="latex">{escape(source)}</code>'
    return body


def _tidy(tree: ElementTree.Element) -> None:
    tree.attrib.pop("xmlns", None)
    tree.set("xmlns", _NAMESPACE)
    for node in tree.iter():
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
