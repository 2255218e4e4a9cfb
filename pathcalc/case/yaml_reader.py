"""YAML text to nodes with places, by the library's event stream: strict, bounded, and building no objects.

Scalars keep their text. Which texts are numbers or truth values the field that reads them decides, as in
the core schema of YAML 1.2, so `no`, `on`, `010` and `1:30` are what they look like.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import Any

import yaml

from pathcalc.case.nodes import Mapping, Mark, Scalar, Sequence
from pathcalc.errors import Finding

MAX_BYTES = 2_000_000
MAX_DEPTH = 40
MAX_ALIASED = 10_000
_LOADER: Any = getattr(yaml, "CSafeLoader", yaml.SafeLoader)
_NULLS = frozenset(("", "~", "null", "Null", "NULL"))
_CONTROL = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\u2028\u2029\ufeff\ufffe\uffff\ud800-\udfff]")
_PLAIN_WORDS = {
    "mapping values are not allowed in this context": "a second ': ' on one line; put the text in quotes",
    "could not find expected ':'": "a key without ':'",
    "did not find expected key": "the line does not fit its block; check its indentation",
    "did not find expected '-' indicator": "the line does not fit its list; check its indentation",
    "did not find expected ',' or '}'": "a brace { is not closed, or a comma is missing",
    "did not find expected ',' or ']'": "a bracket [ is not closed, or a comma is missing",
    "found unexpected end of stream": "a quotation mark is not closed",
    "found character that cannot start any token": "a character that cannot begin a text; use quotes",
    "found undefined alias": "an alias * of an anchor & that is not above it",
}


# told where the brace, bracket or quotation mark is opened, not where its end was missed
_NOT_CLOSED = frozenset(p for p, text in _PLAIN_WORDS.items() if "is not closed" in text)


class _Stop(Exception):
    """Reading cannot go on; the findings say why."""


def decode(data: bytes, file: str, findings: list[Finding]) -> str | None:
    """Text of a file's bytes; None, with a finding, where it is too large or not plain UTF-8."""
    if len(data) > MAX_BYTES:
        findings.append(Finding(file, 1, 1, f"the file is larger than {MAX_BYTES} bytes", "file-too-large"))
        return None
    if data.startswith((b"\xef\xbb\xbf", b"\xff\xfe", b"\xfe\xff")):
        message = "the file begins with a byte order mark; save it as UTF-8 without one"
        findings.append(Finding(file, 1, 1, message, "encoding"))
        return None
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError as error:
        before = data[: error.start].decode("utf-8")
        line, column = before.count("\n") + 1, len(before) - before.rfind("\n")
        message = f"byte 0x{data[error.start]:02x} is not UTF-8; save the file as UTF-8"
        findings.append(Finding(file, line, column, message, "encoding"))
        return None


def read(text: str, file: str, findings: list[Finding]) -> Mapping | None:
    """Top mapping of a YAML text; None, with at least one finding, where there is none."""
    if len(text) > MAX_BYTES:
        findings.append(Finding(file, 1, 1, f"the text is longer than {MAX_BYTES} characters", "file-too-large"))
        return None
    bad = _CONTROL.search(text)
    if bad:
        line, column = text.count("\n", 0, bad.start()) + 1, bad.start() - text.rfind("\n", 0, bad.start())
        message = f"control character U+{ord(bad.group()):04X}; remove it"
        findings.append(Finding(file, line, column, message, "control-character"))
        return None
    builder = _Builder(text, file, findings)
    try:
        return builder.document()
    except _Stop:
        return None
    except yaml.MarkedYAMLError as error:
        findings.append(_syntax(error, text, file))
        return None
    except yaml.YAMLError as error:
        findings.append(Finding(file, 1, 1, f"not readable as YAML: {error}", "yaml-syntax"))
        return None


def _syntax(error: yaml.MarkedYAMLError, text: str, file: str) -> Finding:
    mark = error.problem_mark or error.context_mark
    if error.context_mark and error.problem in _NOT_CLOSED:
        mark = error.context_mark
    line, column = (mark.line, mark.column) if mark else (0, 0)
    problem = error.problem or "unreadable"
    lines = text.split("\n")
    tab = re.match(r" *\t", lines[line]) if line < len(lines) else None
    if tab:
        return Finding(file, line + 1, tab.end(), "a tab in the indentation; use spaces", "yaml-tab")
    return Finding(
        file,
        line + 1,
        column + 1,
        f"not readable as YAML: {_PLAIN_WORDS.get(problem, problem)}",
        "yaml-syntax",
    )


class _Builder:
    def __init__(self, text: str, file: str, findings: list[Finding]) -> None:
        self.file, self.findings = file, findings
        self.events = yaml.parse(text, Loader=_LOADER)
        self.anchors: dict[str, tuple[Any, int]] = {}
        self.open: set[str] = set()
        self.aliased = 0

    def fail(self, mark: Any, message: str, code: str, stop: bool = True) -> None:
        self.findings.append(Finding(self.file, mark.line + 1, mark.column + 1, message, code))
        if stop:
            raise _Stop

    def at(self, mark: Any) -> Mark:
        return Mark(self.file, mark.line + 1, mark.column + 1)

    def document(self) -> Mapping | None:
        event = next(self.events)
        while isinstance(event, (yaml.StreamStartEvent, yaml.DocumentStartEvent)):
            event = next(self.events)
        if isinstance(event, yaml.StreamEndEvent):
            self.fail(_Origin, "the file is empty; a case begins with `pathcalc: 1`", "empty-file")
        start = event.start_mark
        node, _ = self.node(event, 0)
        next(self.events)
        after = next(self.events)
        if isinstance(after, yaml.DocumentStartEvent):
            self.fail(after.start_mark, "a second document; write one case a file", "several-documents")
        if not isinstance(node, Mapping):
            if isinstance(node, Scalar) and node.null:
                self.fail(start, "the file is empty; a case begins with `pathcalc: 1`", "empty-file")
            self.fail(start, "the file must hold keys and values, such as `pathcalc: 1`", "wrong-type")
            return None
        return node

    def node(self, event: Any, depth: int) -> tuple[Any, int]:
        """Node of an event and the number of nodes in it."""
        if depth > MAX_DEPTH:
            self.fail(event.start_mark, f"nested deeper than {MAX_DEPTH} levels", "too-deep")
        if isinstance(event, yaml.AliasEvent):
            return self.alias(event)
        if event.tag is not None and event.tag != "!":
            self.fail(event.start_mark, f"tag {event.tag} is not read; remove it", "yaml-tag", stop=False)
        anchor = event.anchor
        if anchor:
            self.open.add(anchor)
        build: Callable[[Any, int], tuple[Any, int]]
        if isinstance(event, yaml.ScalarEvent):
            build = self.scalar
        elif isinstance(event, yaml.MappingStartEvent):
            build = self.mapping
        else:
            build = self.sequence
        node, size = build(event, depth)
        if anchor:
            self.open.discard(anchor)
            self.anchors[anchor] = (node, size)
        return node, size

    def alias(self, event: Any) -> tuple[Any, int]:
        if event.anchor in self.open:
            self.fail(event.start_mark, f"alias *{event.anchor} stands inside its own anchor", "yaml-alias")
        if event.anchor not in self.anchors:
            self.fail(
                event.start_mark,
                f"alias *{event.anchor} has no anchor &{event.anchor} above it",
                "yaml-alias",
            )
        node, size = self.anchors[event.anchor]
        self.aliased += size
        if self.aliased > MAX_ALIASED:
            self.fail(event.start_mark, f"aliases expand to more than {MAX_ALIASED} values", "yaml-alias")
        return node, size

    def scalar(self, event: Any, _depth: int) -> tuple[Any, int]:
        plain = not event.style
        value = event.value
        bad = _CONTROL.search(value)
        if bad:
            text = f"control character U+{ord(bad.group()):04X} in a text; remove its escape"
            self.fail(event.start_mark, text, "control-character", stop=False)
        return Scalar(value, self.at(event.start_mark), plain, plain and value in _NULLS), 1

    def sequence(self, event: Any, depth: int) -> tuple[Any, int]:
        node, size = Sequence(self.at(event.start_mark)), 1
        while not isinstance(event := next(self.events), yaml.SequenceEndEvent):
            child, n = self.node(event, depth + 1)
            node.append(child)
            size += n
        return node, size

    def mapping(self, event: Any, depth: int) -> tuple[Any, int]:
        node, size = Mapping(self.at(event.start_mark)), 1
        while not isinstance(event := next(self.events), yaml.MappingEndEvent):
            key, mark = self.key(event, depth)
            child, n = self.node(next(self.events), depth + 1)
            size += n + 1
            if key is None:
                continue
            if key in node:
                first = node.keys_at[key]
                message = f"duplicate key {key!r}; first at {first.line}:{first.column}"
                self.fail(mark, message, "duplicate-key", stop=False)
                continue
            node.put(key, self.at(mark), child)
        return node, size

    def key(self, event: Any, depth: int) -> tuple[str | None, Any]:
        mark = event.start_mark
        key, _ = self.node(event, depth + 1)
        if not isinstance(key, Scalar) or key.null:
            self.fail(mark, "a key must be a text", "bad-key", stop=False)
            return None, mark
        if key == "<<" and key.plain:
            message = "the merge key << is not read; write the keys out, or use include"
            self.fail(mark, message, "merge-key", stop=False)
            return None, mark
        if key.plain and _NOT_TEXT.fullmatch(key):
            self.fail(mark, f"key {key!s} is not a text; put it in quotes if it is meant", "bad-key", stop=False)
            return None, mark
        return str(key), mark


class _Origin:
    line = 0
    column = 0


# YAML 1.2, section 10.3.2: what the core schema reads as something else than a text
_NOT_TEXT = re.compile(
    r"true|True|TRUE|false|False|FALSE|[-+]?[0-9]+|0o[0-7]+|0x[0-9a-fA-F]+"
    r"|[-+]?(?:\.[0-9]+|[0-9]+(?:\.[0-9]*)?)(?:[eE][-+]?[0-9]+)?|[-+]?\.(?:inf|Inf|INF)|\.(?:nan|NaN|NAN)"
)
