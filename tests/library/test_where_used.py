"""Which cases lean on what."""

from __future__ import annotations

from pathlib import Path

from library_cases import GAS, INVALID, ROOT, Here, as_json, library


def test_bases_cards_and_substances(tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=GAS, b=GAS.replace("substance: air", "substance: N2"), bad=INVALID)
    (tmp_path / "shared" / "plant.yaml").write_text("include: site.yaml\nfluid: {substance: argon}\n")
    (tmp_path / "shared" / "gas.yaml").write_text("substance: x\n")
    via = GAS.replace("shared/site.yaml", "[shared/plant.yaml, ../outside.yaml]")
    (tmp_path / "via.yaml").write_text(via.replace("substance: air, ", ""))
    (tmp_path / "own.yaml").write_text(GAS.replace("substance: air", "card: shared/gas.yaml"))
    found = as_json(here("where-used", ".", "--format", "json", cwd=tmp_path, code=0))
    assert found == [
        {"kind": "basis", "name": "shared/plant.yaml", "cases": ["via.yaml"]},
        {
            "kind": "basis",
            "name": "shared/site.yaml",
            "cases": ["a.yaml", "b.yaml", "bad.yaml", "own.yaml", "via.yaml"],
        },
        {"kind": "card", "name": "shared/gas.yaml", "cases": ["own.yaml"]},
        {"kind": "substance", "name": "air", "cases": ["a.yaml", "bad.yaml"]},
        {"kind": "substance", "name": "argon", "cases": ["via.yaml"]},
        {"kind": "substance", "name": "nitrogen", "cases": ["b.yaml"]},
    ]
    done = here("where-used", ".", "nitrogen", "shared/plant.yaml", cwd=tmp_path, code=0)
    assert done.stdout == "substance nitrogen (1)\n  b.yaml\nbasis shared/plant.yaml (1)\n  via.yaml\n"
    assert "no case below . leans on helium" in here("where-used", ".", "helium", cwd=tmp_path, code=0).stderr
    assert "nobody is no file" in here("where-used", ".", "nobody", cwd=tmp_path, code=2).stderr


def test_the_examples_lean_on_one_site(here: Here) -> None:
    (use,) = as_json(here("where-used", "cases", "shared/site.yaml", "--format", "json", cwd=ROOT, code=0))
    assert len(use["cases"]) == len(list((ROOT / "cases").glob("*.yaml")))
