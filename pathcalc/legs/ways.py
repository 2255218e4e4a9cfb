"""Segments that several kinds of legs go along, between two places."""

from __future__ import annotations

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.legs.integration.families import Constant, HeatedWithDrop, Isochore, Isotherm, Lanes, Polytrope
from pathcalc.legs.integration.pick import take_points
from pathcalc.legs.integration.segments import Segment
from pathcalc.legs.run import Place


def isotherm(a: Place, b: Place, *, own: bool = True) -> Segment:
    """At the temperature of ``a``."""
    return Segment(Isotherm(a.T), a.points, b.points, own)


def isobar(a: Place, b: Place, *, own: bool = True) -> Segment:
    """At the pressure of ``a``."""
    return Segment(Polytrope(np.zeros_like(a.p), np.log(a.p)), a.points, b.points, own)


def isochore(a: Place, b: Place, *, own: bool = True) -> Segment:
    """At the volume of ``a``."""
    return Segment(Isochore(a.v), a.points, b.points, own)


def constant(key: str, a: Place, b: Place, *, own: bool = True) -> Segment:
    """At the entropy, enthalpy or internal energy (``key`` s, h, u) of ``a``."""
    return Segment(Constant(key, getattr(a, key)), a.points, b.points, own)


def heated(a: Place, b: Place, *, own: bool = True) -> list[Segment]:
    """At constant pressure in the lanes without a drop, else with the drop spread in proportion to the heat."""
    level = a.p == b.p
    segments = []
    for flat in (True, False):
        lanes: Lanes = np.flatnonzero(level == flat).astype(np.intp)
        if lanes.size == 0:
            continue
        start, stop = take_points(a.points, lanes), take_points(b.points, lanes)
        if flat:
            family: Polytrope | HeatedWithDrop = Polytrope(np.zeros(lanes.size), np.log(start.p))
        else:
            family = HeatedWithDrop(a.p[lanes], a.h[lanes], b.p[lanes], b.h[lanes])
        segments.append(Segment(family, start, stop, own, lanes=lanes))
    return segments


def polytrope(a: Place, b: Place, exponent: Array) -> list[Segment]:
    """Along p v^n; lanes with n = 0, which is an isobar, apart."""
    constant = np.log(a.p) + exponent * np.log(a.v)
    segments = []
    for flat in (True, False):
        lanes: Lanes = np.flatnonzero((exponent == 0.0) == flat).astype(np.intp)
        if lanes.size:
            family = Polytrope(exponent[lanes], constant[lanes])
            start, stop = take_points(a.points, lanes), take_points(b.points, lanes)
            segments.append(Segment(family, start, stop, lanes=lanes))
    return segments
