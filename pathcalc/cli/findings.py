"""Findings in the forms that people and programs read, all from one object."""

from __future__ import annotations

from collections.abc import Iterable

from pathcalc.cli.talk import json_text, visible
from pathcalc.errors import Finding

FORMATS = ("text", "json", "github")


def rendered(findings: Iterable[Finding], form: str) -> str:
    """All findings as text; empty where there is nothing to say."""
    if form == "json":
        keys = ("file", "line", "column", "severity", "message", "code")
        return json_text([{key: getattr(finding, key) for key in keys} for finding in findings]) + "\n"
    one = _annotation if form == "github" else _line
    return "".join(f"{one(finding)}\n" for finding in findings)


def _line(finding: Finding) -> str:
    return visible(str(finding))


def _annotation(finding: Finding) -> str:
    """A workflow command that places the message beside the line of the file."""
    place = f"file={_property(finding.file)},line={finding.line},col={finding.column}"
    return f"::{finding.severity} {place},title={_property(finding.code)}::{_data(finding.message)}"


def _data(text: str) -> str:
    return text.replace("%", "%25").replace("\r", "%0D").replace("\n", "%0A")


def _property(text: str) -> str:
    return _data(text).replace(":", "%3A").replace(",", "%2C")
