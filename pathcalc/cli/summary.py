"""A solved case as a person reads it on a terminal: states, legs, totals, limits, checks, warnings.

Numbers are those of the report, in the case's units and to the same digits, written plainly so that they can be
copied: an ASCII minus and no grouping.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING, Any

from pathcalc.cli.tables import Page, plain
from pathcalc.path.warnings import NOTES
from pathcalc.report import numbers
from pathcalc.report.context import Context, phase_words
from pathcalc.report.units import DELTA_KINDS, LEG_KINDS, STATE_KINDS, TOTAL_KINDS, kind_of

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution

EXCHANGES = ("heat", "work", "entropy_generated", "exergy_destroyed")
EXCHANGE_HEADS = {
    "heat": "heat", "work": "work", "entropy_generated": "entropy gen.", "exergy_destroyed": "exergy destr.",
}  # fmt: skip
CYCLE_HEADS = {
    "thermal_efficiency": "thermal efficiency",
    "cop_cooling": "coefficient of performance, cooling",
    "cop_heating": "coefficient of performance, heating",
}


def summary(solution: Solution, *, verbose: bool = False) -> str:
    """The summary as text, with colour where standard output is a terminal that shows it."""
    ctx = Context(solution)
    page = Page()
    _head(page, ctx)
    _states(page, ctx)
    _legs(page, ctx)
    _totals(page, ctx)
    _limits(page, ctx)
    if verbose:
        _checks(page, ctx)
        _comparison(page, ctx)
    _warnings(page, ctx)
    _outcome(page, ctx)
    return page.text()


def _head(page: Page, ctx: Context) -> None:
    result, case = ctx.result, ctx.case
    page.title(result["case"]["title"])
    record = case.record
    facts = [f"case {result['case']['id']}"]
    facts += [f"number {record.number}"] if record.number else []
    facts += [f"revision {record.revision}"] if record.revision else []
    page.line(", ".join(facts))
    amount = result["amount"]["value"]
    size = f", {ctx.brief('amount', amount)}" if amount is not None else ""
    kind = "steady flow" if ctx.flow else "closed"
    page.line(f"{result['fluid']['substance']}, equation {result['fluid']['equation']}; {kind}{size}")
    around = result["surroundings"]
    page.line(
        f"surroundings {ctx.brief('T', around['T'])}, {ctx.brief('dp', around['p'])}; "
        f"pressures {'gauge' if ctx.units.gauge else 'absolute'}; heat and work positive into the fluid"
    )


def _unit(ctx: Context, text: str, kind: str) -> str:
    unit = ctx.units[kind].unit
    return f"{text}\n{unit}" if unit else text


def _cells(ctx: Context, values: Iterable[tuple[str, float | None]]) -> list[str]:
    return [ctx.number(kind, value) for kind, value in values]


def _states(page: Page, ctx: Context) -> None:
    keys = ["T", "p", "v", "h", "s"]
    keys += ["x"] if any(state["x"] is not None for state in ctx.states) else []
    heads = ["state", *(_unit(ctx, key, STATE_KINDS[key]) for key in keys), "phase"]
    rows = [
        [
            state["name"],
            *_cells(ctx, ((STATE_KINDS[key], state[key]) for key in keys)),
            phase_words(state["phase"]),
        ]
        for state in ctx.states
    ]
    page.table("States", heads, rows, words=(0, len(heads) - 1))


def _legs(page: Page, ctx: Context) -> None:
    heads = ["leg", "path", *(_unit(ctx, EXCHANGE_HEADS[key], LEG_KINDS[key]) for key in EXCHANGES), "closure"]
    rows = [
        [
            leg["name"],
            leg["path"],
            *_cells(ctx, ((LEG_KINDS[key], leg[key]) for key in EXCHANGES)),
            numbers.scientific(leg["maxwell"]["closure"], 2),
        ]
        for leg in ctx.legs
    ]
    page.table("Legs", heads, rows, words=(0, 1))
    keys = ("u", "h", "s", "a", "g")
    heads = ["change over the leg", *(_unit(ctx, f"Δ{key}", DELTA_KINDS[key]) for key in keys)]
    rows = [[leg["name"], *_cells(ctx, ((DELTA_KINDS[key], leg["delta"][key]) for key in keys))] for leg in ctx.legs]
    page.table("", heads, rows, words=(0,))


def _totals(page: Page, ctx: Context) -> None:
    totals = ctx.result["totals"]
    if totals["work"] is not None:
        heads = ["totals", *(_unit(ctx, EXCHANGE_HEADS[key], TOTAL_KINDS[key]) for key in EXCHANGES)]
        rows = [
            [leg["name"], *_cells(ctx, ((TOTAL_KINDS[key], leg["total"][key]) for key in EXCHANGES))]
            for leg in ctx.legs
        ]
        rows.append(["all", *_cells(ctx, ((TOTAL_KINDS[key], totals[key]) for key in EXCHANGES))])
        page.table("", heads, rows, words=(0,), last_apart=len(rows) > 2)
    else:
        page.line("")
        page.line("No totals: the case gives no amount.")
    cycle = ctx.result["cycle"]
    if cycle is not None:
        found = [f"{CYCLE_HEADS[key]} {numbers.short(value)}" for key, value in cycle.items() if value is not None]
        page.line("")
        page.line(f"Cycle: {', '.join(found) or 'no figures, it neither gives nor takes work'}")


def _limits(page: Page, ctx: Context) -> None:
    rows: list[Sequence[str]] = []
    for row in ctx.result["limits"]:
        kind = kind_of(row["quantity"])
        bounds = [ctx.measure(kind, row["value"])]
        bounds += [numbers.ABSENT if row[key] is None else ctx.brief(kind, row[key]) for key in ("min", "max")]
        margin = ctx.measure(ctx.margin(kind), row["margin"])
        rows.append([row["quantity"], *bounds, margin, "pass" if row["passed"] else "FAIL"])
    if rows:
        page.table("Limits", ["quantity", "value", "at least", "at most", "margin", "outcome"], rows, words=(0, 5))


def _checks(page: Page, ctx: Context) -> None:
    rows = [
        [
            row["name"],
            row["at"],
            numbers.scientific(row["value"], 2),
            numbers.scientific(row["tolerance"], 2),
            "pass" if row["passed"] else "FAIL",
        ]
        for row in ctx.result["checks"]
    ]
    page.table("Checks", ["check", "at", "value", "tolerance", "outcome"], rows, words=(0, 1, 4))


def _comparison(page: Page, ctx: Context) -> None:
    others: list[dict[str, Any]] = ctx.result["comparison"]
    if not others:
        return
    addresses = dict.fromkeys(address for other in others for address in other["quantities"])
    heads = ["quantity", "unit", ctx.result["fluid"]["equation"], *(other["equation"] for other in others)]
    rows = []
    for address in addresses:
        kind = kind_of(address)
        values = [ctx.value(address), *(other["quantities"].get(address) for other in others)]
        rows.append([address, ctx.units[kind].unit, *(ctx.number(kind, value) for value in values)])
    page.table("Other equations on the same path", heads, rows, words=(0, 1))


def _warnings(page: Page, ctx: Context) -> None:
    if not ctx.warnings:
        return
    page.line("")
    notes = sum(1 for row in ctx.warnings if row["code"] in NOTES)
    counts = [f"{name} ({n})" for name, n in (("Warnings", len(ctx.warnings) - notes), ("Notes", notes)) if n]
    page.heading(", ".join(counts))
    for row in ctx.warnings:
        at = f"{row['at']}: " if row["at"] else ""
        page.line(f"  {at}{row['text']} ({row['code']})", style="yellow")


def _outcome(page: Page, ctx: Context) -> None:
    page.line("")
    for name, rows in (("checks", ctx.result["checks"]), ("limits", ctx.result["limits"])):
        bad = sum(not row["passed"] for row in rows)
        if not rows:
            page.line(f"{name.capitalize()}: none stated")
        elif bad:
            verb = "failed" if name == "checks" else "missed"
            page.line(f"{name.capitalize()}: {bad} of {len(rows)} {verb}", style="bold red")
        else:
            page.line(f"{name.capitalize()}: all {len(rows)} {'passed' if name == 'checks' else 'met'}", style="green")


__all__ = ["plain", "summary"]
