"""The reader is strict: what is wrong in a card is found, all of it, at its line and column."""

from __future__ import annotations

from pathlib import Path

import pytest

from pathcalc.errors import Finding, InvalidCaseError
from pathcalc.substances import Card, catalogue, names, read_card

GOOD = """\
substance: plant gas
formula: CH4 + N2
aliases: [PG-1]
hazards: [flammable, asphyxiant]
remarks: [made for a test]
x-owner: anything goes here
constants:
  molar_mass: {value: 0.0185, unit: kg/mol, source: lab, u: 1e-5}
  T_c: {value: 180, unit: K, source: lab, note: estimated}
ideal_gas:
  - name: quadratic
    form: polynomial
    T_min: 250
    T_max: 600
    source: lab
    coefficients: [3.5, 1.0e-3, 2e-7]
  - {name: flat, form: constant, T_min: 250, T_max: 400, cp_over_R: 4, source: lab, uncertainty: 2 %}
van_der_waals: {a: 0.2, b: 4e-5, source: lab}
virial:
  B: {powers: [[1.0e-4, 0], [-0.03, -1]], T_min: 200, T_max: 500, source: lab}
volume_shift: {value: -2.0e-6, unit: m3/mol, source: lab}
sources:
  lab: Laboratory sheet 7 (2026)
"""


def card_of(text: str, tmp_path: Path) -> Card:
    path = tmp_path / "mine.yaml"
    path.write_text(text, encoding="utf-8")
    return read_card(path)


def findings_of(text: str, tmp_path: Path) -> list[Finding]:
    with pytest.raises(InvalidCaseError) as caught:
        card_of(text, tmp_path)
    for finding in caught.value.findings:
        assert finding.file == str(tmp_path / "mine.yaml")
    return caught.value.findings


def test_a_user_s_card_reads_in_full(tmp_path: Path) -> None:
    card = card_of(GOOD, tmp_path)
    assert card.name == "plant gas"
    assert card.cas is None
    assert card.molar_mass.value == 0.0185
    assert card.molar_mass.u == 1e-5
    assert card.T_c.note == "estimated"
    assert [item.name for item in card.ideal_gas] == ["quadratic", "flat"]
    assert card.correlation("flat").uncertainty == "2 %"
    assert [(p.coefficient, p.exponent) for p in card.ideal_gas[0].ranges[0].powers] == [
        (3.5, 0.0),
        (1e-3, 1.0),
        (2e-7, 2.0),
    ]
    assert card.van_der_waals is not None
    assert (card.van_der_waals.a, card.van_der_waals.b) == (0.2, 4e-5)
    assert card.virial is not None
    assert card.virial.B is not None
    assert card.virial.B.powers[1].exponent == -1.0
    assert card.virial.C is None
    assert card.volume_shift is not None
    assert card.volume_shift.value == -2e-6
    assert card.citation("lab") == "Laboratory sheet 7 (2026)"


def test_text_that_ends_like_a_file_is_a_path(tmp_path: Path) -> None:
    card_of(GOOD, tmp_path)
    assert read_card(str(tmp_path / "mine.yaml")).name == "plant gas"


def test_a_constant_that_is_not_given_says_what_to_add(tmp_path: Path) -> None:
    card = card_of(GOOD, tmp_path)
    assert not card.has("acentric")
    with pytest.raises(InvalidCaseError, match=r"gives no acentric.*unit: 1") as caught:
        _ = card.acentric
    finding = caught.value.findings[0]
    assert (finding.line, finding.column, finding.code) == (8, 3, "missing-constant")


def test_a_correlation_that_is_not_given_says_which_are(tmp_path: Path) -> None:
    with pytest.raises(InvalidCaseError, match="'cubic'; it has: quadratic, flat"):
        card_of(GOOD, tmp_path).correlation("cubic")


REJECTED = {
    # old text, new text, line, column, code, part of the message
    "misspelt key": ("formula: CH4", "formulla: CH4", 2, 1, "unknown-key", "did you mean 'formula'?"),
    "duplicate key": ("aliases: [PG-1]", "formula: twice", 3, 1, "duplicate-key", "first at 2:1"),
    "wrong unit": ("unit: kg/mol", "unit: g/mol", 8, 37, "wrong-unit", "in kg/mol on a card, not in 'g/mol'"),
    "quantity for a number": ("value: 180", "value: 180 K", 9, 16, "wrong-type", "plain number, not '180 K'"),
    "quoted number": ("value: 180", "value: '180'", 9, 16, "wrong-type", "plain number"),
    "not a number": ("value: 180", "value: .nan", 9, 16, "wrong-type", "plain number"),
    "infinite": ("value: 180", "value: 1e999", 9, 16, "bad-value", "finite"),
    "octal is no number": ("value: 180", "value: 0o17", 9, 16, "wrong-type", "plain number"),
    "negative": ("value: 180", "value: -180", 9, 16, "bad-value", "greater than 0"),
    "nothing": ("value: 180", "value: ~", 9, 16, "wrong-type", "not nothing"),
    "grams for kilograms": ("value: 0.0185", "value: 18.5", 8, 15, "bad-value", "molar_mass is in kg/mol"),
    "no molar mass": ("  molar_mass: {value: 0.0185, unit: kg/mol, source: lab, u: 1e-5}\n", "", 8, 3,
                      "missing-key", "`constants` has no 'molar_mass'"),
    "unknown hazard": ("[flammable,", "[inflammable,", 4, 11, "bad-value", "unknown hazard 'inflammable'"),
    "unknown form": ("form: polynomial", "form: spline", 12, 11, "bad-value", "unknown form 'spline'"),
    "no form": ("    form: polynomial\n", "", 11, 5, "missing-key", "`ideal_gas[1]` has no 'form'"),
    "range upside down": ("T_max: 600", "T_max: 200", 14, 12, "bad-value", "greater than 250"),
    "empty polynomial": ("[3.5, 1.0e-3, 2e-7]", "[]", 16, 19, "missing-key", "at least one coefficient"),
    "word in a list": ("[3.5, 1.0e-3,", "[3.5, abc,", 16, 25, "wrong-type", "`ideal_gas[1].coefficients[2]`"),
    "two of one name": ("name: flat", "name: quadratic", 17, 5, "duplicate-name", "'quadratic'"),
    "unknown source": ("source: lab, note", "source: book, note", 9, 38, "unknown-source", "'book'"),
    "unused source": ("sources:\n", "sources:\n  book: A book (2001)\n", 23, 9, "unused-source", "'book'"),
    "odd pair": ("[-0.03, -1]", "[-0.03]", 20, 29, "wrong-type", "a list of 2: coefficient, exponent"),
    "hazards as text": ("[flammable, asphyxiant]", "flammable", 4, 10, "wrong-type", "must be a list"),
    "constants as a list": ("van_der_waals: {a: 0.2, b: 4e-5, source: lab}", "van_der_waals: [0.2, 4e-5]", 18,
                            16, "wrong-type", "must be a mapping of keys, not a list"),
    "tag": ("formula: CH4 + N2", "formula: !!python/name:os.system CH4", 2, 10, "yaml-tag", "tag"),
}  # fmt: skip


@pytest.mark.parametrize("case", REJECTED.values(), ids=REJECTED)
def test_rejected(case: tuple[str, str, int, int, str, str], tmp_path: Path) -> None:
    old, new, line, column, code, message = case
    assert GOOD.count(old) == 1
    findings = findings_of(GOOD.replace(old, new), tmp_path)
    found = [(f.line, f.column, f.code) for f in findings]
    assert (line, column, code) in found, "\n".join(map(str, findings))
    assert any(message in f.message for f in findings if f.code == code)


def test_all_findings_come_in_one_run(tmp_path: Path) -> None:
    text = GOOD.replace("unit: K", "unit: degC").replace("form: constant", "form: flat").replace("a: 0.2", "a: big")
    findings = findings_of(text, tmp_path)
    assert [f.code for f in findings] == ["wrong-unit", "bad-value", "wrong-type"]
    assert [f.line for f in findings] == sorted(f.line for f in findings)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("T_min: 700", "T_min: 800", "must begin where the one before ends, at 700 K"),
        ("T_max: 2000, source", "T_max: 1900, source", "the ends of the ranges, 250 and 2000 K"),
        ("0, 0, 3.5, 1e-4, 0, 0, 0]", "0, 0, 3.5]", "a list of 7: a1, a2, a3, a4, a5, a6, a7"),
    ],
)
def test_piecewise_ranges_must_fit(old: str, new: str, message: str, tmp_path: Path) -> None:
    ranges = """\
  - {name: pieces, form: nasa9, T_min: 250, T_max: 2000, source: lab, ranges: [
      {T_min: 250, T_max: 700, a: [0, 0, 3.5, 1e-4, 0, 0, 0]},
      {T_min: 700, T_max: 2000, a: [0, 0, 3.57, 0, 0, 0, 0]}]}
van_der_waals"""
    good = GOOD.replace("van_der_waals", ranges)
    assert [part.T_max for part in card_of(good, tmp_path).correlation("pieces").ranges] == [700.0, 2000.0]
    assert good.count(old) == 1
    assert any(message in f.message for f in findings_of(good.replace(old, new), tmp_path))


@pytest.mark.parametrize(
    ("terms", "message"),
    [
        ("einstein: [[1, -500]]", "theta must be greater than 0 K"),
        ("shifted: [[1, 500, -2]]", "the shift must be at least -1 and not 0"),
        ("note: none", "this correlation has no terms"),
        ("constant: 4, gas_constant: 1.987", "gas_constant is the molar one in J/(mol K)"),
    ],
)
def test_energy_levels_must_be_possible(terms: str, message: str, tmp_path: Path) -> None:
    common = "name: levels, form: planck-einstein, T_min: 250, T_max: 700, source: lab"
    item = f"  - {{{common}, {terms}}}\nvan_der_waals"
    findings = findings_of(GOOD.replace("van_der_waals", item), tmp_path)
    assert [f.line for f in findings] == [18]
    assert message in findings[0].message


def test_impossible_order_of_constants(tmp_path: Path) -> None:
    triple = "  T_triple: {value: 190, unit: K, source: lab}\nideal_gas"
    findings = findings_of(GOOD.replace("ideal_gas", triple, 1), tmp_path)
    assert "T_triple (190) must be below T_c (180)" in findings[0].message


@pytest.mark.parametrize(("data", "code"), [(b"", "empty-file"), (b"\xff\xfe\x00", "encoding"), (b"[1]", "wrong-type")])
def test_files_that_are_no_cards(data: bytes, code: str, tmp_path: Path) -> None:
    path = tmp_path / "mine.yaml"
    path.write_bytes(data)
    with pytest.raises(InvalidCaseError) as caught:
        read_card(path)
    assert [f.code for f in caught.value.findings] == [code]


def test_a_file_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(InvalidCaseError, match="cannot read the card: No such file"):
        read_card(tmp_path / "none.yaml")


def test_only_the_card_asked_for_is_read(monkeypatch: pytest.MonkeyPatch) -> None:
    opened: list[str] = []
    original = Path.read_bytes

    def spy(self: Path) -> bytes:
        opened.append(self.name)
        return original(self)

    monkeypatch.setattr(Path, "read_bytes", spy)
    from pathcalc.substances import reader

    reader._read_built_in.cache_clear()
    assert read_card("R744").name == "carbon-dioxide"
    assert opened == ["carbon-dioxide.yaml"]


def test_every_card_in_the_package_is_its_own_file() -> None:
    for name in names():
        assert Path(read_card(name).file) == catalogue.CARDS / f"{catalogue.file_stem(name)}.yaml"
