"""The outcomes of a run as JUnit XML, the form that servers of automatic tests read.

Neither clock nor host nor duration is in it: the same run gives the same bytes. File and line are given for every
case and again in the text of a failure.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from xml.sax.saxutils import escape, quoteattr

from pathcalc.library.outcome import WITHOUT_RESULT, Outcome

# what XML 1.0 (W3C, fifth edition, 2008), production 2, does not allow in a document
_NOT_XML = re.compile("[^\t\n\r\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")


def junit(outcomes: Sequence[Outcome], name: str) -> bytes:
    """XML of all outcomes in their order: an error where a case gave no result, a failure for any other miss."""
    failures = sum(o.code != 0 and o.status not in WITHOUT_RESULT for o in outcomes)
    errors = sum(o.status in WITHOUT_RESULT for o in outcomes)
    skipped = sum(o.status == "unchanged" for o in outcomes)
    counts = f'tests="{len(outcomes)}" failures="{failures}" errors="{errors}" skipped="{skipped}"'
    lines = ['<?xml version="1.0" encoding="UTF-8"?>', f"<testsuites {counts}>"]
    lines.append(f"  <testsuite name={_attribute(name)} {counts}>")
    for outcome in outcomes:
        lines += _case(outcome)
    lines += ["  </testsuite>", "</testsuites>"]
    return ("\n".join(lines) + "\n").encode("utf-8")


def _case(outcome: Outcome) -> list[str]:
    folder, _, file = outcome.file.rpartition("/")
    worst = next((f for f in outcome.findings if f.severity == "error"), None)
    place = (worst.file, worst.line) if worst is not None else (outcome.file, 1)
    head = (
        f"    <testcase classname={_attribute(folder or '.')} name={_attribute(file)} "
        f'file={_attribute(place[0])} line="{place[1]}"'
    )
    inner: list[str] = []
    if outcome.code:
        kind = "error" if outcome.status in WITHOUT_RESULT else "failure"
        message = worst.message if worst is not None else outcome.status
        text = "\n".join(str(f) for f in outcome.findings)
        inner.append(
            f"      <{kind} type={_attribute(outcome.status)} message={_attribute(message)}>{_text(text)}</{kind}>"
        )
    elif outcome.status == "unchanged":
        inner.append('      <skipped message="unchanged since its result was accepted"/>')
    said = [str(f) for f in outcome.findings if not outcome.code] + list(outcome.notes)
    if said:
        inner.append(f"      <system-out>{_text(chr(10).join(said))}</system-out>")
    return [f"{head}>", *inner, "    </testcase>"] if inner else [f"{head}/>"]


def _clean(text: str) -> str:
    return _NOT_XML.sub(lambda found: f"\\x{ord(found[0]):02x}", text)


def _text(text: str) -> str:
    return escape(_clean(text))


def _attribute(text: str) -> str:
    return quoteattr(_clean(text), {"\n": "&#10;", "\r": "&#13;", "\t": "&#9;"})
