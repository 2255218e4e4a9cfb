"""Names: every spelling finds its card, the index is in step, unknown names get the nearest known ones."""

from __future__ import annotations

import importlib.metadata
from collections.abc import Iterator
from pathlib import Path

import pytest

from pathcalc.errors import InvalidCaseError
from pathcalc.substances import UnknownSubstance, aliases, catalogue, names, read_card, resolve


@pytest.mark.parametrize(
    ("spelling", "name"),
    [
        ("nitrogen", "nitrogen"),
        ("NITROGEN", "nitrogen"),
        ("N2", "nitrogen"),
        ("R744", "carbon-dioxide"),
        ("carbon dioxide", "carbon-dioxide"),
        ("CO", "carbon-monoxide"),
        ("R134a", "R-134a"),
        ("r-134A", "R-134a"),
        ("R1234ze(E)", "R-1234ze(E)"),
        ("n-butane", "butane"),
        ("iC4", "isobutane"),
        ("p-H2", "parahydrogen"),
        ("steam", "water"),
        ("hydrogen sulphide", "hydrogen-sulfide"),
        ("dry air", "air"),
    ],
)
def test_spellings(spelling: str, name: str) -> None:
    assert resolve(spelling) == name
    assert read_card(spelling).name == name


def test_an_unknown_name_brings_the_nearest() -> None:
    with pytest.raises(UnknownSubstance, match=r"^no substance is called 'nitrogne'; did you mean nitrogen") as caught:
        resolve("nitrogne")
    assert caught.value.nearest[0] == "nitrogen"
    assert caught.value.findings[0].code == "unknown-substance"
    assert isinstance(caught.value, InvalidCaseError)


def test_a_name_like_nothing_brings_no_guess() -> None:
    with pytest.raises(UnknownSubstance) as caught:
        resolve("☃☃☃")
    assert caught.value.nearest == ()


def test_the_empty_name_is_unknown() -> None:
    with pytest.raises(UnknownSubstance):
        resolve("")


def test_no_two_substances_share_a_spelling() -> None:
    owner: dict[str, str] = {}
    for name in names():
        for spelling in (name, *aliases(name)):
            key = catalogue.key_of(spelling)
            assert key, spelling
            assert owner.setdefault(key, name) == name, f"{spelling!r} of {name} and {owner[key]}"


def test_the_index_agrees_with_the_cards() -> None:
    files = {path.stem for path in catalogue.CARDS.glob("*.yaml")} - {"index"}
    assert files == {catalogue.file_stem(name) for name in names()}
    for name in names():
        card = read_card(name)
        assert card.name == name
        assert card.aliases == aliases(name)


@pytest.fixture
def fresh_tables() -> Iterator[None]:
    tables = (
        catalogue._index,
        catalogue._spellings,
        catalogue._foreign,
        catalogue._foreign_spellings,
    )
    for table in tables:
        table.cache_clear()
    yield
    for table in tables:
        table.cache_clear()


MINE = """\
substance: plant gas
aliases: [PG-1]
formula: mixture
hazards: []
constants:
  molar_mass: {value: 0.03, unit: kg/mol, source: lab}
ideal_gas:
  - {name: lab, form: constant, T_min: 250, T_max: 400, cp_over_R: 4, source: lab}
sources: {lab: Laboratory sheet 7 (2026)}
"""


def test_another_package_may_bring_cards(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, fresh_tables: None) -> None:
    (tmp_path / "plant-gas.yaml").write_text(MINE, encoding="utf-8")

    class Point:
        name = "plant"

        def load(self) -> Path:
            return tmp_path

    def points(group: str) -> list[Point]:
        assert group == "pathcalc.substances"
        return [Point()]

    monkeypatch.setattr(importlib.metadata, "entry_points", points)
    assert "plant gas" in names()
    assert resolve("pg1") == "plant gas"
    assert read_card("Plant Gas").molar_mass.value == 0.03
    assert read_card("N2").name == "nitrogen"


def test_a_new_card_needs_no_entry_in_the_index(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, fresh_tables: None
) -> None:
    (tmp_path / "index.yaml").write_text("{}\n", encoding="utf-8")
    (tmp_path / "plant-gas.yaml").write_text(MINE, encoding="utf-8")
    monkeypatch.setattr(catalogue, "CARDS", tmp_path)
    monkeypatch.setattr(catalogue, "INDEX", tmp_path / "index.yaml")
    assert read_card("PG-1").name == "plant gas"
