"""What a solved path tells its readers beside the numbers: worked steps, curves, the basis of the fluid.

Plain frozen records. Arrays are one-dimensional, SI, per kilogram (T K, p Pa, v m3/kg, s J/(kg K), h and u
J/kg); the arrays of one record have one length.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, NamedTuple

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray


class StepTable(NamedTuple):
    """Values a step is summed from: LaTeX heads and rows of numbers in LaTeX, one text a column."""

    heads: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


@dataclass(frozen=True)
class Step:
    """One step of a worked calculation: the symbols, then the numbers, then the result.

    ``formula`` and ``numbers`` are LaTeX without dollar signs (``numbers`` is the formula with the case's
    numbers put in). ``result`` is LaTeX when it holds a backslash, ``^``, ``_`` or a brace, plain text
    otherwise. An empty string leaves that line out. ``table`` holds the values that ``numbers`` are taken from.
    """

    title: str
    formula: str = ""
    numbers: str = ""
    result: str = ""
    source: str = ""
    note: str = ""
    table: StepTable | None = None


class Part(NamedTuple):
    """One figure a property is worked out from: a key, its symbol (LaTeX), its unit and its value in that unit."""

    key: str
    symbol: str
    unit: str
    value: float


@dataclass(frozen=True)
class StateParts:
    """What the properties of a state are put together from; ``wet`` where two phases coexist."""

    state: str
    wet: bool
    parts: tuple[Part, ...]
    datum: tuple[float, float] = (0.0, 0.0)
    """Constants in h° (kJ/kg) and s° (kJ/(kg K)) that the datum fixes, from the ideal gas at 298.15 K and 1 bar."""

    def __getitem__(self, key: str) -> float:
        """The value of a part by its key. KeyError if there is none."""
        for part in self.parts:
            if part.key == key:
                return part.value
        raise KeyError(key)


@dataclass(frozen=True)
class HandSum:
    """A stretch of a leg as a sum that a person can do, K, kPa, m3/kg, kJ/kg, kJ/(kg K).

    In one phase: an odd number of points at equal steps of the coordinate ξ from 0 to 1, with the integrand ds/dξ,
    for Simpson's rule. In the dome at constant temperature: no points, but the Clapeyron product.
    ``simpson`` and ``quadrature`` are the change of entropy both ways, kJ/(kg K).
    """

    leg: str
    number: int
    phase: str
    rows: tuple[tuple[float, ...], ...]
    """ξ, T, p, v, c_v, (dp/dT)_v, dT/dξ, dv/dξ, ds/dξ at each point."""
    simpson: float
    quadrature: float
    clapeyron: tuple[float, float, float, float, float] | None = None
    """T, dp_sat/dT, v at the beginning and at the end, p_sat."""


@dataclass(frozen=True, eq=False)
class CurvePiece:
    """A stretch of a leg within one phase region, in the order the path runs."""

    phase: str
    T: NDArray[np.float64]
    p: NDArray[np.float64]
    v: NDArray[np.float64]
    s: NDArray[np.float64]
    h: NDArray[np.float64]
    u: NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Curve:
    """The way of one leg through the state surface, for diagrams.

    ``states`` is False where the fluid does not pass through the states of the line: the line is then only the
    way of integration between two states. ``steps`` is the number of stretches that way is laid out in.
    """

    leg: str
    pieces: tuple[CurvePiece, ...]
    states: bool = True
    steps: int = 1


@dataclass(frozen=True, eq=False)
class Isoline:
    """A line of one pressure (``key`` "p") or one temperature ("T") through a state; pieces by phase region."""

    key: str
    value: float
    pieces: tuple[CurvePiece, ...]


@dataclass(frozen=True, eq=False)
class Dome:
    """The boundary of the two-phase region, ascending in T, and the critical point."""

    T: NDArray[np.float64]
    p: NDArray[np.float64]
    v_l: NDArray[np.float64]
    v_v: NDArray[np.float64]
    s_l: NDArray[np.float64]
    s_v: NDArray[np.float64]
    h_l: NDArray[np.float64]
    h_v: NDArray[np.float64]
    T_c: float
    p_c: float
    v_c: float
    s_c: float
    h_c: float


class Verified(NamedTuple):
    """A printed value of a publication, and what the equation gives now, in the printed unit."""

    quantity: str
    at: str
    printed: str
    computed: float
    agrees: bool
    source: str


class Constant(NamedTuple):
    """One constant of the fluid. ``symbol`` is LaTeX, ``text`` says what it is, ``value`` is in ``unit``."""

    symbol: str
    text: str
    value: float
    unit: str
    source: str


@dataclass(frozen=True)
class Basis:
    """What the fluid was taken to be: its constants, its equation of state, its ideal-gas heat capacity.

    ``parameters`` are further rows of the same form as ``constants`` (the equation's own coefficients where
    there are few enough to print). ``uncertainty`` is what the equation's source states, a line a property
    and region. ``hazards`` are the card's keywords: flammable, toxic, asphyxiant, oxidiser, cryogenic and so on.
    """

    substance: str
    formula: str
    hazards: tuple[str, ...]
    constants: tuple[Constant, ...]
    equation_title: str
    equation_formula: str
    parameters: tuple[Constant, ...]
    equation_source: str
    range_text: str
    ideal_gas_text: str
    ideal_gas_source: str
    ideal_gas_range: str
    ideal_gas_formula: str = ""
    ideal_gas_parameters: tuple[Constant, ...] = ()
    remarks: tuple[str, ...] = ()
    uncertainty: tuple[str, ...] = ()
    equation_note: str = ""
