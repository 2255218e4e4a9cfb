"""A library of mixed cases, the same on every machine: substances, equations, legs and limits in turn."""

from __future__ import annotations

from pathlib import Path

SITE = "surroundings: {T: 12 degC, p: 1.013 bar}\nunits: {T: degC, p: bar, energy: kJ, mass: kg, time: s}\n"
GASES = ("nitrogen", "air", "argon", "methane", "oxygen", "carbon dioxide", "ethylene", "helium")
EQUATIONS = (
    "ideal-gas",
    "peng-robinson",
    "soave",
    "redlich-kwong",
    "virial",
    "van-der-waals",
    "peng-robinson",
    "reference",
)

BOOSTER = """\
boundary: flow
amount: {flow} kg/s
start: {{T: {T} degC, p: {p} barg}}
legs:
  - {{name: stage, path: adiabatic, to: {{p: {{ratio: {ratio}}}}}, efficiency: 0.76}}
  - {{name: cooler, path: workless, to: {{T: 35 degC}}, pressure_drop: 0.1 bar}}
limits:
  - {{quantity: stage.T, max: 250 degC}}
  - {{quantity: totals.work, max: 900 kW}}
"""
LETDOWN = """\
boundary: flow
amount: {flow} kg/s
start: {{T: {T} degC, p: {p} barg}}
legs:
  - {{name: heater, path: workless, to: {{T: 60 degC}}, pressure_drop: 0.2 bar}}
  - {{name: valve, path: throttling, to: {{p: 1.2 barg}}}}
limits: [{{quantity: valve.T, min: -20 degC}}]
"""
CYLINDER = """\
boundary: closed
amount: {flow} kg
start: {{T: {T} degC, p: {p} barg}}
legs:
  - {{name: warming, path: isochoric, to: {{T: 65 degC}}}}
  - {{name: letting down, path: polytropic, exponent: 1.2, to: {{p: {{ratio: 0.5}}}}}}
limits: [{{quantity: warming.p, max: 90 barg}}]
"""
STORE = """\
boundary: closed
amount: {flow} kg
start: {{T: {T} degC, p: {p} barg}}
legs:
  - {{name: filling, path: isothermal, to: {{p: {{ratio: {ratio}}}}}}}
  - {{name: rest, path: isobaric, to: {{T: 30 degC}}}}
limits: [{{quantity: filling.work, max: 900 kJ/kg}}]
"""
PATHS = (BOOSTER, LETDOWN, CYLINDER, STORE)


def case(number: int) -> str:
    """Text of one case."""
    body = PATHS[number % 4].format(
        flow=round(0.1 + 0.01 * (number % 37), 3),
        T=15 + number % 11,
        p=3 + number % 17,
        ratio=round(1.6 + 0.05 * (number % 13), 3),
    )
    fluid = f"fluid: {{substance: {GASES[number // 4 % 8]}, equation: {EQUATIONS[number // 32 % 8]}}}\n"
    return f"pathcalc: 1\ntitle: Generated case {number}\ninclude: ../shared/site.yaml\n{fluid}{body}"


def write_library(top: Path, count: int) -> Path:
    """Write a checkout with ``count`` cases in ten folders; the folder of the cases."""
    (top / ".git").mkdir(parents=True)
    (top / "shared").mkdir()
    (top / "shared" / "site.yaml").write_text(SITE)
    for number in range(count):
        folder = top / f"unit {number % 10}"
        folder.mkdir(exist_ok=True)
        (folder / f"case-{number:04d}.yaml").write_text(case(number))
    return top
