"""Every sentence, heading and column head of the reports, by key. Values are put in with ``{name}``.

Nothing else in this room holds words for the reader, so that they can be read, corrected or translated in
one place. ``say`` fails on an unknown key, and the tests fail on an unused one.
"""

from __future__ import annotations

from typing import Final

from pathcalc.report.words_columns import COLUMNS, SYMBOLS

__all__ = ["SYMBOLS", "WORDS", "say"]

WORDS: Final[dict[str, str]] = {
    # front
    "doc.kind": "Calculation of a thermodynamic process path",
    "doc.number": "Number",
    "doc.revision": "Revision",
    "doc.date": "Date",
    "doc.author": "Author",
    "doc.project": "Project",
    "doc.case": "Case",
    "doc.unset": "not stated",
    "doc.running": "{number}, revision {revision}",
    "doc.running.bare": "{title}",
    "doc.sheet": "sheet",
    "doc.of": "of",
    "doc.contents": "Contents",
    "doc.skip": "Skip to the results",
    "sign.prepared": "Prepared by",
    "sign.checked": "Checked by",
    "sign.approved": "Approved by",
    "sign.name": "Name",
    "sign.signature": "Signature",
    "sign.date": "Date",
    "sign.caption": "Signatures (to be filled in by people; the checker is not the author)",
    # verdict
    "verdict.title": "Outcome",
    "verdict.limits": "Limits",
    "verdict.checks": "Checks",
    "verdict.warnings": "Warnings",
    "verdict.inputs": "Inputs",
    "verdict.limits.none": "No limits are stated in the case: nothing was accepted or refused.",
    "verdict.limits.met": "{n} of {n} met.",
    "verdict.limits.missed": "{missed} of {n} missed: {names}.",
    "verdict.limits.miss": "{quantity} = {value}, allowed {side} {limit}",
    "verdict.limits.undefined": "{quantity} has no value in this state",
    "verdict.tightest": "Tightest: {quantity} = {value}, {side} {limit}, margin {margin}.",
    "verdict.side.min": "at least",
    "verdict.side.max": "at most",
    "verdict.checks.passed": "{n} of {n} of the program’s own checks passed.",
    "verdict.checks.failed": "{failed} of {n} of the program’s own checks failed: {names}. Do not use the results "
    "before the cause is found.",
    "verdict.checks.none": "No checks were recorded.",
    "verdict.warnings.none": "No warnings.",
    "verdict.warnings.one": "1 warning; it stands at the head of the results.",
    "verdict.warnings.many": "{n} warnings; they stand at the head of the results.",
    "verdict.inputs.all": "Every one of the {n} inputs names a source.",
    "verdict.inputs.some": "{unsourced} of {n} inputs name no source.",
    "verdict.evidence": "This calculation is evidence for a reviewer; it does not establish compliance with "
    "any code, and it replaces no signature.",
    # purpose
    "purpose.notes": "Notes",
    "purpose.title": "Purpose and scope",
    "purpose.none": "No purpose is stated in the case.",
    "purpose.scope.flow": "{n} changes of state of {fluid} in steady flow, beginning at “start”. Kinetic "
    "and potential energies are not counted.",
    "purpose.scope.closed": "{n} changes of state of a fixed mass of {fluid}, beginning at “start”. Kinetic "
    "and potential energies are not counted.",
    "purpose.sign": "Sign convention: heat and work are positive into the fluid.",
    "purpose.work.flow": "Work is shaft work, w = Δh − q.",
    "purpose.work.closed": "Work is −∫p dV, or −p(ext) ΔV where a leg is said to run against a pressure.",
    # basis
    "basis.title": "Basis",
    "basis.inputs": "Inputs",
    "basis.count": "{n} inputs: {sourced} with a source, {unsourced} without.",
    "basis.pressure": "Pressures are absolute unless marked gauge. Gauge readings were taken above the "
    "surroundings’ {ambient}.",
    "basis.uncertainty": "Stated uncertainties of inputs are listed; results and margins do not include them.",
    "basis.caption.inputs": "Inputs as written in the case, and their SI values",
    "basis.caption.sources": "Sources named in the case",
    "basis.nosource": "no source given",
    "basis.nouncertainty": "not stated",
    "basis.defaults": "Defaults applied",
    "basis.defaults.none": "None: the case states everything that has a default.",
    "basis.caption.defaults": "Values and readings the case leaves to the program",
    "basis.assumptions": "Assumptions",
    "basis.assumptions.none": "None stated.",
    "basis.relative.ratio": "{amount} × inlet",
    "basis.relative.rise": "inlet + {amount}",
    "basis.relative.drop": "inlet − {amount}",
    "basis.relative.same_as": "as at {state}",
    "basis.source.state": "a state of this path",
    "basis.u.normal": "u = {u}",
    "basis.u.expanded": "U = {U}, k = {k}",
    "basis.u.rectangular": "± {half}, rectangular",
    "basis.u.triangular": "± {half}, triangular",
    "default.surroundings.T": "temperature of the surroundings (dead state of exergy)",
    "default.surroundings.p": "pressure of the surroundings (gauge zero, dead state of exergy)",
    "default.datum": "zero of u, h and s",
    "default.heat_capacity": "ideal-gas heat capacity",
    "default.heat_capacity.value": "that of the substance, depending on temperature",
    "default.reversible": "no efficiency is given",
    "default.reversible.value": "reversible",
    "default.pressure_drop": "no pressure drop is given",
    "default.pressure_drop.value": "none",
    "default.amount": "no amount is given",
    "default.amount.value": "totals are not worked out",
    "default.boundary_temperature": "temperature at which heat crosses the boundary",
    "default.boundary_temperature.value": "the fluid’s own (so heat transfer itself generates no entropy here)",
    "default.units": "units of this document",
    # fluid
    "fluid.title": "Fluid and equation of state",
    "fluid.lead": "{substance} ({formula}), molar mass {molar_mass} g/mol; equation of state: {equation}.",
    "fluid.datum": "Zero of energy and entropy: {datum}.",
    "fluid.datum.ideal-gas-298": "h = 0 and s = 0 for the ideal gas at 298.15 K and 1 bar",
    "fluid.datum.triple-liquid": "u = 0 and s = 0 for the saturated liquid at the triple point",
    "fluid.datum.boiling-liquid": "h = 0 and s = 0 for the saturated liquid at 1.01325 bar",
    "fluid.datum.liquid-0C": "h = 200 kJ/kg and s = 1 kJ/(kg K) for the saturated liquid at 0 °C",
    "fluid.caption.models": "Models, their ranges and sources",
    "fluid.sources": "Sources of the constants and parameters:",
    "fluid.uncertainty": "Uncertainty of the equation of state, as far as its source states it:",
    "fluid.equation": "equation of state",
    "fluid.ideal": "ideal-gas heat capacity",
    "fluid.caption.constants": "Constants of the fluid",
    "fluid.caption.ideal": "Coefficients of the ideal-gas heat capacity",
    "fluid.ideal.formula": "isobaric heat capacity of the ideal gas",
    "fluid.remarks": "Remarks on the substance",
    "fluid.caption.parameters": "Parameters of the equation",
    # method
    "method.title": "Method",
    "method.route1": "Route 1 (the results reported): the differentials below, integrated along each leg’s "
    "own path by quadrature with an error estimate, from p(T, v), its derivatives and the ideal-gas heat "
    "capacity alone. Each leg is cut at phase boundaries.",
    "method.route2": "Route 2 (the check): the difference of the closed-form state functions of the "
    "fundamental equation between the ends of the leg. It shares the equation of state and its constants "
    "with route 1, but neither its formulas nor its quadrature. It cannot show that the equation of state "
    "suits the fluid.",
    "method.closure": "The difference of the routes is the closure of the leg. It must lie within the error "
    "estimate of the quadrature and what rounding may leave between the two (64 units in the last place of the "
    "values that are subtracted), or the check fails; the table of checks gives the tolerance used.",
    "method.dsT": "entropy in T and v",
    "method.dsp": "entropy in T and p",
    "method.duT": "internal energy in T and v",
    "method.dhp": "enthalpy in T and p",
    "method.cv": "isochoric heat capacity from the ideal gas",
    "method.clapeyron": "across a phase change",
    "method.exergy.flow": "thermomechanical exergy in steady flow",
    "method.exergy.closed": "thermomechanical exergy of a fixed mass",
    "method.generated": "entropy generated",
    "method.source": "Differentials and Maxwell relations: H. B. Callen, Thermodynamics and an Introduction "
    "to Thermostatistics, 2nd edition, Wiley, 1985, chapter 7. Exergy: T. J. Kotas, The Exergy Method of "
    "Thermal Plant Analysis, Butterworths, 1985, chapter 2. Symbols: ISO 80000-5:2019.",
    # results
    "results.title": "Results",
    "results.nowarnings": "The calculation gave no warnings.",
    "results.warning.at": "{n}. At {at}:",
    "results.warning.general": "{n}. In general:",
    "results.mark": "warning {n}",
    "results.states": "States",
    "results.legs": "Legs",
    "results.totals": "Totals",
    "results.cycle": "Cycle",
    "results.caption.states": "States: temperature, pressure, volume, phase",
    "results.caption.energies": "States: energies, entropy, exergy",
    "results.caption.derived": "States: heat capacities and other derived properties",
    "results.caption.legs": "Legs: heat, work and irreversibility, per unit {per}",
    "results.caption.delta": "Legs: changes from inlet to outlet, per unit {per}",
    "results.caption.totals": "Legs: totals for the amount that flows",
    "results.caption.totals.closed": "Legs: totals for the amount enclosed",
    "results.caption.sum": "Whole path: changes from the first state to the last",
    "results.caption.cycle": "Cycle figures",
    "results.whole": "whole path",
    "results.noamount": "The case gives no amount, so there are no totals.",
    "results.decimals": "Energies, entropies and temperatures are printed with one number of decimals each "
    "throughout, so that sums and differences can be checked by hand; the results file has every digit.",
    "results.gauge": "Pressures are gauge, above the surroundings’ {ambient}.",
    "results.absolute": "Pressures are absolute.",
    "results.amountof": "Amount: {amount}.",
    "cycle.thermal_efficiency": "thermal efficiency",
    "cycle.cop_cooling": "coefficient of performance, cooling",
    "cycle.cop_heating": "coefficient of performance, heating",
    # limits
    "limits.title": "Limits",
    "limits.none": "The case states no limits.",
    "limits.caption": "Acceptance limits of the case and their margins",
    "limits.met": "met",
    "limits.missed": "missed",
    "limits.margin": "A negative margin is a miss.",
    # checks
    "checks.title": "Balances, checks and integrals",
    "checks.lead": "These are the program’s checks on itself. They show that the arithmetic is consistent; "
    "they say nothing about whether the inputs or the equation of state are right. Values and tolerances "
    "are relative, except for the second law: entropy generated, J/(kg K), which must not be negative.",
    "checks.none": "No checks were recorded.",
    "checks.caption": "Checks",
    "checks.passed": "passed",
    "checks.failed": "failed",
    "checks.maxwell": "Maxwell integrals",
    "checks.caption.maxwell": "Changes integrated along each leg (route 1), error estimate, closure against route 2",
    "checks.caption.pieces": "The same by pieces: cut at phase boundaries and where the way of integration turns",
    "checks.error": "Error estimates are those of the quadrature, kept apart from the uncertainty of inputs "
    "and of the equation of state. Error and closure are relative: the largest of the three integrals’, "
    "each against the size of its integrand along the leg.",
    # worked
    "worked.title": "Formulas with numbers",
    "worked.none": "No worked steps were recorded.",
    "worked.lead": "Each result as symbols, then numbers, then result. All formulas use K, kPa, m³/kg, kJ/kg and "
    "kJ/(kg K), which need no conversion factors. Properties that come from the equation of state without a further "
    "step are in the state tables.",
    "worked.for": "For {quantities}",
    "worked.source": "Source: {source}",
    # comparison
    "comparison.title": "Comparison with other equations of state",
    "comparison.lead": "The same path with other equations of state. The spread is no uncertainty; it shows "
    "how much depends on the choice of equation.",
    "comparison.caption": "The same path by other equations",
    "comparison.difference": "difference",
    "comparison.absent": "no solution",
    # diagrams
    "diagrams.title": "Diagrams",
    "diagrams.lead": "States are numbered as in the state table. Lines are told apart by style and number; "
    "arrows show the direction. The line of an irreversible leg is the way along which it was integrated, "
    "not a row of states the fluid passed through.",
    "diagrams.absolute": "{unit} absolute",
    "diagrams.none": "The case asks for no diagrams.",
    "diagrams.curve": "{y}–{x} diagram",
    "diagrams.alt": "{y} against {x}{scales}. States: {states}. {dome}",
    "diagrams.alt.log": ", logarithmic {axes}",
    "diagrams.alt.dome": "The two-phase region is outlined.",
    "diagrams.alt.nodome": "No two-phase region is drawn.",
    "diagrams.dome": "two-phase region",
    "diagrams.dome.quality": "two-phase region, quality in steps of 0.2",
    # cautions
    "cautions.title": "Cautions",
    "cautions.lead": "General reminders, chosen by the fluid and the states of this case. They are common "
    "practice, not a hazard study. Local law, codes and licensed practice decide.",
    "caution.pressure": "Pressure",
    "caution.pressure.text": "The fluid reaches {p} above the surroundings. Stored energy can injure and "
    "kill. Pressure equipment, relief and piping are designed, tested and inspected under the code in force "
    "at the place of use, by licensed people.",
    "caution.high-pressure": "High pressure",
    "caution.high-pressure.text": "Above 100 bar a small leak cuts and injects. No inspection or tightening "
    "under pressure.",
    "caution.test": "Pressure test",
    "caution.test.text": "A calculated state is no test pressure. Tests follow the code in force, by "
    "preference with liquid; a test with gas stores far more energy and needs its own approval.",
    "caution.vacuum": "Below atmospheric pressure",
    "caution.vacuum.text": "The fluid goes down to {p} absolute. Check for collapse, and for air drawn in.",
    "caution.cold": "Cold",
    "caution.cold.text": "The fluid goes down to {T}. Carbon steels and elastomers turn brittle; bare "
    "surfaces burn skin. Check the minimum design metal temperature.",
    "caution.air": "Condensing air",
    "caution.air.text": "Below about −183 °C air condenses on bare surfaces, and the liquid is rich in oxygen.",
    "caution.hot": "Hot surfaces",
    "caution.hot.text": "The fluid reaches {T}. Guard or insulate what people can touch.",
    "caution.trapped": "Trapped liquid",
    "caution.trapped.text": "Cold or boiling liquid shut in between valves bursts the pipe as it warms. "
    "Relieve every such section.",
    "caution.oxidiser": "Oxidiser",
    "caution.oxidiser.text": "Materials, cleanliness, velocity and adiabatic compression decide ignition. "
    "Parts are cleaned and materials chosen for the service.",
    "caution.flammable": "Flammable",
    "caution.flammable.text": "Leaks burn or explode. Ignition sources, ventilation, hazardous areas and "
    "relief disposal are settled under local rules.",
    "caution.toxic": "Toxic",
    "caution.toxic.text": "Exposure limits, detection, containment and relief disposal are settled under local rules.",
    "caution.hydrogen": "Hydrogen",
    "caution.hydrogen.text": "It leaks readily, burns with a flame that is hard to see, and embrittles "
    "steels: materials and joints are chosen for the service.",
    "caution.decomposes": "Decomposition",
    "caution.decomposes.text": "The fluid can decompose with heat release when hot or compressed. Its own "
    "safety rules set the limits of temperature and pressure.",
    "caution.greenhouse": "Release to the air",
    "caution.greenhouse.text": "The fluid is a greenhouse gas. Venting and recovery follow local rules.",
    "caution.asphyxiant": "Asphyxiant",
    "caution.asphyxiant.text": "A leak or vent displaces oxygen without warning. Ventilate, and measure "
    "oxygen before entry.",
    "caution.corrosive": "Corrosive",
    "caution.corrosive.text": "Materials and seals are chosen for the fluid and the temperatures of this path.",
    "caution.none": "No particular caution follows from the fluid or the states; local rules still apply.",
    # provenance
    "made.title": "What produced this document",
    "made.caption": "Program, input and equation",
    "made.software": "program and libraries",
    "made.digest": "SHA-256 of the case and what it includes",
    "made.id": "case",
    "made.equation": "equation of state",
    "made.sources": "sources of the fluid’s data",
    "made.repeat": "The same case and the same versions give the same document, byte for byte; it carries "
    "no clock time, computer name or folder.",
    "appendix.title": "Appendix: the case as written",
    "appendix.main": "The case file",
    "appendix.include": "Included file: {name}",
    # library index, logo
    "doc.kind.index": "Calculations of thermodynamic process paths",
    "doc.logo": "Company logo",
    "index.title": "Library of calculations",
    "index.cases": "Cases",
    "index.look": "{alarming} of {n} cases need a look: {names}.",
    "index.others": "{names} and {n} more",
    "index.well": "None of the {n} cases missed a limit or failed a check.",
    "index.statuses": "Status",
    "index.count": "{n} {status}",
    "index.evidence": "These calculations are evidence for a reviewer; they do not establish compliance with any code, "
    "and they replace no signature.",
    "index.table": "Cases",
    "index.caption": "What needs a look comes first, then by case",
    "index.column.case": "Case",
    "index.column.status": "Status",
    "index.column.limits": "Limits",
    "index.column.checks": "Checks",
    "index.column.warnings": "Warnings",
    "index.column.reports": "Reports",
    "index.open": "{form}: {title}",
    "index.noreport": "none",
    "index.nowarnings": "none",
    "index.more": "and {n} more",
    "index.status.internal": "internal error",
    "index.status.unsolved": "no solution",
    "index.status.invalid": "invalid",
    "index.status.unwritten": "not read or written",
    "index.status.failed": "check failed",
    "index.status.missed": "limit missed",
    "index.status.warned": "with warnings",
    "index.status.met": "limits met",
    "index.status.unlimited": "no limits stated",
    "index.message.internal": "The program failed on this case ({kind}); the messages of the run say more.",
    "index.message.unread": "The case could not be read; the messages of the run say why.",
    "index.message.unwritten": "The reports could not be written; the messages of the run say why.",
    **COLUMNS,
}


def say(key: str, **values: object) -> str:
    """The words under a key, with the values put in. An unknown key or a missing value raises KeyError."""
    return WORDS[key].format_map(values)
