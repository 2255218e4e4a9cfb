"""A comparison as text for a terminal, and as Markdown for a merge request."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

from pathcalc.cli.talk import Talk, visible

if TYPE_CHECKING:
    from pathcalc.library.compare import Comparison, InputChange, LimitChange, ResultChange
    from pathcalc.library.compare_sides import Pair

MAIN = frozenset({"T", "p", "x", "phase", "heat", "work", "entropy_generated", "exergy_destroyed"})
"""Keys of the results that are told first; the others follow from them."""
MOST_ROWS = 40


def is_main(change: ResultChange) -> bool:
    """Does a reader want this result first."""
    name, _, key = change.address.rpartition(".")
    if change.address.startswith(("comparison.", "totals.delta")) or ".delta" in name or ".total" in name:
        return False
    return name == "cycle" or (key in MAIN and not name.endswith((".maxwell", ".pieces")))


def as_text(pairs: Sequence[Pair], old: str, new: str, talk: Talk) -> str:
    """All pairs, those that differ in full; verbose tells every result."""
    from pathcalc.cli.tables import Page

    page = Page()
    same = [p for p in pairs if p.unchanged or (p.comparison is not None and p.comparison.same)]
    for pair in pairs:
        if pair.only:
            page.line(f"{visible(pair.name)}: only in {visible(old if pair.only == 'old' else new)}")
        elif pair.comparison is not None and not pair.comparison.same:
            _text_of(page, pair.comparison, pair.name if len(pairs) > 1 else "", talk.verbose)
    if len(pairs) == 1 and same:
        page.line(f"{visible(old)} and {visible(new)}: nothing differs")
    elif same:
        page.line(f"{len(same)} case{'' if len(same) == 1 else 's'} without a difference")
    software = dict.fromkeys(text for p in pairs if p.comparison for text in p.comparison.software)
    if software:
        page.line(f"software: {', '.join(software)}")
    return page.text()


def _text_of(page: Any, found: Comparison, name: str, every: bool) -> None:
    if name:
        page.line("")
        page.title(visible(name))
    page.line(f"old: {_head(found.old)}")
    page.line(f"new: {_head(found.new)}")
    for side, snapshot in (("old", found.old), ("new", found.new)):
        if snapshot.results is None:
            page.line(f"{side} has no solution: {visible(snapshot.trouble)}")
    for before, after in found.renamed.items():
        page.line(f"leg {visible(before)!r} is called {visible(after)!r} now")
    if found.old.inputs is None or found.new.inputs is None:
        page.line("inputs are not compared: a results file that was not accepted does not hold them")
    if found.inputs:
        rows = [_input_row(change) for change in found.inputs]
        page.table("Inputs", ["input", "old", "new", "old, SI", "new, SI"], rows, words=(0, 1, 2))
    if found.limits:
        rows = [_limit_row(change) for change in found.limits]
        page.table("Limits that changed side", ["limit", "old", "new", "old value", "new value"], rows, words=(0, 1, 2))
    if found.checks:
        page.table("Checks that changed side", ["check", "old", "new"], list(found.checks), words=(0, 1, 2))
    _warnings_text(page, found)
    results = [r for r in found.results if every or is_main(r)]
    if results:
        rows = [_result_row(change) for change in results[: None if every else MOST_ROWS]]
        page.table("Results", ["result", "unit", "old", "new", "relative difference"], rows, words=(0, 1))
    hidden = len(found.results) - (len(results) if every else min(len(results), MOST_ROWS))
    if hidden:
        page.line(f"and {hidden} more results that differ; --verbose tells all")
    if not found.results and found.old.results is not None and found.new.results is not None:
        page.line("No result differs beyond its tolerance.")


def _warnings_text(page: Any, found: Comparison) -> None:
    for word, rows in (("new warning", found.warnings_new), ("warning gone", found.warnings_gone)):
        for code, at in rows:
            page.line(f"{word}: {code}{f' at {at}' if at else ''}")


def _head(snapshot: Any) -> str:
    revision = f", revision {visible(snapshot.revision)}" if snapshot.revision else ""
    return f"{visible(snapshot.label)}{revision}: {visible(snapshot.title)}"


def _si(value: Any) -> str:
    if value is None or value["value"] is None:
        return ""
    return f"{value['value']:.10g} {value['unit']}".rstrip()


def _as_written(value: Any) -> str:
    if value is None:
        return "absent"
    text = visible(str(value["written"]))
    return text if len(text) <= 60 else f"{text[:57]}..."


def _input_row(change: InputChange) -> list[str]:
    same = " (same value)" if change.kind == "rewritten" else ""
    return [change.address, _as_written(change.old), _as_written(change.new) + same, _si(change.old), _si(change.new)]


def _limit_row(change: LimitChange) -> list[str]:
    from pathcalc.library.words import number

    def value(row: Any) -> str:
        return "" if row is None else f"{number(row['value'])} {change.unit}".rstrip()

    return [
        change.quantity,
        change.old or "absent",
        change.new or "absent",
        value(change.old_row),
        value(change.new_row),
    ]


def _result_row(change: ResultChange) -> list[str]:
    from pathcalc.library.words import apart

    old, new = apart(change.old, change.new)
    if change.where != "both":
        old, new = (old, "absent") if change.where == "old" else ("absent", new)
    relative = "" if change.relative is None else f"{change.relative:+.2%}" if abs(change.relative) >= 1e-4 else (
        f"{change.relative:+.1e}"
    )  # fmt: skip
    return [change.address, change.unit, old, new, relative]


def as_markdown(pairs: Sequence[Pair], old: str, new: str) -> str:
    """A section a case that differs, for a merge request; the tables of many results are folded."""
    lines = [f"## Cases compared: {_code(old)} with {_code(new)}", ""]
    differing = [p for p in pairs if p.comparison is not None and not p.comparison.same]
    only = [p for p in pairs if p.only]
    bad = [p for p in pairs if p.trouble]
    same = len(pairs) - len(differing) - len(only) - len(bad)
    counts = [(len(differing), "differ"), (same, "without a difference"), (len(only), "on one side only")]
    lines += [", ".join(f"{n} {text}" for n, text in [*counts, (len(bad), "not valid")] if n), ""]
    for pair in only:
        lines.append(f"- {_code(pair.name)}: only in {_code(old if pair.only == 'old' else new)}")
    for pair in bad:
        lines += [f"- {_cell(str(finding))}" for finding in pair.trouble]
    if only or bad:
        lines.append("")
    for pair in differing:
        assert pair.comparison is not None
        lines += _section(pair.name, pair.comparison)
    return "\n".join(lines).rstrip("\n") + "\n"


def _section(name: str, found: Comparison) -> list[str]:
    lines = [f"### {_cell(found.new.title)}", "", f"{_code(name)}{_revisions(found)}", ""]
    for side, snapshot in (("old", found.old), ("new", found.new)):
        if snapshot.results is None:
            lines += [f"The {side} side has no solution: {_cell(snapshot.trouble)}", ""]
    for before, after in found.renamed.items():
        lines += [f"Leg {_code(before)} is called {_code(after)} now.", ""]
    if found.limits:
        heads = ["limit that changed side", "old", "new", "old value", "new value"]
        lines += [*_table(heads, [_limit_row(c) for c in found.limits]), ""]
    if found.checks:
        lines += [*_table(["check that changed side", "old", "new"], [list(row) for row in found.checks]), ""]
    for word, rows in (("New warning", found.warnings_new), ("Warning gone", found.warnings_gone)):
        lines += [f"- {word}: {_code(code)}{f' at {_cell(at)}' if at else ''}" for code, at in rows]
    if found.warnings_new or found.warnings_gone:
        lines.append("")
    if found.inputs:
        lines += [*_table(["input", "old", "new", "old, SI", "new, SI"], [_input_row(c) for c in found.inputs]), ""]
    heads = ["result", "unit", "old", "new", "relative difference"]
    main = [c for c in found.results if is_main(c)]
    rest = [c for c in found.results if not is_main(c)]
    if main:
        lines += [*_table(heads, [_result_row(c) for c in main]), ""]
    if rest:
        lines += ["<details>", f"<summary>{len(rest)} more results that differ</summary>", ""]
        lines += [*_table(heads, [_result_row(c) for c in rest]), "", "</details>", ""]
    if not found.results and found.old.results and found.new.results:
        lines += ["No result differs beyond its tolerance.", ""]
    if found.software:
        lines += [f"Software: {_cell(', '.join(found.software))}", ""]
    return lines


def _revisions(found: Comparison) -> str:
    if found.old.revision == found.new.revision:
        return f", revision {_cell(found.new.revision)}" if found.new.revision else ""
    return f", revision {_cell(found.old.revision or 'none')} to {_cell(found.new.revision or 'none')}"


def _table(heads: Sequence[str], rows: Sequence[Sequence[str]]) -> list[str]:
    lines = [f"| {' | '.join(heads)} |", f"|{'|'.join(' --- ' for _ in heads)}|"]
    return lines + [f"| {' | '.join(_cell(cell) for cell in row)} |" for row in rows]


_MARKUP = {c: f"\\{c}" for c in "\\`*_[]<>|~#"} | {"&": "&amp;"}


def _cell(text: str) -> str:
    """Text that Markdown shows as it is, on one line."""
    return "".join(_MARKUP.get(c, c) for c in visible(" ".join(text.split())))


def _code(text: str) -> str:
    plain = visible(" ".join(text.split())).replace("|", "\\|")
    fence = "`" * (1 + max((len(run) for run in plain.split("`")), default=0) if "`" in plain else 1)
    return f"{fence} {plain} {fence}" if "`" in plain else f"`{plain}`"
