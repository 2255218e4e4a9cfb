"""States of an independent general-purpose library, in SI per kilogram, to hold legs on reference equations to."""

from __future__ import annotations

from itertools import pairwise
from typing import Any, NamedTuple

import CoolProp.CoolProp as CP
from scipy.integrate import quad
from scipy.optimize import brentq

NAMES = {
    "water": "Water", "carbon-dioxide": "CarbonDioxide", "nitrogen": "Nitrogen", "propane": "n-Propane",
    "r-134a": "R134a", "ammonia": "Ammonia", "methane": "Methane", "hydrogen": "Hydrogen",
}  # fmt: skip

GAS_CONSTANT = {"ammonia": 8.314462618 / 8.3144598}
"""The library's file of ammonia has another gas constant than the check values of the paper need.

At equal T and density p, u, h and s are proportional to it, so that the library's values can be brought to the other.
"""


class State(NamedTuple):
    """K, Pa, m3/kg, J/kg, J/kg, J/(kg K), quality (NaN outside the dome)."""

    T: float
    p: float
    v: float
    u: float
    h: float
    s: float
    x: float

    @property
    def g(self) -> float:
        """Gibbs energy, J/kg."""
        return self.h - self.T * self.s

    @property
    def a(self) -> float:
        """Helmholtz energy, J/kg."""
        return self.u - self.T * self.s


class Library:
    """States of one substance by pairs of properties."""

    def __init__(self, substance: str) -> None:
        self.substance = substance
        self._state = CP.AbstractState("HEOS", NAMES[substance])
        self._scale = GAS_CONSTANT.get(substance, 1.0)
        self.T_c, self.M = self._state.T_critical(), self._state.molar_mass()
        self.R = self._scale * self._state.gas_constant() / self.M

    def _read(self) -> State:
        s, k = self._state, self._scale
        x = s.Q() if s.phase() == CP.iphase_twophase else float("nan")
        return State(s.T(), k * s.p(), 1.0 / s.rhomass(), k * s.umass(), k * s.hmass(), k * s.smass(), x)

    def of(self, **given: float) -> State:
        """The state of two of T, p, v, h, s, x."""
        k = self._scale
        value = {key: 1.0 / given[key] if key == "v" else given[key] / (k if key in "phs" else 1.0) for key in given}
        keys = {"T": CP.iT, "p": CP.iP, "v": CP.iDmass, "h": CP.iHmass, "s": CP.iSmass, "x": CP.iQ}
        (a, b) = given
        self._state.update(*CP.generate_update_pair(keys[a], value[a], keys[b], value[b]))
        return self._read()

    def one_phase(self, T: float, v: float) -> State:
        """The equation itself at T and v, without a look at the dome."""
        self._state.specify_phase(CP.iphase_gas)
        self._state.update(CP.DmassT_INPUTS, 1.0 / v, T)
        self._state.unspecify_phase()
        s, k = self._state, self._scale
        return State(T, k * s.p(), v, k * s.umass(), k * s.hmass(), k * s.smass(), float("nan"))

    def at_our(self, points: Any) -> State:
        """The equation itself at the temperature and volumes that the program found, mixed by the lever rule."""
        T, v, x = (float(a[0]) for a in (points.T, points.v, points.x))
        if x != x:
            return self.one_phase(T, v / self.M)
        low, high = (self.one_phase(T, float(a[0]) / self.M) for a in (points.v_liquid, points.v_vapour))
        mixed = (((1.0 - x) * a + x * b) for a, b in zip(low[2:6], high[2:6], strict=True))
        return State(T, high.p, *mixed, x)

    def at_volume(self, v: float, u: float, T_high: float) -> State:
        """The state of volume v and internal energy u below a temperature."""
        T = brentq(lambda T: self.of(T=T, v=v).u - u, 1.001 * self._state.Ttriple(), T_high, xtol=1e-12, rtol=1e-14)
        return self.of(T=T, v=v)

    def saturation_v_dp(self, x: float, T_a: float, T_b: float) -> float:
        """Integral of v dp along the saturation line at constant quality."""

        def integrand(T: float) -> float:
            low, high = self.of(T=T, x=0.0), self.of(T=T, x=1.0)
            return (low.v + x * (high.v - low.v)) * (high.s - low.s) / (high.v - low.v)

        return float(quad(integrand, T_a, T_b, epsrel=1e-10)[0])

    def heat_over_T(self, a: State, b: State) -> float:
        """Integral of dh/T along p and h in proportion from subcooled liquid to superheated vapour."""

        def along(y: float) -> State:
            return self.of(h=a.h + y * (b.h - a.h), p=a.p + y * (b.p - a.p))

        def edge(y: float, x: float) -> float:
            return a.h + y * (b.h - a.h) - self.of(p=a.p + y * (b.p - a.p), x=x).h

        cuts = [0.0, *(brentq(edge, 0.0, 1.0, args=(x,), xtol=1e-13) for x in (0.0, 1.0)), 1.0]
        parts = (quad(lambda y: 1.0 / along(y).T, *ends, epsrel=1e-11)[0] for ends in pairwise(cuts))
        return (b.h - a.h) * float(sum(parts))
