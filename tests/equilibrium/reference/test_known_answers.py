"""Answers known before the program: tables of IAPWS and NIST, fixed points, inversion temperatures."""

from __future__ import annotations

import numpy as np
import pytest
from substances import model, rows

from pathcalc.equations.properties import full
from pathcalc.equilibrium import reasons
from pathcalc.equilibrium.datum import with_datum
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.saturation import saturation_at_p, saturation_at_T
from pathcalc.equilibrium.states import state_properties

SHORT = {
    "Water": "water", "Nitrogen": "nitrogen", "Oxygen": "oxygen", "Argon": "argon", "CarbonDioxide": "carbon-dioxide",
    "Methane": "methane", "R134a": "R-134a", "Ammonia": "ammonia", "n-Propane": "propane", "Propane": "propane",
    "Helium": "helium", "Hydrogen": "hydrogen", "Ethane": "ethane", "CarbonMonoxide": "carbon-monoxide",
    "Neon": "neon", "Ethylene": "ethylene",
}  # fmt: skip
FIXED = [row for row in rows("fluid_constants.csv") if row["fluid"] in SHORT]


def digits(text: str) -> float:
    """One unit of the last digit printed."""
    mantissa, _, exponent = text.lower().partition("e")
    return 10.0 ** (int(exponent or 0) - len(mantissa.partition(".")[2]))


@pytest.mark.parametrize("row", rows("iapws95_table8.csv"), ids=lambda row: row["T"])
def test_saturation_of_water(row: dict[str, str]) -> None:
    """IAPWS R6-95 (2018), table 8: nine digits; its datum is u = s = 0 of the liquid at the triple point."""
    m = with_datum(model("water"), "triple-liquid")
    T = float(row["T"])
    sat = saturation_at_T(m, T)
    liquid, vapour = (state_properties(m, flash(m, {"T": T, "x": x})) for x in (0.0, 1.0))
    assert sat.p[0] == pytest.approx(1e6 * float(row["p"]), abs=1e6 * digits(row["p"]))
    for states, side in ((liquid, "liq"), (vapour, "vap")):
        assert m.M * states.rho[0] == pytest.approx(float(row[f"rho_{side}"]), abs=digits(row[f"rho_{side}"]))
        assert states.h[0] / m.M == pytest.approx(1e3 * float(row[f"h_{side}"]), abs=1e3 * digits(row[f"h_{side}"]))
        assert states.s[0] / m.M == pytest.approx(1e3 * float(row[f"s_{side}"]), abs=1e3 * digits(row[f"s_{side}"]))


@pytest.mark.parametrize("row", rows("iapws_saturation_1992.csv")[:2], ids=lambda row: row["T"])
def test_saturation_equations_of_water(row: dict[str, str]) -> None:
    """IAPWS SR1-86(1992), table 1: another set of equations, within 0.03 % (densities 0.01 %)."""
    m = model("water")
    sat = saturation_at_T(m, float(row["T"]))
    assert sat.p[0] == pytest.approx(1e6 * float(row["p"]), rel=3e-4)
    assert sat.dp_dT[0] == pytest.approx(1e6 * float(row["dpdT"]), rel=5e-4)
    assert m.M / sat.v_liquid[0] == pytest.approx(float(row["rho_liq"]), rel=1e-4)
    assert m.M / sat.v_vapour[0] == pytest.approx(float(row["rho_vap"]), rel=3e-4)
    latent = sat.dp_dT[0] * 1e-3 * sat.T[0] * (sat.v_vapour[0] - sat.v_liquid[0]) / m.M
    assert latent == pytest.approx(float(row["h_vap"]) - float(row["h_liq"]), rel=5e-4)


@pytest.mark.parametrize("row", FIXED, ids=lambda row: row["fluid"])
def test_fixed_points(row: dict[str, str]) -> None:
    """Normal boiling point, triple-point pressure and critical point (shared/reference/fluid_constants.csv)."""
    m = model(SHORT[row["fluid"]])
    if row["T_nbp"]:
        assert saturation_at_p(m, 101325.0).T[0] == pytest.approx(float(row["T_nbp"]), abs=2.0 * digits(row["T_nbp"]))
    triple = saturation_at_T(m, m.T_limits[0])
    if abs(m.T_limits[0] - float(row["T_triple"])) < 1e-9 and row["fluid"] not in ("CarbonMonoxide", "Oxygen"):
        assert triple.p[0] == pytest.approx(float(row["p_triple"]), rel=2e-3)
    # the equation's own critical point, within what the papers round and constrain
    assert m.T_c == pytest.approx(float(row["T_crit"]), rel=2e-4)
    assert m.p_c == pytest.approx(float(row["p_crit"]), rel=2e-3)
    if row["fluid"] != "Helium":  # the density in the file belongs to another equation of helium
        assert 1.0 / m.v_c == pytest.approx(float(row["rho_crit"]), rel=0.025)


@pytest.mark.parametrize(
    ("name", "latent", "source"),
    [
        ("water", 2256.5, "IAPWS R7-97, at 101.325 kPa: 2256.5 kJ/kg (from memory)"),
        ("nitrogen", 199.2, "Span et al. 2000, at the normal boiling point: 199.2 kJ/kg (from memory)"),
        ("oxygen", 213.1, "Schmidt and Wagner 1985: 213.1 kJ/kg (from memory)"),
        ("argon", 161.1, "Tegeler et al. 1999: 161.1 kJ/kg (from memory)"),
        ("methane", 510.8, "Setzmann and Wagner 1991: 510.8 kJ/kg (from memory)"),
        ("R-134a", 217.0, "Tillner-Roth and Baehr 1994: 217.0 kJ/kg (from memory)"),
    ],
)
def test_latent_heats(name: str, latent: float, source: str) -> None:
    m = model(name)
    h = [state_properties(m, flash(m, {"p": 101325.0, "x": x})).h[0] for x in (0.0, 1.0)]
    assert (h[1] - h[0]) / m.M / 1e3 == pytest.approx(latent, rel=1e-3), source


HYDROGEN = rows("webbook_hydrogen_saturation.csv")


@pytest.mark.parametrize("pressure", sorted({row["p"] for row in HYDROGEN}))
def test_saturated_hydrogen(pressure: str) -> None:
    """NIST Chemistry WebBook, equation of Leachman et al. (2009): five digits printed."""
    table = [row for row in HYDROGEN if row["p"] == pressure]
    m = with_datum(model("hydrogen"), "boiling-liquid")
    for row in table:
        x = 0.0 if row["phase"] == "liquid" else 1.0
        states = state_properties(m, flash(m, {"p": 101325.0 * float(row["p"]), "x": x}))
        assert states.T[0] == pytest.approx(float(row["T"]), abs=2e-3)
        assert m.M * states.rho[0] == pytest.approx(float(row["rho"]), rel=2e-4)
        assert states.h[0] == pytest.approx(1e3 * float(row["h"]), abs=0.5)
        assert states.s[0] == pytest.approx(float(row["s"]), abs=2e-2)
        v = states.points.v_liquid if x == 0.0 else states.points.v_vapour
        assert full(m, states.T, v).sound_speed[0] == pytest.approx(float(row["w"]), rel=5e-4)


GASES = {"N2": "nitrogen", "Ar": "argon", "O2": "oxygen", "CH4": "methane", "CO2": "carbon-dioxide", "H2": "hydrogen",
         "He": "helium", "Ne": "neon", "CO": "carbon-monoxide"}  # fmt: skip


INVERSIONS = rows("inversion_temperatures.csv")


def within(row: dict[str, str]) -> bool:
    """Whether the equation is used up to a little above the inversion temperature."""
    return float(row["T_inv_max_K"]) * 1.002 <= model(GASES[row["gas"]]).T_limits[1]


def test_inversion_temperatures_are_within_most_equations() -> None:
    assert sum(map(within, INVERSIONS)) >= len(INVERSIONS) - 1


@pytest.mark.parametrize("row", [row for row in INVERSIONS if within(row)], ids=lambda row: row["gas"])
def test_inversion_temperatures(row: dict[str, str]) -> None:
    """The Joule–Thomson coefficient of the thin gas changes sign there (recomputed values, see the file)."""
    m = model(GASES[row["gas"]])
    T = float(row["T_inv_max_K"])
    step = max(0.002 * T, 0.15)
    got = state_properties(m, flash(m, {"T": [T - step, T + step], "p": 100.0}))
    assert got.joule_thomson[0] > 0.0 > got.joule_thomson[1]


def test_water_is_densest_near_four_degrees() -> None:
    """Two temperatures have the pressure and volume of water at 2 °C; the densest state lies at 277.13 K (from memory:
    3.98 °C). Below it (T, s) has two states as well.
    """
    m = model("water")
    cold = state_properties(m, flash(m, {"T": 275.15, "p": 101325.0}))
    both = flash(m, {"p": cold.p, "v": cold.v})
    assert both.reason[0] == reasons.TWO_SOLUTIONS
    assert both.T[0] == pytest.approx(275.15, abs=1e-6)
    assert 278.5 < both.T_other[0] < 279.5
    T = np.linspace(274.0, 281.0, 141)
    v = flash(m, {"T": T, "p": 101325.0}).v
    assert T[np.argmin(v)] == pytest.approx(277.13, abs=0.06)


def test_enthalpy_at_given_temperature_has_two_states() -> None:
    """Compressed liquid: h falls with p, then rises; both states are told, and both are right."""
    m = model("nitrogen")
    want = state_properties(m, flash(m, {"T": 110.0, "p": 5e6}))
    got = flash(m, {"T": 110.0, "h": want.h})
    assert got.reason[0] == reasons.TWO_SOLUTIONS
    for p in (got.p[0], got.p_other[0]):
        again = state_properties(m, flash(m, {"T": 110.0, "p": p}))
        assert again.h[0] == pytest.approx(want.h[0], abs=1e-8 * m.R * 110.0)
    assert min(abs(got.p[0] / 5e6 - 1.0), abs(got.p_other[0] / 5e6 - 1.0)) < 1e-8
