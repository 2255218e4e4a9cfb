"""Worked steps: symbols, then numbers, then result, leg by leg."""

from __future__ import annotations

from pathcalc.path.steps import Step
from pathcalc.report.context import Context
from pathcalc.report.view import Block, Heading, Paragraph, Section, Worked
from pathcalc.report.words import say


def section(ctx: Context) -> Section:
    """Every explanation of the solution, under the state or leg it belongs to; equal ones are shown once.

    Explanations without numbers put in only name the equation of state: they are left out.
    """
    groups: dict[str, dict[tuple[Step, ...], list[str]]] = {}
    for address, steps in ctx.solution.explanations.items():
        if any(step.numbers for step in steps):
            name = address.partition(".")[0]
            groups.setdefault(name, {}).setdefault(tuple(steps), []).append(address)
    if not groups:
        return Section("worked", say("worked.title"), (Paragraph(say("worked.none"), blank=True),))
    order = ["start", *(str(leg["name"]) for leg in ctx.legs), "totals"]
    names = [n for n in order if n in groups] + [n for n in groups if n not in order]
    blocks: list[Block] = [Paragraph(say("worked.lead"))]
    for name in names:
        blocks.append(Heading(name))
        for steps, addresses in groups[name].items():
            blocks.append(Worked(say("worked.for", quantities=", ".join(addresses)), steps))
    return Section("worked", say("worked.title"), tuple(blocks))
