"""What one substance card says, as typed and frozen values.

All numbers are molar SI: kg/mol, K, Pa, mol/m3, m3/mol. Every number names the citation it was taken from.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType
from typing import Literal, NoReturn

from pathcalc.errors import Finding, InvalidCaseError

Form = Literal["planck-einstein", "nasa9", "polynomial", "constant"]

FORMS: tuple[Form, ...] = ("planck-einstein", "nasa9", "polynomial", "constant")

CONSTANT_UNITS: Mapping[str, str] = MappingProxyType(
    {
        "molar_mass": "kg/mol",
        "T_c": "K",
        "p_c": "Pa",
        "rho_c": "mol/m3",
        "T_triple": "K",
        "p_triple": "Pa",
        "T_nbp": "K",
        "acentric": "1",
    }
)
"""The constants a card may give, and the one unit each is written in."""

HAZARDS: Mapping[str, str] = MappingProxyType(
    {
        "asphyxiant": "displaces air: oxygen deficiency can kill without warning",
        "corrosive": "attacks metals or living tissue",
        "cryogenic": "its liquid is cold enough to burn skin, embrittle steel and condense air",
        "flammable": "burns or explodes in air",
        "high-pressure": "usually stored or handled as a compressed or liquefied gas under high pressure",
        "hydrogen": "hydrogen embrittlement, wide flammable range, invisible flame",
        "oxidiser": "makes other substances, oils and many metals burn fiercely",
        "toxic": "poisonous by inhalation, contact or swallowing",
        "decomposes": "may decompose violently without air, above a pressure or temperature of its own",
        "greenhouse": "strong greenhouse gas or ozone-depleting: release is restricted by law",
    }
)
"""The hazard words a card may use, each with what it warns of (common safety practice, no source)."""


@dataclass(frozen=True)
class Constant:
    """One number with its citation key, an optional note and an optional standard uncertainty, all SI."""

    value: float
    source: str
    note: str | None = None
    u: float | None = None


@dataclass(frozen=True)
class PowerTerm:
    """``coefficient`` * T**``exponent``, T in K."""

    coefficient: float
    exponent: float


@dataclass(frozen=True)
class LevelTerm:
    """``weight`` * y**2 * e**y / (e**y + ``shift``)**2 with y = ``theta``/T.

    ``shift`` is -1 for a harmonic vibration (Planck-Einstein term).
    """

    weight: float
    theta: float
    shift: float = -1.0


@dataclass(frozen=True)
class TemperatureRange:
    """One temperature range of a piecewise sum of powers of T."""

    T_min: float
    T_max: float
    powers: tuple[PowerTerm, ...]


@dataclass(frozen=True)
class Correlation:
    """One correlation of the ideal-gas heat capacity c_p0/``gas_constant``.

    Every form is a sum of powers of T, one set for each of ``ranges``, and of ``levels`` that hold in all
    ranges. ``gas_constant`` (J/(mol K)) is the one the source divided by.
    """

    name: str
    form: Form
    T_min: float
    T_max: float
    gas_constant: float
    source: str
    ranges: tuple[TemperatureRange, ...]
    levels: tuple[LevelTerm, ...] = ()
    note: str | None = None
    uncertainty: str | None = None


@dataclass(frozen=True)
class VanDerWaals:
    """a in Pa m6/mol2, b in m3/mol."""

    a: float
    b: float
    source: str
    note: str | None = None


@dataclass(frozen=True)
class VirialCorrelation:
    """A virial coefficient as a sum of powers of T: m3/mol for B, m6/mol2 for C."""

    T_min: float
    T_max: float
    powers: tuple[PowerTerm, ...]
    source: str
    note: str | None = None


@dataclass(frozen=True)
class Virial:
    """Virial coefficients given by the card; either may be absent."""

    B: VirialCorrelation | None = None
    C: VirialCorrelation | None = None


@dataclass(frozen=True)
class Card:
    """A substance. The constants are read as attributes: ``card.T_c.value``, ``card.T_c.source``.

    A constant that the card does not give raises :class:`InvalidCaseError` when it is read; ask
    :meth:`has` first where it is optional.
    """

    name: str
    file: str
    formula: str
    cas: str | None
    aliases: tuple[str, ...]
    hazards: tuple[str, ...]
    remarks: tuple[str, ...]
    constants: Mapping[str, Constant]
    ideal_gas: tuple[Correlation, ...]
    sources: Mapping[str, str]
    van_der_waals: VanDerWaals | None = None
    virial: Virial | None = None
    volume_shift: Constant | None = None
    line_of: Mapping[str, tuple[int, int]] = field(default_factory=dict, repr=False, compare=False)

    def has(self, key: str) -> bool:
        """Whether the card gives this constant (a key of ``CONSTANT_UNITS``)."""
        return key in self.constants

    def constant(self, key: str) -> Constant:
        """The constant ``key``; :class:`InvalidCaseError` with the place and the remedy if it is absent."""
        try:
            return self.constants[key]
        except KeyError:
            self._absent(key)

    def _absent(self, key: str) -> NoReturn:
        unit = CONSTANT_UNITS.get(key)
        if unit is None:
            raise KeyError(key)
        line, column = self.line_of.get("constants", (1, 1))
        text = (
            f"the card of {self.name!r} gives no {key}, which is needed here; "
            f"add `{key}: {{value: …, unit: {unit}, source: …}}` under `constants`"
        )
        raise InvalidCaseError([Finding(self.file, line, column, text, "missing-constant")]) from None

    @property
    def molar_mass(self) -> Constant:
        """Molar mass, kg/mol."""
        return self.constant("molar_mass")

    @property
    def T_c(self) -> Constant:
        """Critical temperature, K."""
        return self.constant("T_c")

    @property
    def p_c(self) -> Constant:
        """Critical pressure, Pa."""
        return self.constant("p_c")

    @property
    def rho_c(self) -> Constant:
        """Critical molar density, mol/m3."""
        return self.constant("rho_c")

    @property
    def T_triple(self) -> Constant:
        """Triple-point temperature, K."""
        return self.constant("T_triple")

    @property
    def p_triple(self) -> Constant:
        """Triple-point pressure, Pa."""
        return self.constant("p_triple")

    @property
    def T_nbp(self) -> Constant:
        """Boiling temperature at 101325 Pa, K (absent where the substance sublimes at that pressure)."""
        return self.constant("T_nbp")

    @property
    def acentric(self) -> Constant:
        """Pitzer's acentric factor, -log10(p_sat(0.7 T_c)/p_c) - 1."""
        return self.constant("acentric")

    def correlation(self, choice: str | None = None) -> Correlation:
        """The ideal-gas correlation called ``choice``, or the first one, which is the default."""
        if choice is None:
            return self.ideal_gas[0]
        for item in self.ideal_gas:
            if item.name == choice:
                return item
        known = ", ".join(item.name for item in self.ideal_gas)
        line, column = self.line_of.get("ideal_gas", (1, 1))
        text = f"the card of {self.name!r} has no ideal-gas correlation {choice!r}; it has: {known}"
        raise InvalidCaseError([Finding(self.file, line, column, text, "unknown-correlation")])

    def citation(self, key: str) -> str:
        """The full citation behind a source key of this card."""
        return self.sources[key]
