"""Substances: the data cards, one YAML file each under ``cards/``, and what reads them."""

from pathcalc.substances.card import (
    CONSTANT_UNITS,
    HAZARDS,
    Card,
    Constant,
    Correlation,
    LevelTerm,
    PowerTerm,
    TemperatureRange,
    VanDerWaals,
    Virial,
    VirialCorrelation,
)
from pathcalc.substances.catalogue import UnknownSubstance, aliases, names, resolve
from pathcalc.substances.reader import read_card

__all__ = [
    "CONSTANT_UNITS",
    "HAZARDS",
    "Card",
    "Constant",
    "Correlation",
    "LevelTerm",
    "PowerTerm",
    "TemperatureRange",
    "UnknownSubstance",
    "VanDerWaals",
    "Virial",
    "VirialCorrelation",
    "aliases",
    "names",
    "read_card",
    "resolve",
]
