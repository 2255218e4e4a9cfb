"""The outcome of a run over a library, for people and for programs."""

from __future__ import annotations

import sys
from typing import TYPE_CHECKING

from pathcalc.cli.findings import rendered
from pathcalc.cli.talk import Talk, json_text, visible, write, write_utf8

if TYPE_CHECKING:
    from pathcalc.errors import Finding
    from pathcalc.library.outcome import Outcome
    from pathcalc.library.run import RunResult

MOST_FINDINGS = 8
MOST_ROWS = 25
TIGHT_ROWS = 5


def shown(result: RunResult, form: str, talk: Talk) -> None:
    """Print a run as text, JSON or annotations."""
    if form == "json":
        write_utf8(json_text(result.public()))
        return
    if form == "github":
        for outcome in result.outcomes:
            write_utf8_if(rendered(_told(outcome, False), form))
        return
    for outcome in result.outcomes:
        for finding in _told(outcome, not talk.verbose):
            write_utf8(visible(str(finding)))
        hidden = len(outcome.findings) - MOST_FINDINGS
        if hidden > 0 and not talk.verbose and outcome.status != "accepted":
            write_utf8(visible(f"{outcome.file}: {hidden} more; --verbose tells all"))
        if talk.verbose and outcome.detail:
            talk.line(outcome.detail.rstrip())
        for note in outcome.notes:
            talk.note(visible(f"{outcome.file}: {note}"))
    if not talk.quiet:
        _table(result, talk)
    sys.stdout.flush()
    for place in result.written:
        talk.note(visible(f"stored: {place.as_posix()}"))


def write_utf8_if(text: str) -> None:
    """Data, if there is any."""
    if text:
        write_utf8(text)


def _told(outcome: Outcome, cut: bool) -> list[Finding]:
    """The findings that are said; what was accepted has been looked at."""
    if outcome.status == "accepted":
        return [f for f in outcome.findings if f.code == "limit-missed"]
    return list(outcome.findings[:MOST_FINDINGS] if cut else outcome.findings)


def _table(result: RunResult, talk: Talk) -> None:
    """What needs a look first; a long library shows that alone, and the tightest of the rest."""
    from pathcalc.cli.tables import Page

    ordered = result.by_need
    rows = ordered
    if len(ordered) > MOST_ROWS and not talk.verbose:
        bad = [o for o in ordered if o.code or o.stored_limits_missed]
        rows = bad + [o for o in ordered if not (o.code or o.stored_limits_missed)][:TIGHT_ROWS]
    page = Page()
    heads = ["case", "outcome", "differing", "largest, in tolerances", "tightest limit", "margin", "warnings"]
    page.table("What needs a look first", heads, [_row(o) for o in rows], words=(0, 1, 4))
    if len(rows) < len(ordered):
        page.line(f"and {len(ordered) - len(rows)} more without anything to look at")
    write(page.text())


def _row(outcome: Outcome) -> list[str]:
    from pathcalc.library.words import number

    sizes = [m.tolerances for m in outcome.misses]
    numbers = [s for s in sizes if s is not None]
    largest = "" if not sizes else "not a number" if len(numbers) < len(sizes) else f"{max(numbers):.2g}"
    tight = outcome.verdict.tightest if outcome.verdict is not None else None
    margin = (
        "" if tight is None else "no value" if tight.margin is None else f"{number(tight.margin)} {tight.unit}".strip()
    )
    status = outcome.status
    if outcome.stored_limits_missed and not outcome.code:
        status += ", limit missed as accepted"
    return [
        visible(outcome.file),
        status,
        str(len(outcome.misses) or ""),
        largest,
        "" if tight is None else visible(tight.quantity),
        margin,
        "" if outcome.verdict is None else str(outcome.verdict.warnings or ""),
    ]
