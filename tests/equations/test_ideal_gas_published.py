"""The ideal-gas heat capacity against printed tables, an independent library and quadrature."""

from __future__ import annotations

import csv
import math
from pathlib import Path
from typing import Any

import CoolProp.CoolProp as CP
import numpy as np
import pytest
import yaml
from scipy.integrate import quad

from pathcalc.equations import ideal_gas
from pathcalc.equations.contract import R_CODATA, T_STANDARD
from pathcalc.equations.ideal_gas import IdealGasHeatCapacity
from pathcalc.substances import names, read_card

REFERENCE = Path(__file__).parents[2] / "shared" / "reference"


def chosen(name: str, choice: str | None = None) -> IdealGasHeatCapacity:
    return ideal_gas.from_card(read_card(name), choice)


def inside(item: IdealGasHeatCapacity, count: int) -> np.ndarray:
    """Temperatures within the stated range, off the joints of piecewise forms."""
    return np.geomspace(item.T_min * 1.013, item.T_max * 0.987, count)


# --- printed tables: NIST-JANAF, 4th edition (shared/reference/janaf_ideal_gas.csv) ---

# substance, JANAF species, correlation, range compared (K), and the largest difference of c_p (relative),
# H - H(298.15 K) (kJ/mol) and S - S(298.15 K) (J/(mol K)), with what makes it that large. The table's own
# rounding (0.001 in each column) is part of it. The dates of the single tables are from memory.
SAME = "the same spectroscopic data; rounding of the table"
JANAF: list[tuple[str, str, str, float, float, float, float, float, str]] = [
    ("nitrogen", "N2", "span2000", 100, 2000, 1.5e-4, 0.003, 0.004, SAME),
    ("nitrogen", "N2", "nasa9", 200, 3000, 1.0e-4, 0.003, 0.003, SAME),
    ("oxygen", "O2", "stewart1991", 100, 2000, 8e-4, 0.025, 0.017, "newer levels than the table's"),
    ("oxygen", "O2", "nasa9", 200, 3000, 3.0e-3, 0.105, 0.054, "Gurvich 1989; the table is of 1977"),
    ("argon", "Ar", "tegeler1999", 100, 2000, 3e-5, 0.002, 0.002, "5/2 R with other values of R"),
    ("argon", "Ar", "nasa9", 200, 3000, 3e-5, 0.002, 0.002, "5/2 R with other values of R"),
    ("neon", "Ne", "thol2019neon", 100, 700, 3e-5, 0.002, 0.002, "5/2 R with other values of R"),
    ("neon", "Ne", "nasa9", 300, 3000, 3e-5, 0.002, 0.002, "5/2 R with other values of R"),
    ("helium", "He", "ortizvega2019", 100, 2000, 3e-5, 0.002, 0.002, "5/2 R with other values of R"),
    ("helium", "He", "nasa9", 300, 3000, 3e-5, 0.002, 0.002, "5/2 R with other values of R"),
    ("hydrogen", "H2", "leachman2009", 298, 1000, 1.0e-3, 0.010, 0.012,
     "fit of five terms; the table is of ortho and para in equilibrium, the card of a frozen mixture"),
    ("hydrogen", "H2", "nasa9", 298, 3000, 3.2e-4, 0.010, 0.006, SAME),
    ("carbon-monoxide", "CO", "lemmon2006", 100, 500, 1.5e-4, 0.002, 0.006, "fit of two terms"),
    ("carbon-monoxide", "CO", "nasa9", 200, 3000, 3.5e-4, 0.018, 0.012, "Gurvich 1979; the table is of 1965"),
    ("carbon-dioxide", "CO2", "span1996", 298, 2000, 7.5e-4, 0.010, 0.017, "a fit for use to 1100 K"),
    ("carbon-dioxide", "CO2", "nasa9", 200, 3000, 1.2e-3, 0.037, 0.011, "Gurvich 1991; the table is of 1965"),
    ("water", "H2O(g)", "wagner2002", 298, 2000, 1.0e-4, 0.002, 0.002, SAME),
    ("water", "H2O(g)", "nasa9", 200, 1000, 6e-4, 0.004, 0.005, "Woolley 1987; the table is of 1979"),
    ("methane", "CH4", "setzmann1991", 100, 600, 5.2e-3, 0.046, 0.095,
     "the table is of a rigid rotator and harmonic oscillator (from memory); anharmonicity grows with T"),
    ("methane", "CH4", "nasa9", 200, 600, 9e-3, 0.062, 0.13, "anharmonicity of Gurvich 1991, as above"),
    ("ammonia", "NH3", "gao2023", 200, 700, 5.8e-3, 0.065, 0.12, "fit of three terms"),
    ("ammonia", "NH3", "nasa9", 200, 1000, 4.5e-3, 0.07, 0.10, "Gurvich 1989; the table is of 1977"),
]  # fmt: skip


def janaf(species: str) -> list[dict[str, float]]:
    lines = (REFERENCE / "janaf_ideal_gas.csv").read_text(encoding="utf-8").splitlines()
    rows = [row for row in csv.DictReader(x for x in lines if not x.startswith("#")) if row["species"] == species]
    return [{key: float(row[key]) for key in ("T", "Cp", "S", "H_minus_HTr")} for row in rows]


@pytest.mark.parametrize("case", JANAF, ids=lambda case: f"{case[0]}-{case[2]}")
def test_agrees_with_the_janaf_tables(
    case: tuple[str, str, str, float, float, float, float, float, str],
) -> None:
    name, species, choice, low, high, cp_tolerance, h_tolerance, s_tolerance, _why = case
    item = chosen(name, choice)
    rows = janaf(species)
    S_298 = next(row["S"] for row in rows if row["T"] == T_STANDARD)
    compared = [row for row in rows if low <= row["T"] <= high]
    assert len(compared) >= 5
    for row in compared:
        assert item.T_min <= row["T"] <= item.T_max
        cp, h, s = (float(x) for x in item.terms(np.float64(row["T"])))
        assert cp * R_CODATA == pytest.approx(row["Cp"], rel=cp_tolerance)
        assert h * R_CODATA / 1e3 == pytest.approx(row["H_minus_HTr"], abs=h_tolerance)
        assert s * R_CODATA == pytest.approx(row["S"] - S_298, abs=s_tolerance)


# --- an independent library ---


def library_state(name: str) -> CP.AbstractState:
    """The fluid as a gas in the library of I. H. Bell et al., Ind. Eng. Chem. Res. 53 (2014) 2498."""
    fluid = {"parahydrogen": "ParaHydrogen", "air": "Air"}.get(name) or str(read_card(name).cas)
    state = CP.AbstractState("HEOS", fluid)
    state.specify_phase(CP.iphase_gas)
    return state


def library_cp0(name: str, temperatures: np.ndarray) -> list[float]:
    state = library_state(name)
    values = []
    for T in temperatures:
        state.update(CP.DmolarT_INPUTS, 1e-10, float(T))
        values.append(state.cp0molar())
    return values


@pytest.mark.parametrize("name", names())
def test_the_default_heat_capacity_is_that_of_the_reference_equation(name: str) -> None:
    """c_p0 in J/(mol K): so the papers' own gas constants are in the right places too.

    For R-123 the library scales the polynomial's temperature by 456.831/456.82, two critical temperatures
    of the same fluid; that alone makes 1.5e-5. For ammonia it takes the gas constant of CODATA 2014, 8.3144598
    J/(mol K), where the check values of the paper need that of 2018.
    """
    item = chosen(name)
    T = inside(item, 9)
    tolerance = 2e-5 if name == "R-123" else 1e-9
    published = np.array(library_cp0(name, T)) * (8.314462618 / 8.3144598 if name == "ammonia" else 1.0)
    assert item.cp0_R(T) * R_CODATA == pytest.approx(published, rel=tolerance)


@pytest.mark.parametrize("name", ["water", "nitrogen", "air", "heptane", "R-134a", "fluorine"])
def test_integrals_are_those_of_the_reference_equation(name: str) -> None:
    """Differences of ideal-gas enthalpy and entropy; at 1e-10 mol/m3 the library's fluid is an ideal gas."""
    item = chosen(name)
    R = read_card(name).ideal_gas[0].gas_constant
    T = inside(item, 5)
    state = library_state(name)
    h, s = [], []
    for value in T:
        state.update(CP.DmolarT_INPUTS, 1e-10, float(value))
        h.append(state.hmolar())
        s.append(state.smolar() + R * math.log(value))  # at one pressure, not at one density
    terms = item.terms(T)
    assert np.diff(terms.h0_R) * R_CODATA == pytest.approx(np.diff(h), rel=1e-8)
    assert np.diff(terms.s0_R) * R_CODATA == pytest.approx(np.diff(s), rel=1e-8)


# --- the nine-constant polynomials against their report's own text ---

SPECIES = {"C4H10,n-butane": "butane", "Air": "air"}


def nasa9() -> list[Any]:
    return yaml.safe_load((REFERENCE / "nasa9_polynomials.yaml").read_text(encoding="utf-8"))["species"]


@pytest.mark.parametrize("species", nasa9(), ids=lambda species: species["name"])
def test_nine_constants_integrate_as_the_report_says(species: dict[str, Any]) -> None:
    """H/(RT) and S/R of NASA/TP-2002-211556, with its own constants of integration, from 298.15 K."""
    name = SPECIES.get(species["name"], species["name"])
    item = chosen(name, "nasa9")
    scale = 8.31451 / R_CODATA

    def printed(T: float) -> tuple[float, float, float]:
        part = next(r for r in species["ranges"] if r["Tmax"] >= T)
        a1, a2, a3, a4, a5, a6, a7 = part["a"]
        b1, b2 = part["b"]
        x = math.log(T)
        cp = a1 / T**2 + a2 / T + a3 + a4 * T + a5 * T**2 + a6 * T**3 + a7 * T**4
        h = T * (-a1 / T**2 + a2 * x / T + a3 + a4 * T / 2 + a5 * T**2 / 3 + a6 * T**3 / 4 + a7 * T**4 / 5 + b1 / T)
        s = -a1 / T**2 / 2 - a2 / T + a3 * x + a4 * T + a5 * T**2 / 2 + a6 * T**3 / 3 + a7 * T**4 / 4 + b2
        return cp, h, s

    _, h_298, s_298 = printed(T_STANDARD)
    # where the range begins at 300 K, ours holds c_p from there down to 298.15 K and the printed polynomial
    # does not: at most (1.85 K)2/2 times dc_p/dT, which is 0.031/K for butane
    held = 0.06 if item.T_min > T_STANDARD else 0.0
    for T in (301.0, 400.0, 650.0, 999.0, 1500.0, 3000.0, 5900.0):
        cp, h, s = printed(T)
        got = item.terms(np.float64(T))
        assert float(got.cp0_R) == pytest.approx(scale * cp, rel=1e-12)
        # the printed constants of integration join the ranges to their last digits only
        assert float(got.h0_R) == pytest.approx(scale * (h - h_298), rel=2e-6, abs=1e-3 + held)
        assert float(got.s0_R) == pytest.approx(scale * (s - s_298), abs=2e-5 + held / 298.0)


@pytest.mark.parametrize("name", ["nitrogen", "water", "methane", "air", "ethane"])
def test_nine_constants_integrate_as_quadrature_does(name: str) -> None:
    item = chosen(name, "nasa9")
    joints = [part.T_min for part in item.ranges]

    def cp(T: float) -> float:
        return float(item.cp0_R(np.float64(T)))

    for T in (220.0, 700.0, 1000.0, 1000.5, 4000.0):
        points = [p for p in joints if min(T, T_STANDARD) < p < max(T, T_STANDARD)] or None
        h, _ = quad(cp, T_STANDARD, T, points=points, epsabs=0.0, epsrel=1e-12)
        s, _ = quad(lambda T: cp(T) / T, T_STANDARD, T, points=points, epsabs=0.0, epsrel=1e-12)
        assert float(item.h0_R(np.float64(T))) == pytest.approx(h, rel=1e-10)
        assert float(item.s0_R(np.float64(T))) == pytest.approx(s, rel=1e-10)


def test_no_jump_at_the_joints() -> None:
    for name in ("nitrogen", "methane", "neon"):
        item = chosen(name, "nasa9")
        for joint in (item.T_min, 1000.0, item.T_max):
            T = np.array([np.nextafter(joint, 0.0), joint, np.nextafter(joint, 1e9)])
            cp, h, s = item.terms(T)
            assert np.ptp(h) <= 4.0 * cp.max() * np.spacing(joint) + 1e-12 * np.abs(h).max()
            assert np.ptp(s) <= 1e-13 * np.abs(s).max() + 1e-14
