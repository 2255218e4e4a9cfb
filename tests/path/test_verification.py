"""Published check values on the cards: computed again, and told apart from what does not agree."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from solving import solve

import pathcalc.substances.reference_reader as reader

CARDS = Path(reader.__file__).parent / "cards" / "reference"
WITH_VALUES = sorted(p.stem for p in CARDS.glob("*.yaml") if "\ncheck_values:" in p.read_text(encoding="utf-8"))


def verified(substance: str, equation: str = "reference"):
    fluid = f"substance: {substance}, equation: {equation}"
    return solve(fluid, "T: 400 K, p: 1 bar", "name: a, path: isobaric, to: {T: 420 K}").verified


def test_some_cards_have_them() -> None:
    assert {"water", "carbon-dioxide", "nitrogen", "ammonia"} <= set(WITH_VALUES)


@pytest.mark.parametrize("substance", WITH_VALUES)
def test_equation_gives_the_printed_digits(substance: str) -> None:
    """Each row names its publication; agreement is to the printed digits, one unit in the last place."""
    rows = verified(substance)
    assert rows
    for row in rows:
        assert row.agrees, row
        assert re.search(r"\d{4}|IAPWS", row.source), row
        printed = float(row.printed.split()[0])
        assert row.computed == pytest.approx(printed, rel=2e-3)


def test_what_differs_is_told(monkeypatch: pytest.MonkeyPatch) -> None:
    """A printed value with its fourth digit changed is no longer agreed with."""
    from dataclasses import replace

    import pathcalc.path.verification as verification

    original = reader.read_reference

    def spoiled(card):
        found = original(card)
        first = found.check_values[0]
        printed = {key: text.replace("0.09924", "0.09934") for key, text in first.printed.items()}
        assert printed != first.printed
        return replace(found, check_values=(replace(first, printed=printed),))

    monkeypatch.setattr(reader, "read_reference", spoiled)
    assert verification is not None
    rows = {row.quantity: row.agrees for row in verified("water")}
    assert rows["p"] is False
    assert rows["cv"] is True


def test_other_equations_have_none() -> None:
    assert verified("nitrogen", "peng-robinson") == ()
    assert verified("argon") == ()
