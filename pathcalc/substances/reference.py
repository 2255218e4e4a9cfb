"""What the card of a published equation of state says, as typed and frozen values.

All numbers are molar SI: K, Pa, mol/m3, J/(mol K). Coefficients of the terms are dimensionless.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType

TERM_COLUMNS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "power": ("n", "d", "t"),
        "exponential": ("n", "d", "t", "l", "g"),
        "double-exponential": ("n", "d", "t", "g", "l", "h", "m"),
        "gaussian": ("n", "d", "t", "eta", "beta", "gamma", "epsilon"),
        "gao": ("n", "d", "t", "eta", "beta", "gamma", "epsilon", "b"),
        "non-analytic": ("n", "a", "b", "beta", "A", "B", "C", "D"),
    }
)
"""The term forms a card may use, each with the columns of its table."""

TERM_DEFAULTS: Mapping[str, tuple[float, ...]] = MappingProxyType({"exponential": (1.0,)})
"""What the last columns are where a row leaves them out."""

ANCILLARY_FORMS = ("exponential", "exponential-over-T", "linear")
MELTING_FORMS = ("simon", "powers-of-ratio", "powers-of-distance")

QUANTITIES = ("density", "heat capacity", "sound speed", "vapour pressure", "pressure", "general")
"""What an uncertainty may be stated of."""


@dataclass(frozen=True)
class TermTable:
    """Terms of one form: a key of ``TERM_COLUMNS`` and rows with those columns."""

    form: str
    rows: tuple[tuple[float, ...], ...]


@dataclass(frozen=True)
class Point:
    """Temperature (K), pressure (Pa) and molar density (mol/m3); NaN where not given."""

    T: float
    p: float
    rho: float


@dataclass(frozen=True)
class Stated:
    """Where the equation is valid: temperatures (K), largest pressure (Pa) and density (mol/m3)."""

    T_min: float
    T_max: float
    p_max: float
    rho_max: float
    note: str | None = None


@dataclass(frozen=True)
class Limits:
    """How far the equation is extrapolated: temperatures (K) and largest pressure (Pa), and why so far."""

    T_min: float
    T_max: float
    p_max: float
    source: str


@dataclass(frozen=True)
class Uncertainty:
    """A stated uncertainty: of what (one of ``QUANTITIES``), where, how much, all in words."""

    of: str
    where: str
    value: str


@dataclass(frozen=True)
class Ancillary:
    """A property at saturation as a function of temperature alone, a start for the solution of the equation.

    With θ = 1 − T/``T_r`` and S = Σ n θ^t over ``rows`` of n, t: ``value_r`` e^S (form "exponential"),
    ``value_r`` e^(S T_r/T) ("exponential-over-T"), ``value_r`` (1 + S) ("linear").
    """

    form: str
    T_r: float
    value_r: float
    rows: tuple[tuple[float, float], ...]
    T_min: float
    T_max: float
    source: str


@dataclass(frozen=True)
class MeltingPart:
    """A stretch of the melting line from ``T_min`` to ``T_max`` (K); ``rows`` of a, t; p_0 in Pa.

    With x = T/``T_0``: p_0 + Σ a (x^t − 1), a in Pa (form "simon"); p_0 (1 + Σ a (x^t − 1))
    ("powers-of-ratio"); p_0 (1 + Σ a (x − 1)^t) ("powers-of-distance").
    """

    form: str
    T_0: float
    p_0: float
    rows: tuple[tuple[float, float], ...]
    T_min: float
    T_max: float
    source: str


@dataclass(frozen=True)
class CheckValue:
    """A state that a publication prints for this equation: what is given, what is printed, as texts with units."""

    given: Mapping[str, str]
    printed: Mapping[str, str]
    source: str


CHECK_GIVEN = {"T": "temperature", "p": "pressure", "rho": "density"}
CHECK_PRINTED = {
    "p": "pressure",
    "rho": "density",
    "cv": "specific-entropy",
    "cp": "specific-entropy",
    "sound_speed": "speed",
}
"""What a check value may give and print, with its dimension."""


@dataclass(frozen=True)
class Reference:
    """A published equation of state of one substance; see ``reference_reader`` for the card's form.

    ``critical`` is the point the paper gives, ``summit`` the one where the equation itself has
    (∂p/∂ρ)_T = (∂²p/∂ρ²)_T = 0: the top of its dome. ``ideal_gas`` names the correlation of the substance's card
    that is the ideal part of the paper.
    """

    substance: str
    file: str
    title: str
    source: str
    why: str
    gas_constant: float
    molar_mass: float
    reducing: Point
    critical: Point
    summit: Point
    triple: Point
    valid: Stated
    limits: Limits
    uncertainty: tuple[Uncertainty, ...]
    ideal_gas: str
    terms: tuple[TermTable, ...]
    ancillaries: Mapping[str, Ancillary]
    melting: tuple[MeltingPart, ...]
    sources: Mapping[str, str]
    notes: tuple[str, ...] = ()
    table: str | None = None
    acentric: float | None = None
    check_values: tuple[CheckValue, ...] = ()
    line_of: Mapping[str, tuple[int, int]] = field(default_factory=dict, repr=False, compare=False)

    def citation(self, key: str) -> str:
        """The full citation behind a source key of this card."""
        return self.sources[key]
