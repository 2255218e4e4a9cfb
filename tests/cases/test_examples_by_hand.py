# ruff: noqa: SIM300  (T is a temperature here, not a constant)
"""Examples against formulas worked here, without the package: the source stands at each check.

Where a heat capacity enters, the tolerance allows for the gas constant: the cards carry that of their sources, up to
6e-6 above the one of CODATA 2018 that the formulas here take.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import pytest
from hand_cubics import R, cp0, ideal_enthalpy, ideal_entropy, molar_mass, peng_robinson
from scipy.optimize import brentq

Solved = Callable[[str], Any]


def row(solution: Any, equation: str) -> dict[str, float]:
    """The quantities of one equation in the comparison of a solution."""
    return next(r["quantities"] for r in solution.comparison if r["equation"] == equation)


def test_argon_cycle_of_the_ideal_gas(solved: Solved) -> None:
    """Monatomic ideal gas: c_p = 5/2 R and T_2s = T_1 r^(2/5); textbook formulas of the simple gas turbine."""
    c, M = 2.5 * R, molar_mass("Argon")
    T1, T3 = 303.15, 953.15
    work_in = c * T1 * ((30 / 12) ** 0.4 - 1.0) / 0.84
    work_out = c * T3 * (1.0 - (12.2 / 29.55) ** 0.4) * 0.88
    heat = c * (T3 - T1) - work_in
    quantities = row(solved("argon-power-cycle"), "ideal-gas")
    assert quantities["compressor.work"] == pytest.approx(work_in / M, rel=1e-5)
    assert quantities["turbine.work"] == pytest.approx(-work_out / M, rel=1e-5)
    assert quantities["heater.heat"] == pytest.approx(heat / M, rel=1e-5)
    efficiency = solved("argon-power-cycle").cycle.thermal_efficiency
    assert efficiency == pytest.approx((work_out - work_in) / heat, rel=0.01)  # argon is nearly ideal here


def test_hot_gas_engine(solved: Solved) -> None:
    """Two isotherms and two isochores of an ideal gas without regenerator, textbook formula."""
    cold, hot, ratio = 313.15, 693.15, 1.0 / 0.45
    log = math.log(ratio)
    expected = (hot - cold) * log / (hot * log + 1.5 * (hot - cold))
    solution = solved("hot-gas-engine")
    assert solution.cycle.thermal_efficiency == pytest.approx(expected, rel=1e-6)
    moles = 5e5 * 0.75e-3 / (R * cold)
    assert solution.totals.work == pytest.approx(-moles * R * (hot - cold) * log, rel=1e-10)


def test_gas_spring(solved: Solved) -> None:
    """Work on p v^n of a closed mass: (p2 V2 - p1 V1)/(n - 1), textbook formula."""
    V1, p1 = 1.85e-3, 2.6e5
    p2 = p1 * 5.0**1.31
    p3 = p2 - 3e5
    n = math.log(p3 / 2.12e5) / math.log(5.0)
    work_in = (p2 * V1 / 5.0 - p1 * V1) / 0.31
    work_out = (2.12e5 * V1 - p3 * V1 / 5.0) / (n - 1.0)
    solution = solved("gas-spring-indicator-card")
    assert solution.legs["rod in"].total.work == pytest.approx(work_in, rel=1e-10)
    assert solution.legs["rod out"].total.work == pytest.approx(work_out, rel=1e-10)
    assert solution.totals.work == pytest.approx(work_in + work_out, rel=1e-9)


def test_ram_against_constant_pressure(solved: Solved) -> None:
    """Energy balance of a van der Waals gas, u = u_ideal(T) - a/v, solved here for the end temperature."""
    T_c, p_c = 126.192, 3395800.0  # R. Span et al., J. Phys. Chem. Ref. Data 29 (2000) 1361
    a, b = 27.0 * (R * T_c) ** 2 / (64.0 * p_c), R * T_c / (8.0 * p_c)
    T1, p1, against = 285.15, 24e5 + 101300.0, 4.2e5

    def excess(v: float) -> float:
        return R * T1 / (v - b) - a / v**2 - p1

    v1 = brentq(excess, 5.0 * b, 1e-2, xtol=1e-18)
    v2 = 2.6 * v1

    def balance(T: float) -> float:
        change = ideal_enthalpy("Nitrogen", T1, T) - R * (T - T1) - a / v2 + a / v1
        return change + against * (v2 - v1)

    solution = solved("cylinder-against-atmosphere")
    assert solution.states["stroke"].T == pytest.approx(brentq(balance, 150.0, T1), rel=5e-6)
    assert solution.legs["stroke"].total.work == pytest.approx(-against * 1.6 * 8.5e-3, rel=1e-10)


def test_methane_bank_pressures(solved: Solved) -> None:
    """Peng-Robinson pressure at constant volume, equation written out here."""
    equation = peng_robinson("Methane")
    v = equation.gas_volume(331.15, 232e5 + 101300.0)
    solution = solved("methane-bank-cool-down")
    for state, T in (("cool-down", 285.15), ("hottest day", 323.15)):
        assert solution.states[state].p == pytest.approx(equation.pressure(T, v), rel=1e-6)


def test_letdown_keeps_enthalpy(solved: Solved) -> None:
    """Peng-Robinson departure function and ideal-gas heat capacity: outlet temperature of the valve."""
    equation, p1, p2 = peng_robinson("Methane"), 92e5 + 101300.0, 14e5 + 101300.0

    def balance(T: float) -> float:
        change = ideal_enthalpy("Methane", 277.15, T)
        return change + equation.residual_enthalpy(T, p2) - equation.residual_enthalpy(277.15, p1)

    expected = brentq(balance, 200.0, 277.15)
    assert solved("letdown-unheated").states["letdown valve"].T == pytest.approx(expected, abs=2e-3)


def test_heated_letdown_takes_the_duty_named(solved: Solved) -> None:
    """84 kW over the mass flow of 5200 Nm3/h (ideal gas at 0 degC and 101325 Pa), worked here."""
    flow = 5200.0 / 3600.0 * 101325.0 / (R * 273.15) * 0.0160428  # molar mass: Setzmann and Wagner (1991)
    solution = solved("letdown-heated")
    assert solution.path.case.amount.value * 0.0160428 == pytest.approx(flow, rel=1e-12)
    assert solution.legs["line heater"].heat == pytest.approx(84e3 / flow, rel=1e-10)
    warmer = solution.states["letdown valve"].T - solved("letdown-unheated").states["letdown valve"].T
    assert 25.0 < warmer < 45.0


def test_least_work_of_the_air_store(solved: Solved) -> None:
    """R T ln(p2/p1) and the change of R T ln of the fugacity coefficient (Peng-Robinson, written out here)."""
    T, p1, p2, M = 285.15, 101300.0, 70e5 + 101300.0, molar_mass("Air")
    solution = solved("air-store-least-work")
    leg = solution.legs["filling"]
    ideal = R * T * math.log(p2 / p1)
    assert row(solution, "ideal-gas")["filling.work"] == pytest.approx(ideal / M, rel=1e-6)
    # acentric factor as the card has it, E. W. Lemmon et al., J. Phys. Chem. Ref. Data 29 (2000) 331
    equation = type(peng_robinson("Air"))(132.5306, 3786000.0, 0.0335)
    real = ideal + equation.residual_gibbs(T, p2) - equation.residual_gibbs(T, p1)
    assert leg.delta.g == pytest.approx(real / M, rel=1e-6)
    # at the temperature of the surroundings work, change of g and gain of exergy are one number
    assert leg.work == pytest.approx(leg.delta.g, rel=1e-12)
    gained = solution.states["filling"].exergy - solution.states["start"].exergy
    assert gained == pytest.approx(leg.work, rel=1e-12)


def test_recompressor_of_the_ideal_gas(solved: Solved) -> None:
    """Polytropic efficiency of an ideal gas: integral of c_p/T dT = (R/eta) ln(p2/p1)."""
    wanted = math.log(2.35) / 0.805
    T2 = brentq(lambda T: ideal_entropy("Methane", 287.15, T) - wanted, 300.0, 450.0, xtol=1e-10)
    quantities = row(solved("recompressor-vendor-efficiency"), "ideal-gas")
    assert quantities["recompressor.T"] == pytest.approx(T2, rel=5e-6)
    work = ideal_enthalpy("Methane", 287.15, T2) / molar_mass("Methane")
    assert quantities["recompressor.work"] == pytest.approx(work, rel=1e-5)


def test_receiver_of_the_ideal_gas_keeps_its_temperature(solved: Solved) -> None:
    """Joule's law: a free expansion leaves the temperature of an ideal gas alone."""
    quantities = row(solved("receiver-into-vacuum"), "ideal-gas")
    assert quantities["burst.T"] == pytest.approx(285.15, rel=1e-12)
    assert quantities["burst.p"] == pytest.approx((62e5 + 101300.0) / 3.6, rel=1e-12)
    assert quantities["burst.entropy_generated"] == pytest.approx(
        R * math.log(3.6) / 0.02896546,
        rel=1e-10,  # molar mass: Lemmon et al. (2000)
    )


# T/K, B/(cm3/mol): J. H. Dymond, K. N. Marsh, R. C. Wilhoit, K. C. Wong, Virial Coefficients of Pure Gases
# (Springer, 2002), one measured series of carbon dioxide as given in a collection made from it
MEASURED_B = {
    250.0: -184.8, 270.0: -155.1, 290.0: -131.6, 298.15: -123.2, 320.0: -104.7, 373.15: -71.6,
    423.15: -51.3, 448.15: -43.5,
}  # fmt: skip


def test_virial_series_meets_the_measured_values(solved: Solved) -> None:
    """The coefficients written in the case give the measured B within the 0.7 cm3/mol that it states."""
    series = [q.value for q in solved("low-pressure-virial").case.fluid.virial.B]
    for T, measured in MEASURED_B.items():
        B = sum(b * (300.0 / T) ** k for k, b in enumerate(series))
        assert B * 1e6 == pytest.approx(measured, abs=0.7)


def test_virial_reducer(solved: Solved) -> None:
    """Z = 1 + B rho and h - h_ideal = R T rho (B - T dB/dT), both from B(T) alone, solved here."""

    def b(T: float) -> tuple[float, float]:
        x = 300.0 / T
        return (14.9 + 11.7 * x - 148.2 * x * x) * 1e-6, (11.7 * x - 296.4 * x * x) * 1e-6

    def density(T: float, p: float) -> float:
        y = p / (R * T)
        return 2.0 * y / (1.0 + math.sqrt(1.0 + 4.0 * b(T)[0] * y))

    def departure(T: float, p: float) -> float:
        B, minus_TB_T = b(T)
        return R * T * density(T, p) * (B + minus_TB_T)

    T1, p1, p2 = 298.15, 8e5, 1.6e5
    end = brentq(lambda T: ideal_enthalpy("CO2", T1, T) + departure(T, p2) - departure(T1, p1), 270.0, T1)
    solution = solved("low-pressure-virial")
    assert solution.states["reducer"].T == pytest.approx(end, abs=2e-4)
    assert solution.states["start"].Z == pytest.approx(p1 / (density(T1, p1) * R * T1), rel=1e-10)


def test_trial_gas_heater(solved: Solved) -> None:
    """Energy balance with the polynomial of the user's own card and the Peng-Robinson departure function."""
    equation = type(peng_robinson("Methane"))(201.4, 5120000.0, 0.071)

    def ideal(T: float) -> float:
        return R * (3.118 * T + 0.001942 * T**2 / 2.0 - 6.4e-07 * T**3 / 3.0)

    def balance(T: float) -> float:
        change = ideal(T) + equation.residual_enthalpy(T, 25.4e5)
        change -= ideal(293.15) + equation.residual_enthalpy(293.15, 26e5)
        return change - 38.4e3 / 0.24 * 0.03162

    solution = solved("trial-gas-heater")
    assert solution.states["heater"].T == pytest.approx(brentq(balance, 300.0, 600.0), abs=1e-4)


def test_ethylene_densities_of_the_equations(solved: Solved) -> None:
    """Density at the meter from each cubic, its constants from the critical point, solved here.

    J. D. van der Waals (1873); O. Redlich, J. N. S. Kwong, Chem. Rev. 44 (1949) 233; G. Soave, Chem. Eng. Sci.
    27 (1972) 1197. Critical constants and acentric factor: J. Smukala, R. Span, W. Wagner, J. Phys. Chem. Ref.
    Data 29 (2000) 1053.
    """
    T_c, p_c, omega, M = 282.35, 5.0418e6, 0.0866, 0.02805376
    T, p = 318.15, 60e5
    m = 0.480 + 1.574 * omega - 0.176 * omega**2
    b_rk = 0.08664034996 * R * T_c / p_c
    a_rk = 0.42748023354 * (R * T_c) ** 2 / p_c
    pressures: dict[str, Callable[[float], float]] = {
        "ideal-gas": lambda v: R * T / v,
        "van-der-waals": lambda v: R * T / (v - R * T_c / (8 * p_c)) - 27 * (R * T_c) ** 2 / (64 * p_c) / v**2,
        "redlich-kwong": lambda v: R * T / (v - b_rk) - a_rk * math.sqrt(T_c / T) / (v * (v + b_rk)),
        "soave": lambda v: R * T / (v - b_rk) - a_rk * (1 + m * (1 - math.sqrt(T / T_c))) ** 2 / (v * (v + b_rk)),
    }
    for equation, pressure in pressures.items():
        v = brentq(lambda v, f=pressure: f(v) - p, 1.2e-4, 2e-3, xtol=1e-15)
        density = row(solved("ethylene-equation-choice"), equation)["jacket.rho"]
        assert density == pytest.approx(M / v, rel=2e-4), equation
    assert row(solved("ethylene-equation-choice"), "ideal-gas")["metering valve.T"] == pytest.approx(318.15)


def test_us_booster_amounts(solved: Solved) -> None:
    """scf at 60 degF and 14.696 psi, hp and Btu of NIST SP 811 (2008), converted here."""
    psi = 0.45359237 * 9.80665 / 0.0254**2
    moles = 96000.0 * 0.3048**3 * 14.696 * psi / (R * (519.67 / 1.8)) / 3600.0
    flow = moles * 0.0160428
    solution = solved("us-units-booster")
    assert solution.legs["booster"].work == pytest.approx(92 * 745.69987158227 / flow, rel=1e-9)
    assert solution.legs["trim cooler"].heat == pytest.approx(-90000 * 1055.05585262 / 3600 / flow, rel=1e-9)
    assert solution.states["start"].p == pytest.approx((120 + 14.69) * psi, rel=1e-9)
    assert solution.legs["air cooler"].delta.T == pytest.approx(-60 / 1.8, rel=1e-9)
    assert solution.legs["rig inlet heater"].delta.T == pytest.approx(15 / 1.8, rel=1e-9)
    before, after = solution.states["air cooler"], solution.states["back-pressure valve"]
    assert after.p == pytest.approx(0.9 * before.p, rel=1e-12)


def test_ideal_heat_capacity_of_the_hand_formulas_is_sound() -> None:
    """The integrals above rest on CoolProp's ideal part: nitrogen at 300 K, NIST-JANAF 4th ed.: 29.125 J/(mol K)."""
    assert R * cp0("Nitrogen", 300.0) == pytest.approx(29.125, abs=0.01)
