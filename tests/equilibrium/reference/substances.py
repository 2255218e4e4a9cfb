"""Built-in reference equations, what the independent library calls them, and random states of each."""

from __future__ import annotations

import csv
from functools import cache
from pathlib import Path

import numpy as np

from pathcalc.equations.build import build_model
from pathcalc.equations.contract import Model
from pathcalc.equilibrium.saturation import saturation_at_T
from pathcalc.substances import names, read_card
from pathcalc.substances.reference_reader import reference_path

SHARED = Path(__file__).parents[3] / "shared" / "reference"

NAMES = [name for name in names() if reference_path(read_card(name)).is_file()]

ROTATION = 5
"""Every fifth substance is taken where a test is dear, another fifth in each test."""

LIBRARY = {
    "1-butene": "1-Butene", "butane": "n-Butane", "carbon-dioxide": "CarbonDioxide",
    "carbon-monoxide": "CarbonMonoxide", "carbonyl-sulfide": "CarbonylSulfide", "cyclohexane": "CycloHexane",
    "decane": "n-Decane", "dimethyl-ether": "DimethylEther", "heavy-water": "HeavyWater", "heptane": "n-Heptane",
    "hexane": "n-Hexane", "hydrogen-chloride": "HydrogenChloride", "hydrogen-sulfide": "HydrogenSulfide",
    "isobutane": "IsoButane", "isopentane": "Isopentane", "nitrous-oxide": "NitrousOxide", "nonane": "n-Nonane",
    "octane": "n-Octane", "parahydrogen": "ParaHydrogen", "pentane": "n-Pentane", "propane": "n-Propane",
    "sulfur-dioxide": "SulfurDioxide", "sulfur-hexafluoride": "SulfurHexafluoride", "R-152a": "R152A",
    "R-227ea": "R227EA",
}  # fmt: skip


def library_name(name: str) -> str:
    if name.startswith("R-") and name not in LIBRARY:
        return name.replace("R-", "R")
    return LIBRARY.get(name, name.capitalize())


def some(offset: int) -> list[str]:
    """A fifth of the substances."""
    return NAMES[offset % ROTATION :: ROTATION]


@cache
def model(name: str) -> Model:
    return build_model(read_card(name), "reference")


def seed(name: str) -> int:
    return sum(ord(letter) * k for k, letter in enumerate(name, 1))


def random_states(m: Model, n: int) -> tuple[np.ndarray, np.ndarray]:
    """T and p over the stated range: a quarter each over all T, below 1.5 T_c, next to and away from the dome.

    The last two lie on both sides of it, from a hundred-thousandth of the saturation pressure to a hundred times.
    States beyond the melting line are brought back to nine tenths of its pressure.
    """
    rng = np.random.default_rng(seed(m.name))
    valid, k = m.residual.reference.valid, n // 4
    low, high = m.T_limits[0], min(valid.T_max, m.T_limits[1])
    cold = 0.999 * m.residual.coexistence.T_top
    T = np.concatenate(
        [rng.uniform(low, high, k), rng.uniform(low, min(1.5 * m.T_c, high), k), rng.uniform(low, cold, n - 2 * k)]
    )
    p = np.exp(rng.uniform(np.log(1e3), np.log(valid.p_max), n))
    p_s = saturation_at_T(m, T[2 * k :]).p
    p[2 * k : 3 * k] = p_s[:k] * (1.0 - 10.0 ** rng.uniform(-5.0, -0.3, k))
    p[3 * k :] = np.minimum(p_s[k:] * (1.0 + 10.0 ** rng.uniform(-5.0, 2.0, n - 3 * k)), valid.p_max)
    melting = m.residual.limits.melting_pressure(T)
    return T, np.where(p > 0.99 * melting, 0.9 * melting, p)


def rows(file: str) -> list[dict[str, str]]:
    with (SHARED / file).open(encoding="utf-8") as lines:
        return list(csv.DictReader(line for line in lines if not line.startswith("#")))
