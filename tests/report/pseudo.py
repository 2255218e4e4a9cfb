"""A language of its own for the tests: the English catalogue with every Latin letter outside braces replaced."""

from __future__ import annotations

import html
import re
from pathlib import Path
from typing import Any

import yaml

from pathcalc.case.names import EQUATIONS, UNITS_DEFAULT
from pathcalc.report.context import Context
from pathcalc.report.sections.basis import inputs
from pathcalc.words import Saying, english, using

LETTERS = {chr(base + i): chr(other + i) for base, other in ((65, 0x410), (97, 0x430)) for i in range(26)}
"""Latin letters to the first of the Cyrillic ones: no text is left that could be taken for English."""


def strange(text: str) -> str:
    """A text in that language, the names in braces kept."""
    return re.sub(r"\{.*?\}|[A-Za-z]", lambda m: LETTERS.get(m[0], m[0]), text)


def toml_of(texts: dict[str, str]) -> str:
    """A catalogue file; tables by the first part of the key."""
    tables: dict[str, list[str]] = {}
    for key, text in texts.items():
        table, _, rest = key.partition(".")
        escaped = text.replace("\\", "\\\\").replace('"', '\\"')
        tables.setdefault(table, []).append(f'"{rest}" = "{escaped}"')
    return "\n".join(f"[{table}]\n" + "\n".join(rows) for table, rows in tables.items()) + "\n"


def pseudo_texts() -> dict[str, str]:
    """Every text but the symbols, which are those of a standard, in the strange language."""
    texts = {key: text if key.startswith("symbol.") else strange(text) for key, text in english().texts.items()}
    return {**texts, "doc.lang": "art-x-strange"}


def write_pseudo(path: Path) -> Path:
    """The catalogue as a file."""
    path.write_text(toml_of(pseudo_texts()), encoding="utf-8")
    return path


def readable(page: str) -> str:
    """What a page says to a reader, a listener included: text, words within formulas, labels.

    Left out are code (identifiers, the case's own spellings) and the case as written.
    """
    page = re.sub(r"<style>.*?</style>|<pre.*?</pre>|<code.*?</code>", " ", page, flags=re.S)
    page = re.sub(r"<math.*?</math>", lambda m: " ".join(re.findall(r"<mtext>(.*?)</mtext>", m[0])), page, flags=re.S)
    labels = re.findall(r'(?:aria-label|alt)="([^"]*)"', page)
    text = html.unescape(" ".join([re.sub(r"<[^>]+>", " ", page), *labels]))
    return " ".join(text.split())


def of_others(solution: Any, case: Path) -> list[str]:
    """Texts that are not the catalogue's: of the case and what it includes, of the card, of the equation's source."""
    found = list(_strings(yaml.safe_load(case.read_text(encoding="utf-8"))))
    for _, text in solution.case.includes:
        found += _strings(yaml.safe_load(text))
    found += _strings(vars(solution.path.card))
    info = solution.path.model.info
    found += _strings([info.title, info.source, info.uncertainty, [p.source for p in info.parameters]])
    found += str(info.source).split("; ") if isinstance(info.source, str) else []
    with using():
        found += [warning["at"] for warning in solution.warnings]
        found += [solution.case.id, *solution.explanations, *solution.to_dict()["software"]]
    found += [address for row in solution.comparison for address in row["quantities"]]
    found += [row["quantity"] for row in solution.limits]
    found += [text for row in solution.verified for text in (row.source, row.at, row.printed)]
    found += [item.address for item in inputs(Context(solution))]
    found += ["start", "totals", *EQUATIONS, *(solution.case.record.sources or ())]
    found += [f"{kind}:" for kind in (*UNITS_DEFAULT, "volume", "amount", "power")]
    return sorted({" ".join(text.split()) for text in found}, key=len, reverse=True)


def _strings(thing: Any) -> list[str]:
    if isinstance(thing, str):
        return [thing]
    if isinstance(thing, Saying):
        return _strings(list(thing.values.values()))
    if isinstance(thing, dict):
        return [text for value in thing.values() for text in _strings(value)]
    if isinstance(thing, list | tuple | frozenset | set):
        return [text for item in thing for text in _strings(item)]
    return _strings(vars(thing)) if hasattr(thing, "__dict__") else []


def left_over(page: str, others: list[str]) -> set[str]:
    """Latin words of a page that are neither other people's texts nor part of one."""
    text = readable(page)
    for other in others:
        if len(other) > 2:
            text = re.sub(rf"(?<![^\W_]){re.escape(other)}(?![^\W_])", " ", text)
    return set(re.findall(r"[A-Za-z][A-Za-z]+", text))
