"""Printed worked examples with real gases; each test states what its tolerance is for.

Inputs and answers: shared/reference/textbook_examples.yaml, which cites the books. The books' own heat
capacities and critical constants stand in a card written for the test.
"""

import pytest
from solving import R, example, failed_checks, solve, write_card

EPSILON = 1e-3


def test_throttled_propane(tmp_path):
    """SVA-7.4: 385 K and 23.8 J/(mol K). The book uses Pitzer's B and takes state 2 for an ideal gas

    (385.8 K with its departure kept); this is Tsonopoulos's B with both departures: within 1 K and 0.3 %.
    The reference equation gives 384.54 K and 23.814 J/(mol K), as the file notes: within 0.1 K and 0.1 %.
    """
    item = example("SVA-7.4")
    given = item["input"]
    card = write_card(
        tmp_path,
        M=0.0441,
        T_c=given["Tc_K"],
        p_c=given["pc_bar"] * 1e5,
        omega=given["omega"],
        cp_over_R=str(given["cp_ig_over_R"]),
    )
    legs = "name: valve, path: throttling, to: {p: 1 bar}"
    solution = solve(f"{card}, equation: virial", "T: 400 K, p: 20 bar", legs, root=tmp_path)
    leg = solution.legs["valve"]
    assert solution.states["valve"]["T"] == pytest.approx(item["answer"]["T2_K"], abs=1.0)
    assert leg.delta.s * 0.0441 == pytest.approx(item["answer"]["delta_S_J_per_molK"], rel=3e-3)
    reference = item["recomputed"]["reference_equation"]
    assert solution.states["valve"]["T"] == pytest.approx(reference["T2_K"], abs=0.1)
    assert leg.delta.s * 0.0441 == pytest.approx(reference["delta_S_J_per_molK"], rel=1e-3)
    assert leg.entropy_generated == pytest.approx(leg.delta.s, rel=1e-12)
    assert failed_checks(solution) == []


def test_compressed_methane(tmp_path):
    """SVA-7.9: printed work 5289 J/mol; R here is 5.6e-5 larger than the book's."""
    item = example("SVA-7.9")
    card = write_card(tmp_path, M=0.01604, cp_over_R=str(item["input"]["cp_ig_over_R"]))
    solution = solve(
        f"{card}, equation: ideal-gas",
        "T: 293.15 K, p: 140 kPa",
        "name: a, path: adiabatic, to: {p: 560 kPa}, efficiency: 0.75",
        root=tmp_path,
    )
    work = solution.legs["a"].work * 0.01604
    assert work == pytest.approx(item["answer"]["W_actual_J_per_mol"], abs=1.0)
    assert work * 8.314 / R == pytest.approx(item["recomputed"]["W_actual_J_per_mol"], abs=0.01)
    assert solution.states["a"]["T"] == pytest.approx(item["recomputed"]["T2_actual_K"], abs=2e-3)


def test_propane_by_a_two_step_path(tmp_path):
    """AHU-10.3: 100 mol. Tsonopoulos's B against Pitzer's: 0.3 % of dH, dU and dS."""
    item = example("AHU-10.3")
    given = item["input"]
    factor = given["cal_J"] / R
    cp = str([factor * c for c in given["cp_ig_cal_per_molK"]])
    card = write_card(
        tmp_path,
        M=0.0441,
        T_c=given["Tc_K"],
        p_c=given["pc_bar"] * 1e5,
        omega=given["omega"],
        cp_over_R=cp,
    )
    solution = solve(
        f"{card}, equation: virial",
        "T: 600 K, p: 10 atm",
        "name: expand, path: isothermal, to: {p: 5 atm}",
        "name: cool, path: isobaric, to: {T: 300 K}",
        boundary="closed",
        more="amount: 100 mol\n",
        root=tmp_path,
    )
    delta = solution.totals.delta
    assert delta.h / 1e3 == pytest.approx(item["answer"]["dH_kJ"], rel=3e-3)
    assert delta.u / 1e3 == pytest.approx(item["answer"]["dU_kJ"], rel=3e-3)
    assert delta.s / 1e3 == pytest.approx(item["answer"]["dS_kJ_per_K"], rel=3e-3)
    assert failed_checks(solution) == []


def test_propane_expanding_against_a_pressure(tmp_path):
    """KOR-5.2: 10400 J/mol in, at equal end temperatures: dU 936 J/mol, W -9460 J/mol (printed to 3 digits).

    The constant outer pressure is the one that gives the printed work; dU is that of a van der Waals fluid
    at any temperature.
    """
    item = example("KOR-5.2")
    given, answer = item["input"], item["answer"]
    card = write_card(tmp_path, M=0.0441, T_c=given["Tc_K"], p_c=given["pc_Pa"])
    against = -answer["W_in_J_per_mol"] / (given["v2_m3_per_mol"] - given["v1_m3_per_mol"])
    solution = solve(
        f"{card}, equation: van-der-waals",
        "T: 400 K, v: 0.001 m3/mol",
        f"name: a, path: isothermal, to: {{v: 0.04 m3/mol}}, against: {against!r} Pa",
        boundary="closed",
        root=tmp_path,
    )
    leg = solution.legs["a"]
    assert leg.delta.u * 0.0441 == pytest.approx(answer["delta_U_J_per_mol"], abs=0.5)
    assert leg.work * 0.0441 == pytest.approx(answer["W_in_J_per_mol"], rel=1e-12)
    assert leg.heat * 0.0441 == pytest.approx(given["Q_in_J_per_mol"], abs=50.0)
    assert leg.entropy_generated > 0.0


def test_nitrogen_turbine():
    """MS-11.8, 11.9: charts of corresponding states, read to two or three digits; 2 % and 0.01 allowed.

    The reference equation differs from the printed figures by 1.4 %, 1.8 % and 0.3 %, as the file notes.
    """
    answer = example("MS-11.8-11.9")["answer"]
    fluid, start = "substance: nitrogen, equation: peng-robinson", "T: 300 K, p: 100 bar"
    ends = solve(fluid, start, "name: a, path: polytropic, to: {p: 40 bar, T: 245 K}")
    ideal = solve(fluid, start, "name: a, path: adiabatic, to: {p: 40 bar}")
    delta = ends.legs["a"].delta
    efficiency = delta.h / ideal.legs["a"].work
    assert -delta.h / 1e3 == pytest.approx(answer["work_out_kJ_per_kg"], rel=0.02)
    assert delta.s / 1e3 == pytest.approx(answer["entropy_production_kJ_per_kgK"], rel=0.03)
    assert efficiency == pytest.approx(answer["isentropic_efficiency"], abs=0.01)
    turbine = solve(fluid, start, f"name: a, path: adiabatic, to: {{p: 40 bar}}, efficiency: {efficiency!r}")
    assert turbine.states["a"]["T"] == pytest.approx(245.0, rel=1e-10)
    assert turbine.legs["a"].entropy_generated == pytest.approx(delta.s, rel=1e-9)


def test_steam_by_a_maxwell_relation(tmp_path):
    """MS-11.3: (ds/dv)_T = (dp/dT)_v = 1.0043 kJ/(m3 K) with Redlich-Kwong constants; printed to 5 digits.

    T_c and p_c of the card are those that give the printed a and b: a = Oa R^2 T_c^2.5/p_c, b = Ob R T_c/p_c,
    Oa and Ob exact.
    """
    item = example("MS-11.3")
    given = item["input"]
    a = given["RK"]["a_bar_m6_K05_per_kmol2"] * 1e5 / 1e6
    b = given["RK"]["b_m3_per_kmol"] / 1e3
    cube_root = 2.0 ** (1.0 / 3.0)
    Oa, Ob = 1.0 / (9.0 * (cube_root - 1.0)), (cube_root - 1.0) / 3.0
    T_c = (a * Ob / (b * Oa * R)) ** (2.0 / 3.0)
    card = write_card(tmp_path, M=given["M"] / 1e3, T_c=T_c, p_c=Ob * R * T_c / b)
    low, high = given["v_m3_per_kg"] - EPSILON, given["v_m3_per_kg"] + EPSILON
    solution = solve(
        f"{card}, equation: redlich-kwong",
        f"T: {given['T_K']} K, v: {low} m3/kg",
        f"name: a, path: isothermal, to: {{v: {high} m3/kg}}",
        boundary="closed",
        root=tmp_path,
    )
    slope = solution.legs["a"].delta.s / (2.0 * EPSILON) / 1e3
    assert slope == pytest.approx(item["answer"]["dsdv_kJ_per_m3K"], abs=2e-4)
    assert slope == pytest.approx(item["answer"]["from_steam_table"], rel=0.01)


def test_joule_thomson_of_a_virial_gas():
    """AHU-7.27: 0.93834 K/bar. B = 100 - 150 (300 K/T)^2 cm3/mol has the printed B, dB/dT and d2B/dT2 at 300 K.

    The book truncates the series in pressure and this program that in density: their difference at 5 atm is
    of the order B p/(R T) = 1 %; at low pressure both tend to (T dB/dT - B)/cp.
    """
    item = example("AHU-7.27")
    fluid = (
        "substance: nitrogen, equation: virial, heat_capacity: 35.78 J/(mol K), "
        "virial: {B: [100 cm3/mol, 0 cm3/mol, -150 cm3/mol], T_ref: 300 K}"
    )
    valve = "name: valve, path: throttling, to: {p: {drop: 0.001 bar}}"
    solution = solve(fluid, "T: 300 K, p: 5 atm", valve)
    mu = solution.states["start"].joule_thomson * 1e5
    assert mu == pytest.approx(item["answer"]["mu_K_per_bar"], rel=0.02)
    delta = solution.legs["valve"].delta
    assert delta.T / delta.p * 1e5 == pytest.approx(mu, rel=1e-4)
    thin = solve(fluid, "T: 300 K, p: 1 Pa", "name: valve, path: throttling, to: {p: 0.5 Pa}")
    assert thin.states["start"].joule_thomson == pytest.approx((300e-6 + 50e-6) / 35.78, rel=1e-6)


def test_isothermal_van_der_waals_nitrogen(tmp_path):
    """vdW-isothermal-recomputed: exact closed forms, evaluated to ten digits in the file."""
    item = example("vdW-isothermal-recomputed")
    given, answer = item["input"], item["recomputed"]
    a, b = given["a_Pa_m6_per_mol2"], given["b_m3_per_mol"]
    T_c = 8.0 * a / (27.0 * R * b)
    card = write_card(tmp_path, M=0.0280134, T_c=T_c, p_c=a / (27.0 * b * b))
    solution = solve(
        f"{card}, equation: van-der-waals",
        f"T: 300 K, v: {given['v1_m3']!r} m3/mol",
        f"name: a, path: isothermal, to: {{v: {given['v2_m3']!r} m3/mol}}",
        boundary="closed",
        more="amount: 1 mol\n",
        root=tmp_path,
    )
    leg, delta = solution.legs["a"], solution.totals.delta
    assert solution.states["start"].p == pytest.approx(answer["p1_Pa"], rel=1e-9)
    assert solution.states["a"].p == pytest.approx(answer["p2_Pa"], rel=1e-9)
    assert delta.s == pytest.approx(answer["delta_S_J_per_K"], rel=1e-9)
    assert delta.u == pytest.approx(answer["delta_U_J"], rel=1e-9)
    assert delta.h == pytest.approx(answer["delta_H_J"], rel=1e-9)
    assert delta.g == pytest.approx(answer["delta_G_J"], rel=1e-9)
    assert leg.total.heat == pytest.approx(answer["Q_in_J"], rel=1e-9)
    assert leg.total.work == pytest.approx(answer["W_in_J"], rel=1e-9)
    assert leg.maxwell.closure < 1e-12
