"""The one contract every equation of state fulfils.

Molar SI throughout: T in K, v in m3/mol, rho in mol/m3, p in Pa. Arrays in, arrays of the broadcast
shape out. The residual part and the ideal-gas part are separate objects that add.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import NamedTuple, Protocol, TypeAlias

import numpy as np
from numpy.typing import NDArray

from pathcalc.words import Saying

Array: TypeAlias = NDArray[np.float64]

R_CODATA = 8.314462618
"""Molar gas constant, J/(mol K). CODATA 2018 (Tiesinga et al., Rev. Mod. Phys. 93 (2021) 025010); exact."""

P_STANDARD = 1.0e5
"""Standard-state pressure of the ideal gas, Pa (IUPAC 1982)."""

T_STANDARD = 298.15
"""Reference temperature of the ideal-gas enthalpy and entropy, K."""


class Reduced(NamedTuple):
    """Scaled derivatives of the reduced residual Helmholtz energy alpha(y, rho) = a_res/(R T), y = 1/T.

    ``dij`` is y^i rho^j (d^{i+j} alpha / dy^i drho^j). Scaled derivatives do not depend on the reducing
    constants of an equation, and stay finite at zero density.
    """

    d00: Array
    d01: Array
    d02: Array
    d10: Array
    d11: Array
    d20: Array


class PressureTerms(NamedTuple):
    """p(T, v) and its derivatives: (dp/dT)_v, (dp/dv)_T, (d2p/dT2)_v."""

    p: Array
    p_T: Array
    p_v: Array
    p_TT: Array


class Coexisting(NamedTuple):
    """Coexisting phases, arrays (n,): T (K), p (Pa), volumes of liquid and vapour (m3/mol), dp/dT (Pa/K)."""

    T: Array
    p: Array
    v_liquid: Array
    v_vapour: Array
    dp_dT: Array


class SaturationLine(Protocol):
    """A saturation line that an equation knows beforehand, from ``T_low`` to ``T_top`` (K), ``p_low`` to ``p_top``.

    Above ``T_top`` (Pa: ``p_top``) the critical point is too near to tell the phases apart. Arguments are of shape
    (n,) and lie between those ends.
    """

    T_low: float
    T_top: float
    p_low: float
    p_top: float

    def at_T(self, T: Array) -> Coexisting:
        """Coexisting phases at ``T`` (K)."""
        ...

    def at_p(self, p: Array) -> Coexisting:
        """Coexisting phases at ``p`` (Pa)."""
        ...

    def p_at(self, T: Array) -> Array:
        """The saturation pressure (Pa) alone at ``T`` (K)."""
        ...

    def d2p_dT2(self, T: Array) -> Array:
        """d²p/dT² along the line (Pa/K2) at ``T`` (K)."""
        ...

    def energies(self, T: Array) -> tuple[Array, Array, Array]:
        """D10 of liquid and vapour and D00 of the liquid at ``T`` (K)."""
        ...

    def T_near(self, v: Array) -> Array:
        """About (within some 10^-3) where one phase has the volume ``v`` (m3/mol), K; ``T_low`` beyond the line."""
        ...


class PressureLimits(Protocol):
    """The ends of an equation in pressure."""

    p_max: float
    """The highest pressure (Pa) at which anything is computed."""

    def melting_pressure(self, T: Array) -> Array:
        """The pressure (Pa) above which the substance is solid at ``T`` (K), NaN where no melting line is known."""
        ...

    def dew_and_bubble(self, T: Array) -> tuple[Array, Array] | None:
        """Dew and bubble pressure (Pa) at ``T`` (K) of a mixture that is treated as one component; else None."""
        ...


class Residual(Protocol):
    """The residual part of an equation of state.

    Equations with more than one loop inside the dome know their ``coexistence`` and give volumes by
    ``volume_of``; those whose volumes follow in closed form have neither (None).
    """

    @property
    def coexistence(self) -> SaturationLine | None:
        """The saturation line, where it need not be solved for; None where it is found from ``volume_roots``."""
        ...

    @property
    def limits(self) -> PressureLimits | None:
        """Where the equation ends in pressure: None where it does not say."""
        ...

    def volume_of(self, T: Array, p: Array, branch: Array | None = None) -> tuple[Array, Array] | None:
        """The volume (m3/mol) of the stable phase at ``T``, ``p``, shape (n,), and ln(p/p_sat); or None, see above.

        NaN where there is none, and where there is no saturation. ``branch`` asks for liquid (−1) or vapour (1) where
        there are both, and 0 for the stable one.
        """
        ...

    def reduced(self, T: Array, rho: Array) -> Reduced:
        """Scaled derivatives at temperature ``T`` (K) and molar density ``rho`` (mol/m3)."""
        ...

    def pressure(self, T: Array, v: Array) -> PressureTerms:
        """Total pressure and its derivatives at ``T`` (K), ``v`` (m3/mol), written from p(T, v) itself."""
        ...

    def pressure_curvature(self, T: Array, v: Array) -> Array:
        """(d2p/dT2)_v alone, Pa/K2: the integrand of c_v along an isotherm, cheap to call."""
        ...

    def volume_roots(self, T: Array, p: Array) -> Array:
        """All mechanically stable volumes (m3/mol), shape (2, n), ascending, NaN where there is none.

        Row 0 is the liquid-like root, row 1 the vapour-like one. Where only one root exists it stands in
        row 1 if it is larger than the critical volume, else in row 0.
        """
        ...

    def v_min(self, T: Array) -> Array:
        """The smallest volume at which the equation may be evaluated, m3/mol."""
        ...

    def saturation_start(self, T: Array) -> Array:
        """A start for the saturation pressure (Pa) at ``T`` below critical; NaN where there is no dome."""
        ...


class IdealPart(Protocol):
    """Ideal-gas heat capacity and its integrals, divided by R."""

    @property
    def T_min(self) -> float:
        """The lowest temperature the source of the heat capacity states, K."""
        ...

    @property
    def T_max(self) -> float:
        """The highest temperature the source of the heat capacity states, K."""
        ...

    @property
    def kinks(self) -> tuple[float, ...]:
        """Temperatures at which the heat capacity or its slope jumps, K, ascending."""
        ...

    def cp0_R(self, T: Array) -> Array:
        """c_p0/R."""
        ...

    def h0_R(self, T: Array) -> Array:
        """(h0(T) - h0(298.15 K))/R, K."""
        ...

    def s0_R(self, T: Array) -> Array:
        """(s0(T, 1 bar) - s0(298.15 K, 1 bar))/R."""
        ...

    def terms(self, T: Array) -> tuple[Array, Array, Array]:
        """The three above at once, in that order."""
        ...


class Parameter(NamedTuple):
    """One constant of an equation as the report shows it; ``symbol`` is LaTeX, ``value`` SI."""

    symbol: str
    value: float
    unit: str
    source: str | Saying


@dataclass(frozen=True)
class EquationInfo:
    """What a report says about an equation: title, formula (LaTeX), constants, citation, range in words.

    Texts of the catalogue of words are sayings. ``uncertainty`` holds what its source states, a line a property and
    region.
    """

    name: str
    title: str | Saying
    formula: str
    parameters: tuple[Parameter, ...]
    source: str | Saying
    range_text: str | Saying
    uncertainty: tuple[str, ...] = ()


@dataclass(frozen=True)
class Model:
    """A substance with an equation of state: what the rooms above compute with.

    Critical constants are those of the equation itself (``v_c`` in m3/mol). ``T_range`` is the stated range
    of validity (beyond it: a warning), ``T_limits`` the range in which anything is computed at all (beyond
    it: an error). ``h_offset`` (J/mol) and ``s_offset`` (J/(mol K)) are added to enthalpy and entropy to set
    the datum. ``has_dome`` is False where the equation has no vapour-liquid coexistence (ideal gas, virial).
    """

    name: str
    equation: str
    M: float
    ideal: IdealPart
    residual: Residual
    T_c: float
    p_c: float
    v_c: float
    T_triple: float
    omega: float
    T_range: tuple[float, float]
    T_limits: tuple[float, float]
    p_max: float
    has_dome: bool
    R: float = R_CODATA
    h_offset: float = 0.0
    s_offset: float = 0.0
    notes: tuple[str, ...] = field(default=())
    info: EquationInfo | None = field(default=None, compare=False)
