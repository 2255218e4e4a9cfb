"""LaTeX formulas as one line of readable text: √(T/T_c), (∂p/∂T)_v, v², ∫ from 1 to 2."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterator

SIGNS = {
    "alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε", "varepsilon": "ε", "zeta": "ζ",
    "eta": "η", "theta": "θ", "kappa": "κ", "lambda": "λ", "mu": "μ", "nu": "ν", "pi": "π", "rho": "ρ", "xi": "ξ",
    "sigma": "σ", "tau": "τ", "phi": "φ", "varphi": "φ", "chi": "χ", "psi": "ψ", "omega": "ω",
    "Delta": "Δ", "Gamma": "Γ", "Sigma": "Σ", "Phi": "Φ", "Psi": "Ψ", "Omega": "Ω",
    "partial": "∂", "infty": "∞", "int": "∫", "oint": "∮", "sum": "Σ", "prod": "Π", "circ": "°", "degree": "°",
    "prime": "′", "ln": "ln", "log": "log", "exp": "exp", "max": "max", "min": "min", "lim": "lim",
    "cdots": "…", "ldots": "…", "dots": "…", "%": "%", "{": "{", "}": "}", "_": "_", "#": "#", "&": "&", "$": "$",
    "langle": "⟨", "rangle": "⟩", "lbrace": "{", "rbrace": "}", "lvert": "|", "rvert": "|", "vert": "|",
}  # fmt: skip
SPACED = {
    "times": "×", "cdot": "·", "pm": "±", "approx": "≈", "le": "≤", "leq": "≤", "ge": "≥", "geq": "≥", "ne": "≠",
    "neq": "≠", "equiv": "≡", "propto": "∝", "to": "→", "rightarrow": "→", "Rightarrow": "⇒", "sim": "~", "ll": "≪",
    "gg": "≫",
}  # fmt: skip
SPACES = {",": " ", ";": " ", ":": " ", " ": " ", "quad": "  ", "qquad": "    ", "!": "", "\\": "; "}
UPRIGHT = frozenset({"mathrm", "text", "textrm", "mathit", "mathbf", "operatorname", "mathsf", "textit"})
NOTHING = frozenset({"left", "right", "big", "Big", "bigl", "bigr", "Bigl", "Bigr", "displaystyle", "limits"})
ACCENTS = {"dot": "\u0307", "bar": "\u0304", "hat": "\u0302", "tilde": "\u0303", "overline": "\u0304"}
FUNCTIONS = frozenset({"ln", "log", "exp"})
OPERATORS = "∫∮ΣΠ"

RAISED = str.maketrans("0123456789+-−", "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻⁻")
LOWERED = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
_TOKEN = re.compile(r"\\[A-Za-z]+|\\.|\d+(?:\.\d+)?|[^\\]", re.DOTALL)
_SCRIPTS = r"[\u0300-\u036f°′₀-₉⁰-⁹⁺⁻¹²³]*(?:_\w+)?[°′⁰-⁹⁺⁻¹²³]*"
_ATOM = re.compile(rf"\d+(?:\.\d+)?|[∂Δd]?\w{_SCRIPTS}")
_WHOLE = re.compile(rf"(?:{_ATOM.pattern}|√\([^()]*\))")


def plain_maths(latex: str) -> str:
    """The formula as text. What is not known is left as its name, so that nothing is lost."""
    tokens = [token for token in _TOKEN.findall(latex) if token != "\n"]
    text = "".join(_Reader(tokens).group(until=None))
    text = re.sub(r"(?<=[^\s(\[=])\s*([=≈≤≥≠∝→⇒])\s*", r" \1 ", text)
    text = re.sub(r"\[([^\[\]]*)\] \^\[([^\[\]]*)\]", r"[\1 → \2]", text)
    text = re.sub(r"(?<=[∫∮ΣΠ])\[(\w)\]", r"_\1", text)
    text = re.sub(r"(?<=[\w\u0307)])(?=[∫∮ΣΠ])", " ", text)
    text = re.sub(r"([\w)\]])([+])(?=[\w(√∫Σ])", r"\1 \2 ", text)
    text = re.sub(r"(?<=[\w)\]₀-₉⁰-⁹²³])([-−])(?=[\w(√∫ΣΔα-ω])", r" \1 ", text)
    return _spaces_tidied(text)


def readable(text: str) -> str:
    """A step's result: LaTeX, plain text, or plain text with ``$…$`` in it."""
    if "$" in text:
        return "".join(plain_maths(part) if i % 2 else part for i, part in enumerate(text.split("$")))
    return plain_maths(text) if re.search(r"[\\^_{}]", text) else text


def _spaces_tidied(text: str) -> str:
    lead = re.sub(r" +([),;\]])", r"\1", text)
    lead = re.sub(r"([(\[]) +", r"\1", lead)
    lead = re.sub(r"([∫∮ΣΠ](?:_\w|\[[^\[\]]*\])) +", r"\1 ", lead)
    return re.sub(r" {3,}", "  ", lead).strip()


class _Reader:
    """Reads tokens from left to right; every method returns text."""

    def __init__(self, tokens: list[str]) -> None:
        self.tokens = tokens
        self.at = 0

    def peek(self) -> str | None:
        return self.tokens[self.at] if self.at < len(self.tokens) else None

    def take(self) -> str:
        token = self.tokens[self.at]
        self.at += 1
        return token

    def group(self, until: str | None) -> Iterator[str]:
        """Everything up to the closing token, scripts hung on what they belong to."""
        last, worded = "", False
        while (token := self.peek()) is not None and token != until:
            if token in "_^":
                self.take()
                script = _script(token, self.argument(), on_operator=bool(last) and last in OPERATORS)
                worded = token == "_" and script[-1:].isalpha()
                yield script
                continue
            new = self.item()
            if worded and new[:1].isalpha():
                yield " "
            worded, last = False, new.strip() or last
            yield new
        if self.peek() == until and until is not None:
            self.take()

    def argument(self) -> str:
        """One item or one group in braces."""
        while (token := self.peek()) is not None and token == " ":
            self.take()
        if token is None:
            return ""
        if token == "{":
            self.take()
            return _spaces_tidied("".join(self.group("}")))
        if len(token) > 1 and token.isdigit():  # x^23 raises the 2 alone
            self.tokens[self.at] = token[1:]
            return token[0]
        return self.item()

    def item(self) -> str:
        token = self.take()
        if token == "{":
            return "".join(self.group("}"))
        if token == "~":
            return " "
        if not token.startswith("\\"):
            return token
        if token[1:].isalpha():
            while self.peek() == " ":
                self.take()
        return self.command(token[1:])

    def command(self, name: str) -> str:
        if name in ("frac", "tfrac", "dfrac"):
            above, below = self.argument(), self.argument()
            return f"{_dividend(above)}/{_bracketed(below)}"
        if name == "sqrt":
            return f"√{_bracketed(self.argument(), always=True)}"
        if name in UPRIGHT:
            return self.argument() if self.peek() == "{" else ""
        if name in ACCENTS:
            inner = self.argument()
            return unicodedata.normalize("NFC", inner[:1] + ACCENTS[name]) + inner[1:]
        if name in NOTHING:
            if self.peek() == ".":
                self.take()
            return ""
        if name in SIGNS:
            return self.function(name) if name in FUNCTIONS else SIGNS[name]
        if name in SPACED:
            return f" {SPACED[name]} "
        return SPACES.get(name, f"{name} ")

    def function(self, name: str) -> str:
        """A function's name, set apart from what it is taken of; a fraction gets brackets."""
        following = self.peek()
        if following in ("\\frac", "\\tfrac", "\\dfrac"):
            return f"{name}({self.item()})"
        return name if following in ("(", "\\left", None) else f"{name} "


def _script(kind: str, text: str, *, on_operator: bool) -> str:
    """A superscript or a subscript; limits of an integral or a sum as words between brackets."""
    if not text:
        return ""
    if on_operator:
        return f"[{text}] " if kind == "_" else f"^[{text}] "
    if kind == "^":
        if text in ("°", "′"):
            return text
        if re.fullmatch(r"[-−+]?\d+", text):
            return text.translate(RAISED)
        return f"^{_bracketed(text)}"
    if text.isdigit():
        return text.translate(LOWERED)
    return f"_{text if text.isalnum() else _bracketed(text)}"


def _dividend(text: str) -> str:
    """What stands above a fraction bar: in brackets where it is a sum."""
    text = text.strip()
    depth = 0
    for i, sign in enumerate(text):
        depth += (sign in "([") - (sign in ")]")
        if depth == 0 and i and sign in "+-−±=≤≥":
            return f"({text})"
    return text


def _bracketed(text: str, *, always: bool = False) -> str:
    """What stands below a fraction bar or in a script: in brackets unless it is one symbol or number."""
    text = text.strip()
    return text if not always and _WHOLE.fullmatch(text) else f"({text})"
