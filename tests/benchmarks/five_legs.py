"""The cases of the timings: five legs of a cubic equation into the dome and out of it; a steam cycle of six."""

from pathlib import Path

FIVE_LEGS = """pathcalc: 1
title: Five legs for the timings
fluid: {substance: r-134a, equation: peng-robinson}
boundary: flow
amount: 0.1 kg/s
start: {superheat: 5 K, p: 2 bar}
legs:
  - {name: low stage, path: adiabatic, to: {p: 5 bar}, efficiency: 0.75}
  - {name: high stage, path: adiabatic, to: {p: {ratio: 2.2}}, efficiency: 0.75}
  - {name: condenser, path: workless, to: {subcooling: 3 K}, pressure_drop: 0.1 bar}
  - {name: valve, path: throttling, to: {p: {same_as: start}}}
  - {name: evaporator, path: isobaric, to: {T: {same_as: start}}}
"""

SIX_LEGS = Path(__file__).with_name("six-legs.txt").read_text(encoding="utf-8")
