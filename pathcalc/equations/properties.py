"""Single-phase properties of every equation, derived once from the contract.

With the scaled derivatives D_ij of α^r(y, ρ), y = 1/T (see ``contract.Reduced``), per mole:

    p  = R T ρ (1 + D01)                         s = R [s0/R + ln(v p°/(R T)) + D10 − D00]
    h  = R [h0/R + T (D10 + D01)]                c_v = R [c_p0/R − 1 − D20]
    (∂p/∂T)_v = R ρ (1 + D01 − D11)              (∂p/∂v)_T = −R T ρ² (1 + 2 D01 + D02)

These are the relations of R. Span, Multiparameter Equations of State (Springer 2000), table 3.9, written with
scaled derivatives. Reference: p° = 1 bar, h0 and s0 zero at 298.15 K, plus the datum offsets of the model.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from pathcalc.equations.contract import P_STANDARD, Array, Model, Reduced


class Thermal(NamedTuple):
    """p (Pa), u, h (J/mol), s (J/(mol K)), (∂p/∂T)_v, (∂p/∂v)_T, c_v (J/(mol K)) at (T, v)."""

    p: Array
    u: Array
    h: Array
    s: Array
    p_T: Array
    p_v: Array
    cv: Array

    def cp(self, T: Array) -> Array:
        """c_p = c_v − T (∂p/∂T)_v²/(∂p/∂v)_T, J/(mol K)."""
        return self.cv - T * self.p_T * self.p_T / self.p_v


class Helmholtz(NamedTuple):
    """p (Pa), u, h, a, g (J/mol), s (J/(mol K))."""

    p: Array
    u: Array
    h: Array
    s: Array
    a: Array
    g: Array


class Full(NamedTuple):
    """All single-phase properties; molar SI, sound speed in m/s, Joule–Thomson coefficient in K/Pa."""

    p: Array
    u: Array
    h: Array
    s: Array
    a: Array
    g: Array
    cv: Array
    cp: Array
    sound_speed: Array
    Z: Array
    expansivity: Array
    compressibility: Array
    joule_thomson: Array
    ln_phi: Array


def thermal(model: Model, T: Array, v: Array) -> Thermal:
    """What Newton's method needs at (T in K, v in m3/mol), from one call of the equation."""
    rho = 1.0 / v
    return _thermal(model, T, v, rho, model.residual.reduced(T, rho))


def _thermal(model: Model, T: Array, v: Array, rho: Array, d: Reduced) -> Thermal:
    R, ideal = model.R, model.ideal
    Rrho = R * rho
    z = 1.0 + d.d01
    p = T * Rrho * z
    cp0_R, h0_R, s0_R = ideal.terms(T)
    h = R * (h0_R + T * (d.d10 + d.d01)) + model.h_offset
    u = h - R * T * z
    s = R * (s0_R + np.log(v * (P_STANDARD / R) / T) + (d.d10 - d.d00)) + model.s_offset
    cv = R * (cp0_R - 1.0 - d.d20)
    p_T = Rrho * (z - d.d11)
    p_v = -T * Rrho * rho * (z + d.d01 + d.d02)
    return Thermal(p, u, h, s, p_T, p_v, cv)


def helmholtz(model: Model, T: Array, v: Array) -> Helmholtz:
    """p, u, h, s, a, g at (T in K, v in m3/mol)."""
    t = thermal(model, T, v)
    a = t.u - T * t.s
    return Helmholtz(t.p, t.u, t.h, t.s, a, t.h - T * t.s)


def full(model: Model, T: Array, v: Array, p: Array | None = None) -> Full:
    """Every single-phase property at (T in K, v in m3/mol).

    ``p`` (Pa) is the pressure if it is known already: a liquid's pressure from its volume is the small
    difference of large terms, and Z and ln φ gain from the known one. The Joule–Thomson coefficient μ = [T
    (∂v/∂T)_p − v]/c_p is formed from −v (D01 + D11 + D02)/(1 + 2 D01 + D02)/c_p, which stays exact at low
    density.
    """
    rho = 1.0 / v
    d = model.residual.reduced(T, rho)
    t = _thermal(model, T, v, rho, d)
    R = model.R
    stiff = 1.0 + 2.0 * d.d01 + d.d02  # (dp/drho)_T/(R T)
    thermal_slope = 1.0 + d.d01 - d.d11
    cp = t.cv + R * thermal_slope * thermal_slope / stiff
    with np.errstate(invalid="ignore", divide="ignore"):
        if p is None:
            p, h = t.p, t.h
            Z, ln_z = 1.0 + d.d01, np.log1p(d.d01)
        else:
            Z = p * v / (R * T)
            ln_z = np.log(Z)
            h = t.u + p * v
        sound_speed = np.sqrt(R * T * (cp / t.cv) * stiff / model.M)
    return Full(
        p=p,
        u=t.u,
        h=h,
        s=t.s,
        a=t.u - T * t.s,
        g=h - T * t.s,
        cv=t.cv,
        cp=cp,
        sound_speed=sound_speed,
        Z=Z,
        expansivity=thermal_slope / (T * stiff),
        compressibility=v / (R * T * stiff),
        joule_thomson=-v * (d.d01 + d.d11 + d.d02) / (stiff * cp),
        ln_phi=d.d00 + (Z - 1.0) - ln_z,
    )
