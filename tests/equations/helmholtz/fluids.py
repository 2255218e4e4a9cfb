"""Built-in reference equations, and the names the independent library knows them by."""

from __future__ import annotations

import csv
from functools import cache
from pathlib import Path

from pathcalc.equations.build import build_model
from pathcalc.equations.contract import Model
from pathcalc.substances import names, read_card
from pathcalc.substances.reference import Reference
from pathcalc.substances.reference_reader import read_reference, reference_path

SHARED = Path(__file__).parents[3] / "shared" / "reference"

LIBRARY = {
    "1-butene": "1-Butene", "R-1233zd(E)": "R1233zd(E)", "R-1234ze(E)": "R1234ze(E)", "acetone": "Acetone",
    "butane": "n-Butane", "carbon-dioxide": "CarbonDioxide", "carbon-monoxide": "CarbonMonoxide",
    "carbonyl-sulfide": "CarbonylSulfide", "cyclohexane": "CycloHexane", "decane": "n-Decane",
    "dimethyl-ether": "DimethylEther", "heavy-water": "HeavyWater", "heptane": "n-Heptane", "hexane": "n-Hexane",
    "hydrogen-chloride": "HydrogenChloride", "hydrogen-sulfide": "HydrogenSulfide", "isobutane": "IsoButane",
    "isopentane": "Isopentane", "nitrous-oxide": "NitrousOxide", "nonane": "n-Nonane", "octane": "n-Octane",
    "parahydrogen": "ParaHydrogen", "pentane": "n-Pentane", "propane": "n-Propane",
    "sulfur-dioxide": "SulfurDioxide", "sulfur-hexafluoride": "SulfurHexafluoride",
    "R-152a": "R152A", "R-227ea": "R227EA",
}  # fmt: skip

NAMES = [name for name in names() if reference_path(read_card(name)).is_file()]


def library_name(name: str) -> str:
    if name.startswith("R-") and name not in LIBRARY:
        return name.replace("R-", "R")
    return LIBRARY.get(name, name.capitalize())


@cache
def model(name: str) -> Model:
    return build_model(read_card(name), "reference")


def reference(name: str) -> Reference:
    return read_reference(read_card(name))


def rows(file: str) -> list[dict[str, str]]:
    with (SHARED / file).open(encoding="utf-8") as lines:
        return list(csv.DictReader(line for line in lines if not line.startswith("#")))


def half_unit(text: str) -> float:
    """Half a unit of the last digit of a printed number."""
    mantissa, _, exponent = text.lower().partition("e")
    decimals = len(mantissa.partition(".")[2])
    return 0.5 * 10.0 ** (int(exponent or 0) - decimals)
