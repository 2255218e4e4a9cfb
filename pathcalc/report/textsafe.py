"""Text of the case made safe and visible: control characters shown, then escaped for where it goes.

HTML itself is escaped by the template engine; here are the other destinations: Markdown, fenced code,
style sheet strings, file names.
"""

from __future__ import annotations

import re
import unicodedata

_MARKDOWN = re.compile(r"([\\`*_{}\[\]|$~#!])")
_LINE_START = re.compile(r"^([-+=:>]|\d{1,9}(?=[.)](?: |$)))")
_INVISIBLE = {"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"}
_HARMLESS = {"\u00ad", "\u200c", "\u200d"}


def _visible(char: str) -> str:
    code = ord(char)
    if code < 0x20:
        return chr(0x2400 + code)
    if code == 0x7F:
        return "\u2421"
    return f"[U+{code:04X}]"


def clean(text: object) -> str:
    """One line of text: white space collapsed, control and direction-changing characters made visible."""
    words = " ".join(re.split(r"[ \t\r\n\f\v\u0085]+", str(text))).strip()
    return "".join(_visible(c) if _hidden(c) else c for c in words)


def clean_lines(text: str) -> str:
    """Several lines of text, as written; only control characters other than line ends and tabs are shown."""
    text = text.replace("\r\n", "\n")
    return "".join(_visible(c) if c not in "\n\t" and _hidden(c) else c for c in text)


def _hidden(char: str) -> bool:
    return (char > "~" and char not in _HARMLESS and unicodedata.category(char) in _INVISIBLE) or char < " "


def markdown(text: object) -> str:
    """Escape for running Markdown text or a table cell on a git host (CommonMark with tables and maths)."""
    line = clean(text)
    line = line.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
    line = _MARKDOWN.sub(r"\\\1", line).replace("@", "&#64;")
    start = _LINE_START.match(line)
    if start is None:
        return line
    rest = line[start.end() :]
    return f"{start[1]}\\{rest}" if start[1].isdigit() else f"\\{start[1]}{rest}"


def fence(text: str) -> str:
    """The text in a fenced block whose fence is longer than any run of backticks inside it."""
    body = clean_lines(text).rstrip("\n")
    longest = max((len(run) for run in re.findall(r"`+", body)), default=0)
    bar = "`" * max(3, longest + 1)
    return f"{bar}yaml\n{body}\n{bar}"


def inline_code(text: object) -> str:
    """A Markdown code span, safe in a table cell."""
    line = clean(text).replace("|", "\\|")
    longest = max((len(run) for run in re.findall(r"`+", line)), default=0)
    bar = "`" * (longest + 1)
    space = " " if line.startswith("`") or line.endswith("`") else ""
    return f"{bar}{space}{line}{space}{bar}" if line else ""


def css_string(text: object) -> str:
    """A quoted style-sheet string: everything but letters, digits and spaces as a code point."""
    return '"' + "".join(c if c.isalnum() or c == " " else f"\\{ord(c):x} " for c in clean(text)) + '"'


def file_stem(text: str) -> str:
    """A file name without an ending that is the same on every system."""
    name = re.sub(r"[^A-Za-z0-9._-]+", "-", text.rsplit("/", 1)[-1]).strip("-.")
    return name or "report"
