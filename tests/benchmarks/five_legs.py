"""The cases of the timings: five legs of a cubic equation into the dome and out of it; a steam cycle of six."""

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

SIX_LEGS = """\
pathcalc: 1
title: Steam plant with reheat
fluid: {substance: water, equation: reference, datum: triple-liquid}
boundary: flow
amount: 10 kg/s
start: {p: 0.1 bar, phase: saturated-liquid}
cycle: true
legs:
  - {name: feed pump, path: adiabatic, to: {p: 80 bar}, efficiency: 0.7}
  - {name: boiler, path: isobaric, to: {T: 480 degC}}
  - {name: high turbine, path: adiabatic, to: {p: 10 bar}, efficiency: 0.85}
  - {name: reheater, path: isobaric, to: {T: 450 degC}}
  - {name: low turbine, path: adiabatic, to: {p: 0.1 bar}, efficiency: 0.85}
  - {name: condenser, path: isobaric, to: {x: 0}}
units: {T: degC}
report: {diagrams: [T-s, p-h, h-s]}
"""
