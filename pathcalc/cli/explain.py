"""``pathcalc explain``: how one number came about."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import click

from pathcalc.cli.group import COMMANDS
from pathcalc.cli.inputs import PATH, root_option, single
from pathcalc.cli.talk import Talk, loudness, write
from pathcalc.errors import Finding, NoSolutionError

if TYPE_CHECKING:
    from click.shell_completion import CompletionItem

    from pathcalc.path.solution import Solution
    from pathcalc.path.steps import Step

STATE_SOURCE = (
    "A property of the state {name!r} (T = {T}, v = {v}): the derivatives of the Helmholtz energy a(T, v) of the "
    "equation {equation} and of the ideal gas at that state."
)


def _addresses(context: click.Context, parameter: click.Parameter, incomplete: str) -> list[CompletionItem]:
    """Addresses of the case that stands before, for a shell to offer."""
    from click.shell_completion import CompletionItem

    from pathcalc.case.names import LEG_KEYS, STATE_KEYS, TOTAL_KEYS

    try:
        case = single(context.params["case"]).load(context.params.get("root"))
    except Exception:  # a shell that completes has no use for an error
        return []
    names = ["start", *(leg.name for leg in case.legs)]
    found = [f"{name}.{key}" for name in names for key in STATE_KEYS]
    found += [f"{name}.{key}" for name in names[1:] for key in LEG_KEYS]
    found += [f"totals.{key}" for key in TOTAL_KEYS]
    return [CompletionItem(address) for address in found if address.startswith(incomplete)]


@click.command("explain", short_help=COMMANDS["explain"])
@click.argument("case", type=PATH)
@click.argument("quantity", required=False, default="", shell_complete=_addresses)
@root_option
@loudness
@click.pass_obj
def command(talk: Talk, case: str, quantity: str, root: str | None) -> int:
    """Show how one number of a case came about: formula, numbers put in, result, source.

    QUANTITY is an address such as start.h, "first stage.work", "cooler.delta.s", totals.work or cycle.cop_cooling;
    without it the addresses that have worked steps are listed.
    """
    from pathcalc.path.solution import solve

    item = single(case)
    loaded = item.load(root)
    try:
        solution = solve(loaded)
    except NoSolutionError as error:
        from pathcalc.case.places import place_of

        file, line, column = place_of(loaded, error.trouble.at) or (item.shown, 1, 1)
        talk.line(str(Finding(file, line, column, str(error.trouble).rpartition(" (")[0], error.trouble.code)))
        return error.exit_code
    write(explained(solution, quantity.strip()) if quantity.strip() else "\n".join(solution.explanations))
    return 0


def explained(solution: Solution, address: str) -> str:
    """The chain of steps to a quantity, as text; UsageError with the nearest address if there is none."""
    value = solution.quantity(address)
    lines = [f"{address} = {_value(solution, address, value)}", ""]
    steps: Sequence[Step] | None = solution.explanations.get(address)
    if steps:
        for i, step in enumerate(steps, 1):
            lines += _step(i, step)
    else:
        lines += _where_from(solution, address)
    return "\n".join(lines)


def _value(solution: Solution, address: str, value: Any) -> str:
    """The value in the case's units and in SI."""
    if value is None or value != value:
        return "no value here"
    if isinstance(value, str):
        return value
    from pathcalc.cli.tables import plain
    from pathcalc.report.context import Context
    from pathcalc.report.units import kind_of

    ctx = Context(solution)
    shown = plain(ctx.measure(kind_of(address), value))
    return f"{shown}   (SI: {value!r})"


def _step(i: int, step: Step) -> list[str]:
    from pathcalc.cli.plain_maths import plain_maths, readable

    lines = [f"{i}. {step.title}"]
    formula = plain_maths(step.formula)
    rows = [("", formula)] if formula else []
    lead = "= " if formula else ""
    numbers = plain_maths(step.numbers)
    rows += [("with " if "=" in numbers else lead, numbers)] if numbers else []
    rows += [(lead, readable(step.result))] if step.result else []
    lines += [f"   {'   ' if mark else ''}{mark}{text}" for mark, text in rows]
    if step.table is not None:
        grid = [[plain_maths(text) for text in row] for row in (step.table.heads, *step.table.rows)]
        widths = [max(map(len, column)) for column in zip(*grid, strict=True)]
        lines += ["   " + "   ".join(t.rjust(w) for t, w in zip(row, widths, strict=True)) for row in grid]
    lines += [f"   source: {step.source}"] if step.source else []
    lines += [f"   note: {step.note}"] if step.note else []
    return [*lines, ""]


def _where_from(solution: Solution, address: str) -> list[str]:
    name, _, key = address.rpartition(".")
    change = name.endswith(".delta")
    name = name.removesuffix(".delta")
    lines: list[str] = []
    if name == "totals":
        lines.append("The sum over the legs; specific quantities each taken times the amount.")
    elif change:
        lines.append(f"The value at the end of the leg {name!r} less that at its inlet.")
    elif name in solution.states and key in solution.states[name]:
        state = solution.states[name]
        text = STATE_SOURCE.format(
            name=name,
            T=f"{state['T']:.7g} K",
            v=f"{state['v']:.7g} m³/kg",
            equation=solution.case.fluid.equation,
        )
        lines.append(text)
    else:
        lines.append(f"A result of the leg {name!r}.")
    near = [known for known in solution.explanations if known.startswith(f"{name}.")]
    if near:
        lines.append(f"Worked steps are there for: {', '.join(near)}")
    return lines
