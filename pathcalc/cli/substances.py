"""``pathcalc substances``: what is built in, in a list, or one card in full."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

import click

from pathcalc.cli.group import COMMANDS
from pathcalc.cli.reference_text import reference_as_dict, reference_text
from pathcalc.cli.talk import loudness, write, write_json
from pathcalc.errors import PathcalcError, UsageError

if TYPE_CHECKING:
    from click.shell_completion import CompletionItem

    from pathcalc.substances import Card, Constant

MEANINGS = {
    "molar_mass": "molar mass",
    "T_c": "critical temperature",
    "p_c": "critical pressure",
    "rho_c": "critical density",
    "T_triple": "triple-point temperature",
    "p_triple": "triple-point pressure",
    "T_nbp": "boiling temperature at 101325 Pa",
    "acentric": "acentric factor",
}


def _names(context: click.Context, parameter: click.Parameter, incomplete: str) -> list[CompletionItem]:
    from click.shell_completion import CompletionItem

    from pathcalc.substances import names

    return [CompletionItem(name) for name in names() if name.startswith(incomplete)]


@click.command("substances", short_help=COMMANDS["substances"])
@click.argument("name", required=False, shell_complete=_names)
@click.option("--json", "as_json", is_flag=True, help="Print JSON, in SI units per mole.")
@loudness
def command(name: str | None, as_json: bool) -> None:
    """List the built-in substances, or show one in full.

    NAME is any of a substance's names or its formula, or the path of a card of your own (*.yaml).
    """
    if name is None:
        _print_list(as_json)
        return
    card = _card(name)
    if as_json:
        write_json(card_as_dict(card))
    else:
        write(card_text(card))


def _card(name: str) -> Card:
    from pathcalc.substances import UnknownSubstance, read_card

    try:
        return read_card(name)
    except UnknownSubstance as error:
        hint = f"; did you mean {' or '.join(error.nearest)}?" if error.nearest else "; without a name all are listed"
        raise UsageError(f"no substance is called {name!r}{hint}") from None


def usable_equations(card: Card) -> dict[str, str]:
    """Every equation, and what the card lacks for it; empty where it can be used."""
    from pathcalc.equations.build import build_model, equation_names

    found: dict[str, str] = {}
    for equation in equation_names():
        try:
            build_model(card, equation)
        except PathcalcError as error:
            found[equation] = str(error)
        else:
            found[equation] = ""
    return found


def _usable(card: Card) -> list[str]:
    return [equation for equation, lack in usable_equations(card).items() if not lack]


def _print_list(as_json: bool) -> None:
    from pathcalc.substances import names, read_card

    cards = [read_card(name) for name in names()]
    if as_json:
        write_json([card_as_dict(card) for card in cards])
        return
    from pathcalc.cli.tables import Page
    from pathcalc.equations.build import equation_names

    every, page = equation_names(), Page()
    rows = []
    for card in cards:
        usable = _usable(card)
        first = card.ideal_gas[0]
        rows.append(
            [
                card.name,
                card.formula,
                _scaled(card, "molar_mass", 1e3),
                _scaled(card, "T_c", 1.0),
                _scaled(card, "p_c", 1e-5),
                f"{first.T_min:g} to {first.T_max:g}",
                "all" if usable == every else ", ".join(usable),
            ]
        )
    heads = ["substance", "formula", "M\ng/mol", "T_c\nK", "p_c\nbar", "heat capacity from, to\nK", "equations"]
    page.table("", heads, rows, words=(0, 1, 5, 6))
    page.line("")
    page.line(f"{len(cards)} substances; equations: {', '.join(every)}")
    page.line("One in full, with its sources: pathcalc substances NAME")
    write(page.text().lstrip("\n"))


def _scaled(card: Card, key: str, factor: float) -> str:
    return f"{card.constant(key).value * factor:.6g}" if card.has(key) else "-"


def _constants(card: Card) -> Iterator[tuple[str, str, Constant, str]]:
    from pathcalc.substances import CONSTANT_UNITS

    for key, unit in CONSTANT_UNITS.items():
        if card.has(key):
            yield key, MEANINGS[key], card.constant(key), "" if unit == "1" else unit


def card_text(card: Card) -> str:
    """One card in full, as text."""
    from pathcalc.substances import HAZARDS

    lines = [f"{card.name}, {card.formula}" + (f", CAS {card.cas}" if card.cas else "")]
    lines += [f"also called {', '.join(card.aliases)}"] if card.aliases else []
    lines += ["", "Hazards (a reminder, not a safety data sheet)"]
    lines += [f"  {word}: {HAZARDS[word]}" for word in card.hazards] or ["  none noted on the card"]
    lines += ["", "Constants"]
    for key, meaning, constant, unit in _constants(card):
        spread = f" ± {constant.u:g} (standard uncertainty)" if constant.u is not None else ""
        note = f"; {constant.note}" if constant.note else ""
        value = f"{constant.value!r} {unit}".rstrip()
        lines.append(f"  {key:<10} {value}{spread}   {meaning} [{constant.source}]{note}")
    lines += _further(card)
    lines += ["", "Ideal-gas heat capacity (the first is the default)"]
    for item in card.ideal_gas:
        lines += _correlation(item)
    lines += ["", "Equations"]
    for equation, lack in usable_equations(card).items():
        lines.append(f"  {equation}" + (f": cannot be used; {lack}" if lack else ""))
    lines += reference_text(card)
    lines += ["", *(f"Remark: {remark}" for remark in card.remarks), "Sources"]
    lines += [f"  [{key}] {text}" for key, text in card.sources.items()]
    return "\n".join(line for k, line in enumerate(lines) if line or lines[k - 1])


def _further(card: Card) -> list[str]:
    lines = []
    if card.van_der_waals is not None:
        item = card.van_der_waals
        lines.append(f"  van der Waals a = {item.a!r} Pa m6/mol2, b = {item.b!r} m3/mol [{item.source}]")
    for key in ("B", "C"):
        part = getattr(card.virial, key, None)
        if part is not None:
            sum_ = " + ".join(f"{term.coefficient!r} T^{term.exponent:g}" for term in part.powers)
            unit = "m3/mol" if key == "B" else "m6/mol2"
            lines.append(f"  virial {key} = {sum_} {unit}, {part.T_min:g} K to {part.T_max:g} K [{part.source}]")
    if card.volume_shift is not None:
        lines.append(f"  volume shift {card.volume_shift.value!r} m3/mol [{card.volume_shift.source}]")
    return lines


def _correlation(item: Any) -> list[str]:
    from pathcalc.cli.plain_maths import plain_maths
    from pathcalc.equations.ideal_gas_text import coefficients, formula

    lines = [f"  {item.name}: {item.T_min:g} K to {item.T_max:g} K [{item.source}]"]
    lines.append(f"    {plain_maths(formula(item))}, with R = {item.gas_constant!r} J/(mol K)")
    spans: dict[tuple[float, float], list[str]] = {}
    for row in coefficients(item):
        unit = "" if row.unit == "1" else f" {row.unit}"
        spans.setdefault((row.T_min, row.T_max), []).append(f"{plain_maths(row.symbol)} = {row.value!r}{unit}")
    for (low, high), texts in spans.items():
        lines.append(f"    {low:g} K to {high:g} K: {', '.join(texts)}")
    lines += [f"    uncertainty: {item.uncertainty}"] if item.uncertainty else []
    lines += [f"    note: {item.note}"] if item.note else []
    return lines


def card_as_dict(card: Card) -> dict[str, Any]:
    """One card as plain values: constants, correlations and which equations can be used."""
    from dataclasses import asdict

    return {
        "name": card.name,
        "formula": card.formula,
        "cas": card.cas,
        "aliases": list(card.aliases),
        "hazards": list(card.hazards),
        "remarks": list(card.remarks),
        "constants": {
            key: {"value": item.value, "unit": unit or "1", "u": item.u, "source": item.source, "note": item.note}
            for key, _, item, unit in _constants(card)
        },
        "van_der_waals": asdict(card.van_der_waals) if card.van_der_waals else None,
        "virial": asdict(card.virial) if card.virial else None,
        "volume_shift": asdict(card.volume_shift) if card.volume_shift else None,
        "ideal_gas": [asdict(item) for item in card.ideal_gas],
        "equations": _usable(card),
        "reference": reference_as_dict(card),
        "sources": dict(card.sources),
    }
