"""The word catalogue: every key used exists, every key is used."""

from __future__ import annotations

import re
from pathlib import Path

import pathcalc.report
from pathcalc.report.words import WORDS, say

FOLDER = Path(pathcalc.report.__file__).parent
PREFIXES = re.compile(r"[\"']([a-z]+(?:\.[a-z]+)*\.)\{")


def sources() -> str:
    files = [p for p in FOLDER.rglob("*") if p.suffix in {".py", ".j2"} and not p.name.startswith("words")]
    return "\n".join(p.read_text(encoding="utf-8") for p in files)


def test_every_key_used_exists() -> None:
    used = set(re.findall(r"say\(\s*\"([a-z][\w.-]+)\"", sources()))
    assert len(used) > 60
    assert used <= set(WORDS)


def test_every_key_is_used() -> None:
    text = sources()
    prefixes = ("symbol.", *set(PREFIXES.findall(text)))
    unused = [k for k in WORDS if f'"{k}"' not in text and not k.startswith(prefixes)]
    assert unused == []


def test_missing_value_is_an_error() -> None:
    import pytest

    with pytest.raises(KeyError):
        say("basis.count", n=1)
    with pytest.raises(KeyError):
        say("no.such.words")
