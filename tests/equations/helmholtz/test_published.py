"""The check tables of the papers, to every printed digit; sources in the headers of shared/reference."""

from __future__ import annotations

import math

import numpy as np
import pytest
import yaml
from fluids import SHARED, half_unit, model, reference, rows

from pathcalc.equations.helmholtz.residual import HelmholtzResidual
from pathcalc.equations.properties import full

ORDERS = {"phi": (0, 0), "phi_d": (0, 1), "phi_dd": (0, 2), "phi_t": (1, 0), "phi_tt": (2, 0), "phi_dt": (1, 1)}


def near(got: float, printed: str, *, last_digit: float = 1.0) -> None:
    """``got`` rounds to ``printed``, or to a neighbour ``last_digit`` - 1 half units away."""
    assert abs(got - float(printed)) <= half_unit(printed) * last_digit * (1 + 1e-7), (got, printed)


def at(name: str, T: float, rho: float):
    m = model(name)
    return m, full(m, np.array([T]), np.array([1.0 / rho]))


def solve_density(name: str, T: float, p: float, start: float) -> float:
    residual, rho = model(name).residual, start
    for _ in range(50):
        terms = residual.pressure(np.array([T]), np.array([1.0 / rho]))
        step = (terms.p[0] - p) / (-terms.p_v[0] / rho**2)
        rho -= step
        if abs(step) < 1e-13 * rho:
            return rho
    raise AssertionError("no density")


def test_coefficients_of_water_are_those_of_the_release() -> None:
    """IAPWS R6-95(2018), table 2, term for term."""
    release = yaml.safe_load((SHARED / "iapws95_coefficients.yaml").read_text(encoding="utf-8"))
    tables = {table.form: table.rows for table in reference("water").terms}
    printed = release["power_terms"]
    assert [(r["n"], r["d"], r["t"]) for r in printed if r["c"] == 0] == list(tables["power"])
    assert [(r["n"], r["d"], r["t"], r["c"], 1.0) for r in printed if r["c"]] == list(tables["exponential"])
    assert len(tables["gaussian"]) == 3
    assert len(tables["non-analytic"]) == 2


@pytest.mark.parametrize("row", rows("iapws95_table6.csv"), ids=lambda r: f"{r['T_K']}-{r['quantity']}")
def test_water_residual_part(row: dict[str, str]) -> None:
    T, rho = float(row["T_K"]), float(row["rho_kg_m3"])
    residual = model("water").residual
    i, j = ORDERS[row["quantity"]]
    scaled = residual.derivatives(T, rho / model("water").M, ((i, j),))[0]
    near(float(scaled) / (647.096 / T) ** i / (rho / 322.0) ** j, row["phir"])


def test_water_ideal_part() -> None:
    """IAPWS R6-95, table 6: φ0 and its derivatives, with the two constants of integration of the release."""
    m = model("water")
    printed = {(float(r["T_K"]), r["quantity"]): r["phi0"] for r in rows("iapws95_table6.csv")}
    release = yaml.safe_load((SHARED / "iapws95_coefficients.yaml").read_text(encoding="utf-8"))["ideal"]
    n1, n2, n3 = (term["n0"] for term in release[:3])

    def published(tau: float, delta: float) -> float:
        sums = sum(r["n0"] * math.log(1 - math.exp(-r["gamma0"] * tau)) for r in release[3:])
        return math.log(delta) + n1 + n2 * tau + n3 * math.log(tau) + sums

    def own(T: float, rho: float) -> tuple[float, float, float]:
        """φ0 = h0/RT − 1 − s0/R + ln(ρRT/p°) and its first two τ-derivatives, up to n1 + n2 τ."""
        cp, h, s = (float(x[0]) for x in m.ideal.terms(np.array([T])))
        tau = 647.096 / T
        return h / T - 1 - s + math.log(rho / m.M * m.R * T / 1e5), (h - T) / 647.096, -(cp - 1) / tau**2

    datum = [published(647.096 / T, rho / 322.0) - own(T, rho)[0] for T, rho in ((400.0, 1.0), (900.0, 1.0))]
    b = (datum[1] - datum[0]) / (647.096 / 900.0 - 647.096 / 400.0)
    a = datum[0] - b * 647.096 / 400.0
    for T, rho in ((500.0, 838.025), (647.0, 358.0)):
        tau = 647.096 / T
        phi, phi_t, phi_tt = own(T, rho)
        near(phi + a + b * tau, printed[T, "phi"], last_digit=1.1)
        near(phi_t + b, printed[T, "phi_t"])
        near(phi_tt, printed[T, "phi_tt"])


@pytest.mark.parametrize("row", rows("iapws95_table7.csv"), ids=lambda r: f"{r['T']}-{r['rho']}")
def test_water_single_phase(row: dict[str, str]) -> None:
    m, state = at("water", float(row["T"]), float(row["rho"]) / model("water").M)
    near(float(state.p[0]) / 1e6, row["p"])
    near(float(state.cv[0]) / m.M / 1e3, row["cv"])
    near(float(state.sound_speed[0]), row["w"])


def test_water_entropy_differences() -> None:
    """Table 7: the datum of s is the liquid at the triple point, so differences from the first row."""
    table = rows("iapws95_table7.csv")
    s = [float(at("water", float(r["T"]), float(r["rho"]) / model("water").M)[1].s[0]) for r in table]
    for value, row in zip(s, table, strict=True):
        got = (value - s[0]) / model("water").M / 1e3 + float(table[0]["s"])
        assert abs(got - float(row["s"])) <= half_unit(row["s"]) + half_unit(table[0]["s"]) + 1e-12


def test_water_virial_coefficients() -> None:
    """IAPWS G9-12 check values at 600 K: B and C."""
    printed = {r["quantity"]: r["value"] for r in rows("iapws95_low_temperature_and_virial.csv") if r["T_K"] == "600"}
    m = model("water")

    def coefficients(density: float) -> tuple[float, float]:
        """B and C, m3/kg and m6/kg2, but for terms of the order of the density."""
        d01, d02 = m.residual.derivatives(600.0, density / m.M, ((0, 1), (0, 2)))
        return (float(d01) - float(d02)) / density, float(d02) / density**2

    near(coefficients(1e-4)[0], printed["B"], last_digit=20.0)
    thin, dense = coefficients(1e-4)[1], coefficients(1e-3)[1]
    assert (10.0 * thin - dense) / 9.0 == pytest.approx(float(printed["C"]), rel=1e-8)


@pytest.mark.parametrize("row", rows("d2o_iapws_r16_table7.csv"), ids=lambda r: f"{r['T']}-{r['rho']}")
def test_heavy_water(row: dict[str, str]) -> None:
    _, state = at("heavy-water", float(row["T"]), 1e3 * float(row["rho"]))
    near(float(state.p[0]) / 1e6, row["p"])
    near(float(state.cv[0]), row["cv"])
    near(float(state.sound_speed[0]), row["w"])


def test_heavy_water_entropy_differences() -> None:
    table = rows("d2o_iapws_r16_table7.csv")
    s = [float(at("heavy-water", float(r["T"]), 1e3 * float(r["rho"]))[1].s[0]) for r in table]
    for value, row in zip(s, table, strict=True):
        allowed = half_unit(row["s"]) + half_unit(table[0]["s"]) + 1e-9
        assert abs(value - s[0] + float(table[0]["s"]) - float(row["s"])) <= allowed


GASES = {"CO2": "carbon-dioxide", "N2": "nitrogen", "CH4": "methane"}
PER_MASS = {"h": 1e3, "u": 1e3, "s": 1e3, "cp": 1e3, "cv": 1e3}


@pytest.mark.parametrize("row", rows("reference_eos_rows_pT.csv"), ids=lambda r: f"{r['fluid']}-{r['T']}-{r['p']}")
def test_rows_of_gases(row: dict[str, str]) -> None:
    """Density, heat capacities and sound speed at T and p; normal hydrogen as far as those values agree."""
    name = GASES.get(row["fluid"], "hydrogen")
    m, T, p = model(name), float(row["T"]), 1e6 * float(row["p"])
    molar = row["units"] == "molar"
    unit, scale = (1e3, 1.0) if molar else (1.0 / m.M, 1e3 * m.M)
    rho = solve_density(name, T, p, float(row["rho"]) * unit)
    state = at(name, T, rho)[1]
    got = {"rho": rho / unit, "cp": state.cp[0] / scale, "cv": state.cv[0] / scale, "w": state.sound_speed[0]}
    for key, value in got.items():
        if name == "hydrogen":
            assert float(value) == pytest.approx(float(row[key]), rel=5e-4)
        else:
            near(float(value), row[key])


@pytest.mark.parametrize("fluid", ["CO2", "N2"])
def test_differences_between_rows(fluid: str) -> None:
    table = [r for r in rows("reference_eos_rows_pT.csv") if r["fluid"] == fluid]
    name = GASES[fluid]
    m = model(name)
    molar = table[0]["units"] == "molar"
    found = []
    for row in table:
        T, p = float(row["T"]), 1e6 * float(row["p"])
        start = float(row["rho"]) * (1e3 if molar else 1.0 / m.M)
        state = at(name, T, solve_density(name, T, p, start))[1]
        scale = 1.0 if molar else 1e3 * m.M
        found.append({key: float(getattr(state, key)[0]) / scale for key in ("h", "u", "s")})
    for value, row in zip(found[1:], table[1:], strict=True):
        for key in ("h", "u", "s"):
            printed = float(row[key]) - float(table[0][key])
            allowed = half_unit(row[key]) + half_unit(table[0][key]) + 1e-12
            assert abs(value[key] - found[0][key] - printed) <= allowed, key


def test_r134a_states() -> None:
    """States of the equation as the NIST Chemistry WebBook prints them; u and s as differences."""
    table = [r for r in rows("r134a_states.csv") if r["phase"] != "critical"]
    m = model("R-134a")
    found = []
    for row in table:
        T, p = float(row["T"]), 1e6 * float(row["p"])
        rho = solve_density("R-134a", T, p, float(row["rho"]) / m.M)
        assert rho * m.M == pytest.approx(float(row["rho"]), rel=3e-8)
        state = at("R-134a", T, rho)[1]
        found.append((float(state.u[0]) / m.M / 1e3, float(state.s[0]) / m.M / 1e3))
    for (u, s), row in zip(found, table, strict=True):
        assert u - found[0][0] == pytest.approx(float(row["u"]) - float(table[0]["u"]), abs=2e-5)
        assert s - found[0][1] == pytest.approx(float(row["s"]) - float(table[0]["s"]), abs=2e-7)


@pytest.mark.parametrize("row", rows("r1234yf_check.csv"), ids=lambda r: f"{r['T']}-{r['rho']}")
def test_r1234yf(row: dict[str, str]) -> None:
    if float(row["rho"]) == 0.0:
        m = model("R-1234yf")
        state = full(m, np.array([float(row["T"])]), np.array([1e12]))
    else:
        _, state = at("R-1234yf", float(row["T"]), 1e3 * float(row["rho"]))
        near(float(state.p[0]) / 1e6, row["p"])
    near(float(state.cv[0]), row["cv"])
    near(float(state.cp[0]), row["cp"])
    near(float(state.sound_speed[0]), row["w"])


@pytest.mark.parametrize("row", rows("air_lemmon2000_tableA2.csv"), ids=lambda r: f"{r['T']}-{r['p']}")
def test_air(row: dict[str, str]) -> None:
    T, p = float(row["T"]), 1e6 * float(row["p"])
    rho = solve_density("air", T, p, 1e3 * float(row["rho"]))
    state = at("air", T, rho)[1]
    near(rho / 1e3, row["rho"])
    for key, value in (("cv", state.cv), ("cp", state.cp), ("w", state.sound_speed)):
        near(float(value[0]), row[key])


@pytest.mark.parametrize("row", rows("ammonia_gao2023_check.csv"), ids=lambda r: r["T"])
def test_ammonia(row: dict[str, str]) -> None:
    _, state = at("ammonia", float(row["T"]), 1e3 * float(row["rho"]))
    near(float(state.p[0]) / 1e6, row["p"])


def test_pseudo_pure_air_bubble_and_dew_pressures() -> None:
    """Table A1 of Lemmon et al. (2000), by the ancillary equations of the card."""
    from pathcalc.equations.helmholtz.ancillary import saturated

    for row in rows("air_lemmon2000_tableA1.csv"):
        for key, column in (("bubble_pressure", "p_bubble"), ("dew_pressure", "p_dew")):
            got = saturated(reference("air").ancillaries[key], np.array([float(row["T"])]))[0] / 1e6
            near(float(got), row[column], last_digit=1.01)


def test_a_term_that_is_wrong_would_be_seen() -> None:
    """The ninth digit of one coefficient of water moves a pressure of table 7 by more than its last digit."""
    from pathcalc.equations.helmholtz.exponential import ExponentialTerms

    good = model("water").residual
    assert isinstance(good, HelmholtzResidual)
    forms = list(good.forms)
    table = [list(row) for t in reference("water").terms if t.form == "exponential" for row in t.rows]
    table[0][0] += 1e-9
    forms[1] = ExponentialTerms(table)
    bad = HelmholtzResidual(good.T_r, good.rho_r, good.R, forms)
    T, v = np.array([500.0]), np.array([model("water").M / 838.025])
    assert abs(bad.pressure(T, v).p[0] - 10.0003858e6) > 0.1
    assert abs(good.pressure(T, v).p[0] - 10.0003858e6) < 0.05
