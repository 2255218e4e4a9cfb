"""Names of the format that are the same everywhere: one place to add one."""

from __future__ import annotations

FORMAT_VERSION = "1"

EQUATIONS = ("ideal-gas", "van-der-waals", "redlich-kwong", "soave", "peng-robinson", "virial", "reference")
EQUATIONS_LATER = ("compressed", "measured")
CUBICS = ("van-der-waals", "redlich-kwong", "soave", "peng-robinson")
WITHOUT_SATURATION = ("ideal-gas", "virial")
WITH_SATURATION = (*CUBICS, "reference")
# words for quantities that people write where a symbol is wanted
QUANTITY_WORDS = {
    "temperature": "T", "pressure": "p", "volume": "v", "density": "rho", "energy": "u", "enthalpy": "h",
    "entropy": "s", "quality": "x",
}  # fmt: skip
DATUMS = ("ideal-gas-298", "triple-liquid", "boiling-liquid", "liquid-0C")
SATURATION_DATUMS = ("triple-liquid", "boiling-liquid", "liquid-0C")
PATHS_LATER: tuple[str, ...] = ()
# the trade's other words for a path, and what is written here
PATH_WORDS = {
    "isentropic": "write adiabatic, which is reversible where no efficiency is given",
    "isenthalpic": "write throttling",
    "isometric": "write isochoric",
}
MIXTURES = False

TOP_KEYS = (
    "pathcalc", "title", "record", "fluid", "boundary", "amount", "surroundings", "start", "legs", "cycle",
    "limits", "units", "report", "include",
)  # fmt: skip
TOP_KEYS_LATER = ("study",)
RESERVED_NAMES = ("start", "totals")
DIAGRAMS = ("T-s", "p-v", "p-h", "h-s")
PHASES = ("saturated-liquid", "saturated-vapour")

MAX_REPEAT = 1000
MAX_LEGS = 10_000

STATE_KEYS = {
    "T": "temperature", "p": "pressure", "v": "specific-volume", "rho": "density", "u": "specific-energy",
    "h": "specific-energy", "s": "specific-entropy", "a": "specific-energy", "g": "specific-energy",
    "cv": "specific-entropy", "cp": "specific-entropy", "sound_speed": "speed", "Z": "fraction",
    "x": "fraction",
    "expansivity": "expansivity", "compressibility": "compressibility", "joule_thomson": "joule-thomson",
    "fugacity_coefficient": "fraction", "exergy": "specific-energy",
}  # fmt: skip
LEG_KEYS = {
    "heat": "specific-energy", "work": "specific-energy", "entropy_generated": "specific-entropy",
    "exergy_destroyed": "specific-energy",
}  # fmt: skip
TOTAL_KEYS = {
    "heat": "energy",
    "work": "energy",
    "entropy_generated": "entropy",
    "exergy_destroyed": "energy",
}
PER_TIME = {"energy": "power", "entropy": "entropy-rate"}

# kinds of results, as tolerances name them, with their dimensions
RESULT_KINDS = {
    "temperature": "temperature", "pressure": "pressure", "specific-volume": "specific-volume", "density": "density",
    "specific-energy": "specific-energy", "specific-entropy": "specific-entropy", "heat-capacity": "specific-entropy",
    "speed": "speed", "fraction": "fraction", "expansivity": "expansivity", "compressibility": "compressibility",
    "joule-thomson": "joule-thomson", "energy": "energy", "power": "power", "entropy": "entropy",
    "entropy-rate": "entropy-rate", "mass": "mass", "mass-flow": "mass-flow", "volume": "volume",
    "volume-flow": "volume-flow", "molar-mass": "molar-mass",
}  # fmt: skip

AMOUNTS = {"flow": ("mass-flow", "mole-flow"), "closed": ("mass", "mole", "volume")}

UNIT_KINDS = {
    "T": ("temperature",), "p": ("pressure",), "energy": ("energy",), "mass": ("mass",), "time": ("time",),
    "volume": ("volume",), "amount": ("mole",), "power": ("power",),
}  # fmt: skip
UNIT_PRESETS = {
    "si": {"T": "K", "p": "Pa", "energy": "J", "mass": "kg", "time": "s", "volume": "m3", "amount": "mol"},
    "us": {
        "T": "degF",
        "p": "psia",
        "energy": "Btu",
        "mass": "lb",
        "time": "h",
        "volume": "ft3",
        "amount": "lbmol",
    },
}
UNITS_DEFAULT = {
    "T": "K", "p": "bar", "energy": "kJ", "mass": "kg", "time": "s", "volume": "m3", "amount": "kmol",
}  # fmt: skip
# units that are products, or that count a normal volume: a report could not build on them
UNIT_KINDS_REFUSED = ("ft lbf", "Nm3", "Sm3", "scf")
