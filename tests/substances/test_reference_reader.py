"""Cards of reference equations are read strictly: every finding, at its line and column."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

from pathcalc.equations.build import build_model
from pathcalc.errors import Finding, InvalidCaseError
from pathcalc.substances import Card, names, read_card
from pathcalc.substances.catalogue import CARDS
from pathcalc.substances.reference import TERM_COLUMNS, Reference
from pathcalc.substances.reference_reader import read_reference, reference_path

SUBSTANCE = """\
substance: plant gas
formula: CH4
hazards: [flammable]
constants:
  molar_mass: {value: 0.016, unit: kg/mol, source: lab}
ideal_gas:
  - {name: flat, form: constant, T_min: 100, T_max: 700, cp_over_R: 4, source: lab}
sources: {lab: Laboratory sheet 7 (2026)}
"""

GOOD = """\
reference: plant gas
title: Our own (2026)
source: lab
why: there is no other
gas_constant: 8.314462618
molar_mass: 0.016
reducing: {T: 190, rho: 10000}
critical: {T: 190, p: 4.6e6, rho: 10000}
summit: {T: 190.1, p: 4.61e6, rho: 10010}
triple: {T: 90, p: 12000, rho: 28000}
valid: {T_min: 90, T_max: 600, p_max: 1e8, rho_max: 30000}
limits: {T_min: 90, T_max: 900, p_max: 2e8, source: tried no further}
uncertainty:
  - {of: density, where: gas, value: 0.1 %}
ideal_gas: flat
terms:
  - form: power
    rows:
      - [0.5, 1, 0.25]
      - [-1.6, 1, 1.25]
  - form: exponential
    rows:
      - [-0.1, 2, 2, 1]
      - [0.05, 3, 3, 2, 1.01]
  - {form: gaussian, rows: [[-0.01, 1, 1, 20, 150, 1.2, 1]]}
ancillaries:
  vapour_pressure: {form: exponential-over-T, T_r: 190, value_r: 4.6e6, T_min: 90, T_max: 190, source: lab,
                    rows: [[-6, 1]]}
melting:
  - {form: simon, T_0: 90, p_0: 12000, T_min: 90, T_max: 300, source: lab, rows: [[2e8, 1.85]]}
sources: {lab: Laboratory sheet 8 (2026)}
"""


def write(text: str, tmp_path: Path, substance: str = SUBSTANCE) -> Card:
    (tmp_path / "reference").mkdir()
    (tmp_path / "mine.yaml").write_text(substance, encoding="utf-8")
    (tmp_path / "reference" / "mine.yaml").write_text(text, encoding="utf-8")
    return read_card(tmp_path / "mine.yaml")


def findings_of(text: str, tmp_path: Path) -> list[Finding]:
    with pytest.raises(InvalidCaseError) as caught:
        read_reference(write(text, tmp_path))
    return caught.value.findings


def test_users_own_equation(tmp_path: Path) -> None:
    card = write(GOOD, tmp_path)
    found = read_reference(card)
    assert [(t.form, len(t.rows)) for t in found.terms] == [("power", 2), ("exponential", 2), ("gaussian", 1)]
    assert found.terms[1].rows == ((-0.1, 2, 2, 1, 1.0), (0.05, 3, 3, 2, 1.01))
    assert found.uncertainty[0].of == "density"
    assert found.melting[0].rows == ((2e8, 1.85),)
    m = build_model(card, "reference")
    assert (m.T_c, m.p_c, m.p_max, m.T_triple) == (190.1, 4.61e6, 1e8, 90.0)
    assert m.T_range == (100.0, 600.0)  # the heat capacity begins at 100 K
    assert m.T_limits == (90.0, 900.0)
    assert m.info is not None
    assert m.info.uncertainty == ("density, gas: 0.1 %",)
    assert m.info.source == "Laboratory sheet 8 (2026)"
    assert float(m.residual.pressure(np.array([300.0]), np.array([1e3])).p[0]) == pytest.approx(
        8.314462618 * 0.3, rel=1e-4
    )


@pytest.mark.parametrize(
    ("old", "new", "line", "column", "code"),
    [
        ("reference: plant gas", "reference: other gas", 1, 12, "bad-value"),
        ("title: Our own (2026)\n", "", 1, 1, "missing-key"),
        ("why: there", "wy: there", 4, 1, "unknown-key"),
        ("source: lab\n", "source: bal\n", 3, 9, "unknown-source"),
        ("gas_constant: 8.314462618", "gas_constant: 518.3", 5, 15, "bad-value"),
        ("molar_mass: 0.016\n", "molar_mass: 0.0161\n", 6, 13, "bad-value"),
        ("T: 190, rho: 10000}\ncritical", "T: .nan, rho: 10000}\ncritical", 7, 15, "wrong-type"),
        ("p: 4.6e6, rho: 10000}", "p: 4.6e6, rho: 10}", 8, 11, "bad-value"),
        ("triple: {T: 90", "triple: {T: 200", 10, 13, "bad-value"),
        ("T_max: 600", "T_max: 60", 11, 27, "bad-value"),
        ("p_max: 2e8, source", "p_max: two, source", 12, 40, "wrong-type"),
        ("of: density", "of: colour", 14, 10, "bad-value"),
        ("ideal_gas: flat", "ideal_gas: round", 15, 12, "unknown-correlation"),
        ("form: power", "form: powers", 17, 11, "bad-value"),
        ("[0.5, 1, 0.25]", "[0.5, 1]", 19, 9, "wrong-type"),
        ("[0.5, 1, 0.25]", "[0.5, -1, 0.25]", 19, 15, "bad-value"),
        ("[0.5, 1, 0.25]", "[0.5, 0, 0.25]", 17, 3, "bad-value"),
        ("[-0.1, 2, 2, 1]", "[-0.1, 2, 2, 0]", 23, 22, "bad-value"),
        ("[-0.1, 2, 2, 1]", "[-0.1, 2, 2]", 23, 9, "wrong-type"),
        ("form: exponential-over-T", "form: sine", 27, 27, "bad-value"),
        ("vapour_pressure:", "vapor_pressure:", 27, 3, "unknown-key"),
        ("form: simon", "form: simone", 30, 12, "bad-value"),
        ("lab: Laboratory", "x: unused, lab: Laboratory", 31, 14, "unused-source"),
    ],
)  # fmt: skip
def test_what_is_wrong_is_found(old: str, new: str, line: int, column: int, code: str, tmp_path: Path) -> None:
    assert old in GOOD
    found = findings_of(GOOD.replace(old, new, 1), tmp_path)
    assert (line, column, code) in [(f.line, f.column, f.code) for f in found], [str(f) for f in found]
    assert all(f.file == str(tmp_path / "reference" / "mine.yaml") for f in found)


def test_all_findings_in_one_run(tmp_path: Path) -> None:
    text = (
        GOOD.replace("of: density", "of: colour").replace("form: simon", "form: simone").replace("0.5, 1,", "0.5, x,")
    )
    assert [f.line for f in findings_of(text, tmp_path)] == [14, 19, 30]


@pytest.mark.parametrize("text", ["", "# nothing\n", "[1, 2]\n", "a: [\n", "a: 1\na: 2\n"])
def test_what_is_no_card(text: str, tmp_path: Path) -> None:
    assert findings_of(text, tmp_path)


def test_a_substance_without_an_equation(tmp_path: Path) -> None:
    (tmp_path / "mine.yaml").write_text(SUBSTANCE, encoding="utf-8")
    with pytest.raises(InvalidCaseError, match="choose another equation") as caught:
        build_model(read_card(tmp_path / "mine.yaml"), "reference")
    assert caught.value.findings[0].code == "no-reference-equation"


def built_in() -> list[Reference]:
    cards = [read_card(name) for name in names()]
    return [read_reference(card) for card in cards if reference_path(card).is_file()]


def test_built_in_cards_are_complete() -> None:
    found = built_in()
    assert len(found) >= 40
    assert {path.stem for path in (CARDS / "reference").glob("*.yaml")} <= {Path(r.file).stem for r in found}
    for item in found:
        assert item.uncertainty
        assert len(item.why) > 20
        assert "(" in item.title
        assert item.triple.rho <= item.valid.rho_max * (1 + 1e-9), item.substance
        assert item.limits.T_max >= item.valid.T_max, item.substance
        assert item.limits.p_max >= item.valid.p_max, item.substance
        assert {"liquid_density", "vapour_density"} <= set(item.ancillaries)
        assert {table.form for table in item.terms} <= set(TERM_COLUMNS)


def test_ideal_part_is_the_papers_own() -> None:
    """The first correlation of a card is the ideal part of its equation, and covers the stated range."""
    for item in built_in():
        card = read_card(item.substance)
        first = card.ideal_gas[0]
        assert first.name == item.ideal_gas
        assert first.T_max >= item.valid.T_max - 1e-9, item.substance
        assert first.T_min <= item.valid.T_min + 1e-9, item.substance
        assert first.gas_constant == pytest.approx(item.gas_constant, rel=1e-9), item.substance


def test_only_the_card_asked_for_is_read() -> None:
    """Opened files, as the interpreter's audit hook tells: one card of a substance, one of its equation."""
    code = (
        "import sys; seen = []\n"
        "sys.addaudithook(lambda e, a: seen.append(str(a[0])) if e == 'open' else None)\n"
        "from pathcalc.substances import read_card\n"
        "from pathcalc.equations.build import build_model\n"
        "card = read_card('nitrogen')\n"
        "assert not [s for s in seen if '/reference/' in s.replace(chr(92), '/')]\n"
        "build_model(card, 'reference')\n"
        "print(*sorted({s for s in seen if s.endswith('.yaml')}), sep=chr(10))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    opened = [Path(line) for line in done.stdout.split("\n") if line]
    assert {(p.parent.name, p.name) for p in opened} == {
        ("cards", "index.yaml"),
        ("cards", "nitrogen.yaml"),
        ("reference", "nitrogen.yaml"),
    }
